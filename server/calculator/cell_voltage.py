"""Expected cell voltage: its terms, what each answers to, and what the meter has beyond them."""

from collections.abc import Callable
from dataclasses import replace

from server.calculator.cell_trial import (
    CONDUCTIVITY_S_M,
    CellTrial,
    anodes_of,
    check_model,
    served_processes,
)
from server.calculator.charge import PROPAGATION, density_a_m2
from server.calculator.inputs import Input
from server.calculator.out_of_range import outside_ranges
from server.calculator.quantities import (
    ACID_G_L,
    CATHODE_AREA_M2,
    CATHODES,
    CURRENT_DENSITY_A_M2,
    CURRENT_KA,
    METAL_G_L,
    TEMPERATURE_DEGC,
    VOLTS,
)
from server.calculator.sum import Case, ModelDoubt, Numbers, Option, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said, Word
from server.science.units import (
    kelvin_from_degc,
    metres_from_millimetres,
    microohm_from_ohm,
    millivolts_from_volts,
)
from server.science.voltage.overpotentials import StatedValue
from server.science.voltage.sensitivity import Sensitivities, TermSlopes

GAP_MM = Input("gap_mm", N_("Gap between the faces"), "mm", 0, 500, is_above=True)
MEASURED = replace(
    VOLTS,
    label=N_("Cell voltage by the meter"),
    is_needed=False,
    hint=N_("for what is left beyond the terms"),
)

_STATUS = {
    "looked up": N_("looked up"),
    "from memory": N_("from memory"),
    "common practice": N_("common practice"),
    "chosen": N_("chosen"),
    "plant": N_("the plant's own"),
}
"""How sure a value of the models is."""

_PER_A_M2, _PER_G_L = 100.0, 10.0


def _note(stated: StatedValue) -> Said:
    parts: dict[str, Part] = {"status": Word(_STATUS[stated.status]), "source": stated.source}
    return Said("%(status)s: %(source)s", parts)


def _outputs(case: Case) -> list[Output]:
    trial = CellTrial(case)
    terms = trial.terms(case.values)
    numbers: dict[str, Part] = {name: float(term) for name, term in terms.stated().items()}
    numbers["total"] = float(terms.total_v)
    figures = [
        Output(
            "total_v",
            N_("expected cell voltage"),
            "V",
            "V = E + η_a + η_c + i · d / κ + i · r",
            Said(
                "%(reversible_v)s V + %(anode_v)s V + %(cathode_v)s V + %(electrolyte_v)s V"
                " + %(contacts_v)s V",
                numbers,
            ),
            lambda values: float(trial.terms(values).total_v),
        )
    ]
    if case.has("volts"):
        numbers["measured"] = case["volts"]
        figures.append(
            Output(
                "rest_v",
                N_("left to the meter"),
                "V",
                "V_meter − V",
                Said("%(measured)s V − %(total)s V", numbers),
                lambda values: float(trial.terms(values).against_meter(values["volts"]).rest_v),
            )
        )
    return [*figures, *_bath(case, trial), *_parts(case, trial), *_slopes(case, trial)]


def _bath(case: Case, trial: CellTrial) -> list[Output]:
    """The current density, the conductivity in the gap and the differential resistance."""
    area_m2 = None
    if case.has("cathodes", "cathode_area_m2"):
        area_m2 = case["cathodes"] * case["cathode_area_m2"]
    found = [
        Output(
            "between_plates_s_m",
            N_("conductivity in the gap"),
            "S/m",
            "κ · √(1 − ε)³",
            Said(
                "κ(%(metal)s g/L, %(acid)s g/L, %(degc)s °C), ε = %(gas)s",
                {
                    "metal": case["metal_g_l"],
                    "acid": case["acid_g_l"],
                    "degc": case["temperature_degc"],
                    "gas": trial.model.gas_share.value,
                },
            ),
            trial.between_plates_s_m,
        )
    ]
    if area_m2:
        slope_ohm_m2 = float(trial.slopes(case.values).current_density_ohm_m2.total)
        parts: dict[str, Part] = {"slope": slope_ohm_m2, "area": area_m2}
        found.append(
            Output(
                "differential_resistance_uohm",
                N_("differential resistance"),
                "µΩ",
                "R_d = (dV/di) / (n · A)",
                Said("%(slope)s Ω·m² / %(area)s m²", parts),
                lambda values: float(
                    microohm_from_ohm(
                        trial.slopes(values).current_density_ohm_m2.total
                        / (values["cathodes"] * values["cathode_area_m2"])
                    )
                ),
                has_doubt=False,
            )
        )
    return found


