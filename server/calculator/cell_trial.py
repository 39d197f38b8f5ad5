"""A kind of cell tried at the numbers put in, with every doubted value of its model an input."""

from dataclasses import replace

from server.calculator.charge import density_a_m2
from server.calculator.inputs import Input
from server.calculator.sum import Basis, Case, ModelDoubt, NotServed, Numbers
from server.calculator.texts import N_
from server.science.electrolyte.conductivity import (
    CONDUCTIVITIES,
    Conductivity,
    plant_conductivity,
)
from server.science.equilibrium.tables import DEFAULT_TABLE, PotentialTable, potential_table
from server.science.processes import Process
from server.science.uncertainty.propagation import standard_from_limit
from server.science.units import kelvin_from_degc, metres_from_millimetres
from server.science.voltage.cells import CELL_MODELS, cell_model
from server.science.voltage.models import CellModel, stated_values, with_stated
from server.science.voltage.sensitivity import Sensitivities, sensitivities
from server.science.voltage.terms import VoltageTerms, bath_conductivity_s_m, cell_terms
from server.storage.plant import SectionTerms

CONDUCTIVITY_S_M = Input(
    "conductivity_s_m",
    N_("Conductivity of the electrolyte"),
    "S/m",
    0,
    200,
    is_above=True,
    is_needed=False,
    hint=N_("left blank, worked out from metal, acid and temperature"),
)

COATED = ", coated anodes"
LEAD, COATED_TITANIUM = "lead", "coated"

FACTOR = "conductivity_factor"

# Common practice: of a plant's own line of conductivity that states no accuracy.
OWN_LINE_U_SHARE = 0.05

_LABELS = {
    "anode.point.overpotential_v": N_("anode overpotential, as known"),
    "anode.point.per_kelvin": N_("its change with temperature"),
    "anode.slope_v": N_("Tafel slope of the anode"),
    "anode.driven_transfer": N_("transfer coefficient of the anode"),
    "anode.reverse_transfer": N_("transfer coefficient of the anode, backwards"),
    "cathode.point.overpotential_v": N_("cathode overpotential, as known"),
    "cathode.point.per_kelvin": N_("change of the cathode's with temperature"),
    "cathode.driven_transfer": N_("transfer coefficient of the cathode"),
    "cathode.reverse_transfer": N_("transfer coefficient of the cathode, backwards"),
    "contact_ohm_m2": N_("contacts and bars, as known"),
    "separator_ohm_m2": N_("bag or diaphragm, as known"),
    "gas_share": N_("gas in the gap"),
    "reversible_shift_v": N_("activities of the solution"),
    FACTOR: N_("correlation of the conductivity"),
}


_UNITS = {"_v": "V", "_ohm_m2": "Ω·m²", "per_kelvin": "1/K"}


def _unit_of(name: str) -> str:
    return next((unit for ending, unit in _UNITS.items() if name.endswith(ending)), "")


def anodes_of(kind: Process) -> dict[str, str]:
    """Kinds of anodes that there are models for; empty where there is one only."""
    if f"{kind.name}{COATED}" not in CELL_MODELS:
        return {}
    return {LEAD: N_("lead alloy"), COATED_TITANIUM: N_("coated titanium")}


def check_model(basis: Basis) -> None:
    """Refuse a process of which there is no model."""
    if basis.process.name not in CELL_MODELS:
        raise NotServed(basis.process.name, served_processes())


def served_processes() -> list[str]:
    """The processes of which there are models."""
    return [name for name in CELL_MODELS if COATED not in name]