def _parts(case: Case, trial: CellTrial) -> list[Output]:
    model = trial.model
    correlation = trial.correlation()
    typed = Said(N_("typed"))
    of_bath = Said(
        "%(status)s: %(source)s",
        {"status": Word(_STATUS[correlation.status]), "source": correlation.source},
    )
    numbers: dict[str, Part] = {
        "i": density_a_m2(case.values),
        "gap": case["gap_mm"],
        "kappa": trial.between_plates_s_m(case.values),
        "contacts": model.contact_ohm_m2.value,
        "separator": model.separator_ohm_m2.value,
        "degc": case["temperature_degc"],
        "metal": case["metal_g_l"],
        "acid": case["acid_g_l"],
        "table": trial.table.title,
    }
    is_winning = case.basis.process.has_reversible_voltage
    rows: list[tuple[str, str, str, str, Said]] = [
        (
            "reversible_v",
            N_("reversible voltage"),
            "E = E(O₂/H₂O) − E(M)" if is_winning else "E = 0",
            "E(%(metal)s g/L, %(acid)s g/L, %(degc)s °C)",
            Said("%(table)s", numbers),
        ),
        (
            "anode_v",
            N_("anode overpotential"),
            "η_a = b · lg(i / i₀)" if is_winning else "η_a(i)",
            "η(%(i)s A/m², %(degc)s °C)",
            _note(model.anode.point.overpotential_v),
        ),
        (
            "cathode_v",
            N_("cathode overpotential"),
            "i = i₀ (exp(α F η_c / R T) − exp(−β F η_c / R T))",
            "η(%(i)s A/m², %(degc)s °C)",
            _note(model.cathode.point.overpotential_v),
        ),
        (
            "electrolyte_v",
            N_("electrolyte"),
            "i · d / κ + i · r_bag" if model.separator_ohm_m2.value else "i · d / κ",
            "%(i)s A/m² × %(gap)s mm / %(kappa)s S/m"
            + (" + %(i)s A/m² × %(separator)s Ω·m²" if model.separator_ohm_m2.value else ""),
            typed if case.has("conductivity_s_m") else of_bath,
        ),
        (
            "contacts_v",
            N_("contacts and bars"),
            "i · r",
            "%(i)s A/m² × %(contacts)s Ω·m²",
            _note(model.contact_ohm_m2),
        ),
    ]
    return [
        Output(
            key,
            label,
            "V",
            formula,
            Said(text, numbers),
            _term(trial, key),
            place="part",
            note=note,
        )
        for key, label, formula, text, note in rows
    ]


def _term(trial: CellTrial, key: str) -> Callable[[Numbers], float]:
    return lambda values: float(trial.terms(values).stated()[key])


def _slopes(case: Case, trial: CellTrial) -> list[Output]:
    """How the voltage answers to what a plant can turn, in mV."""
    found = trial.slopes(case.values)
    rows: list[tuple[str, str, Callable[[Sensitivities], TermSlopes], float]] = [
        ("per_100_a_m2_mv", N_("100 A/m² more"), lambda s: s.current_density_ohm_m2, _PER_A_M2),
        ("per_degc_mv", N_("1 °C warmer"), lambda s: s.temperature_v_k, 1.0),
        ("per_10_acid_g_l_mv", N_("10 g/L more acid"), lambda s: s.acid_v_per_g_l, _PER_G_L),
        ("per_10_metal_g_l_mv", N_("10 g/L more metal"), lambda s: s.metal_v_per_g_l, _PER_G_L),
        (
            "per_mm_mv",
            N_("1 mm more gap"),
            lambda s: s.gap_v_m,
            float(metres_from_millimetres(1.0)),
        ),
    ]
    outputs = []
    for key, label, by, step in rows:
        parts: dict[str, Part] = {"slope": float(by(found).total), "step": step}
        outputs.append(
            Output(
                key,
                label,
                "mV",
                "dV/dx · Δx",
                Said("%(slope)s × %(step)s V", parts),
                _moved(trial, by, step),
                place="sensitivity",
                has_doubt=False,
            )
        )
    return outputs