class CellTrial:
    """One kind of cell at the numbers of a case and around them.

    What is worked out at a set of numbers is kept: every output asks for the same ones.
    """

    def __init__(self, case: Case) -> None:
        basis = case.basis
        name = basis.process.name + (COATED if basis.choice == COATED_TITANIUM else "")
        self.model = cell_model(name)
        self.table: PotentialTable = potential_table(basis.table) if basis.table else DEFAULT_TABLE
        self.own_line = _own_line(basis.terms)
        self._kept: dict[tuple[float, ...], VoltageTerms] = {}
        self._kept_slopes: dict[tuple[float, ...], Sensitivities] = {}

    def terms(self, values: Numbers) -> VoltageTerms:
        """The terms of the voltage."""
        key = tuple(values.values())
        if key not in self._kept:
            self._kept[key] = cell_terms(
                self._model_at(values),
                *_conditions(values),
                conductivity=self.conductivity_at(values),
                table=self.table,
                conductivity_factor=values.get(FACTOR, 1.0),
            )
        return self._kept[key]

    def slopes(self, values: Numbers) -> Sensitivities:
        """What each input does to the terms."""
        key = tuple(values.values())
        if key not in self._kept_slopes:
            self._kept_slopes[key] = sensitivities(
                self._model_at(values),
                *_conditions(values),
                conductivity=self.conductivity_at(values),
                table=self.table,
            )
        return self._kept_slopes[key]

    def between_plates_s_m(self, values: Numbers) -> float:
        """Conductivity of what is in the gap, bubbles counted."""
        _, kelvin, metal_g_l, acid_g_l, _ = _conditions(values)
        found = bath_conductivity_s_m(
            self._model_at(values), metal_g_l, acid_g_l, kelvin, self.conductivity_at(values)
        )
        return float(found) * values.get(FACTOR, 1.0)

    def conductivity_at(self, values: Numbers) -> Conductivity | None:
        """What was typed, else the plant's own line; None for the correlation of the model."""
        if "conductivity_s_m" in values:
            kelvin = float(kelvin_from_degc(values["temperature_degc"]))
            return plant_conductivity(values["conductivity_s_m"], kelvin, u_share=0.0)
        return self.own_line

    def correlation(self) -> Conductivity:
        """The plant's own line, else the correlation of the model."""
        return self.own_line or CONDUCTIVITIES[self.model.conductivity_of]

    def doubts(self, case: Case) -> list[ModelDoubt]:
        """How far each value of the model is believed."""
        found = [
            ModelDoubt(
                name,
                _LABELS.get(name, name),
                stated.value,
                stated.standard_uncertainty,
                _unit_of(name),
            )
            for name, stated in stated_values(self.model)
            if stated.standard_uncertainty > 0
        ]
        if not case.has("conductivity_s_m"):
            share = self.correlation().u_share
            found.append(ModelDoubt(FACTOR, _LABELS[FACTOR], 1.0, share))
        return found

    def _model_at(self, values: Numbers) -> CellModel:
        """The model with its doubted values where these numbers have them."""
        model = self.model
        for name, stated in stated_values(self.model):
            if values.get(name, stated.value) != stated.value:
                model = with_stated(model, name, replace(stated, value=values[name]))
        return model


def _conditions(values: Numbers) -> tuple[float, float, float, float, float]:
    """Current density, temperature, metal, acid and gap, in the units of the science."""
    return (
        density_a_m2(values),
        float(kelvin_from_degc(values["temperature_degc"])),
        values["metal_g_l"],
        values["acid_g_l"],
        float(metres_from_millimetres(values["gap_mm"])),
    )


def _own_line(terms: SectionTerms | None) -> Conductivity | None:
    """The conductivity that a section states."""
    if terms is None or terms.conductivity_s_m is None or terms.conductivity_at_k is None:
        return None
    accuracy = terms.conductivity_accuracy
    return Conductivity(
        name="the plant's own",
        constant_s_m=terms.conductivity_s_m,
        per_metal_g_l=terms.conductivity_per_metal_g_l or 0.0,
        per_acid_g_l=terms.conductivity_per_acid_g_l or 0.0,
        per_kelvin=terms.conductivity_per_k or 0.0,
        reference_k=terms.conductivity_at_k,
        u_share=OWN_LINE_U_SHARE if accuracy is None else float(standard_from_limit(accuracy)),
        ranges=(),
        status="plant",
        source="set-up of the section",
    )