def _moved(
    trial: CellTrial, by: Callable[[Sensitivities], TermSlopes], step: float
) -> Callable[[Numbers], float]:
    return lambda values: float(millivolts_from_volts(float(by(trial.slopes(values)).total) * step))


def _model_doubts(case: Case) -> list[ModelDoubt]:
    return CellTrial(case).doubts(case)


def _remarks(case: Case, results: Numbers) -> list[Remark]:
    trial = CellTrial(case)
    found: list[Remark] = []
    if not case.has("conductivity_s_m"):
        found += outside_ranges(
            N_("The conductivity"),
            trial.correlation().ranges,
            metal_g_l=case["metal_g_l"],
            acid_g_l=case["acid_g_l"],
            temperature_k=float(kelvin_from_degc(case["temperature_degc"])),
        )
        own = case.basis.metal.symbol
        if trial.own_line is None and trial.model.conductivity_of != own:
            text = N_(
                "No conductivity of such an electrolyte is known here: that of %(metal)s stands"
                " in, mole for mole. Type the plant's own."
            )
            parts: dict[str, Part] = {"metal": trial.model.conductivity_of}
            found.append(Remark("range", Said(text, parts)))
    rest, u_rest = results.get("rest_v", 0.0), results.get("u_rest_v", 0.0)
    if abs(rest) > 2 * u_rest:
        text = (
            N_(
                "The meter shows more than the terms and twice their doubt: a wider gap, a poor"
                " contact or an old anode."
            )
            if rest > 0
            else N_(
                "The meter shows less than the terms and twice their doubt: shorts, or a term put"
                " too high."
            )
        )
        found.append(Remark("note", Said(text)))
    return found


CELL_VOLTAGE = Sum(
    name="cell-voltage",
    title=N_("Expected cell voltage"),
    question=N_("What a cell's voltage should be and what it is made of."),
    formula="V = E + η_a + η_c + i · d / κ + i · r",
    inputs=(
        CURRENT_KA,
        CATHODES,
        CATHODE_AREA_M2,
        CURRENT_DENSITY_A_M2,
        TEMPERATURE_DEGC,
        METAL_G_L,
        replace(ACID_G_L, is_above=True),
        GAP_MM,
        CONDUCTIVITY_S_M,
        MEASURED,
    ),
    outputs=_outputs,
    needs=frozenset({"assay", "volts"}),
    results=(
        "total_v",
        "rest_v",
        "between_plates_s_m",
        "differential_resistance_uohm",
        "reversible_v",
        "anode_v",
        "cathode_v",
        "electrolyte_v",
        "contacts_v",
        "per_100_a_m2_mv",
        "per_degc_mv",
        "per_10_acid_g_l_mv",
        "per_10_metal_g_l_mv",
        "per_mm_mv",
    ),
    sources=(
        "E: W. Nernst, Z. Phys. Chem. 4 (1889) 129, with Pitzer's activities at 25 °C",
        "η: Tafel and Butler-Volmer, held at what textbooks and the trade put down",
        "κ √(1 − ε)³: D. A. G. Bruggeman, Ann. Phys. 416 (1935) 636",
        PROPAGATION,
    ),
    limits=(
        N_(
            "Most values of the models are from memory: the standard uncertainty says how far the"
            " sum can be believed. The anode is taken to be as large as the cathode."
        ),
    ),
    model_doubts=_model_doubts,
    remarks=_remarks,
    check=check_model,
    served=served_processes(),
    option=Option("anodes", N_("Anodes"), anodes_of),
    more_sources=lambda case: (f"E°: {CellTrial(case).table.citation}",),
)
