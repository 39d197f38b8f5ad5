"""The terms that a cell voltage is made of, their sum, and what the meter has beyond it."""

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.constants import metal
from server.science.electrolyte.conductivity import (
    CONDUCTIVITIES,
    Conductivity,
    conductivity_s_m,
)
from server.science.electrolyte.gas import bruggeman_s_m
from server.science.equilibrium.activities import sulfate_activities
from server.science.equilibrium.potential import reversible_volts
from server.science.equilibrium.tables import DEFAULT_TABLE, PotentialTable
from server.science.errors import ScienceError
from server.science.processes import Process, process
from server.science.voltage.cells import CELL_MODELS, cell_model
from server.science.voltage.drops import contact_drop_v, electrolyte_drop_v
from server.science.voltage.models import CellModel
from server.science.voltage.overpotentials import TwoWayElectrode

# The model of a cell is looked for here, beside what is made of it.
__all__ = [
    "CELL_MODELS",
    "CellModel",
    "MeterSplit",
    "VoltageTerms",
    "bath_conductivity_s_m",
    "cell_model",
    "cell_terms",
    "terms_without_model",
]


@dataclass(frozen=True)
class VoltageTerms:
    """The terms of a cell voltage, V, all costs and all positive, of one broadcast shape.

    A term that is None is not stated: nothing is known of it, and the sum goes without. A term
    that is NaN is missing because an input is, and so is the sum.
    """

    reversible_v: Numbers
    anode_v: Numbers | None = None
    cathode_v: Numbers | None = None
    electrolyte_v: Numbers | None = None
    contacts_v: Numbers | None = None

    def stated(self) -> dict[str, Numbers]:
        """Give the terms that are stated, by name."""
        named = {
            "reversible_v": self.reversible_v,
            "anode_v": self.anode_v,
            "cathode_v": self.cathode_v,
            "electrolyte_v": self.electrolyte_v,
            "contacts_v": self.contacts_v,
        }
        return {name: term for name, term in named.items() if term is not None}

    @property
    def total_v(self) -> Numbers:
        """Give the sum of the terms that are stated."""
        return np.asarray(sum(self.stated().values()))

    def against_meter(self, measured_v: ArrayLike) -> "MeterSplit":
        """Set the terms against a measured voltage.

        What is left goes to contacts and bars where they alone are not stated. Otherwise it is the
        rest: more gap or less conductivity than assumed, an aged anode, a bad contact; or, if it
        is negative, shorts or a term put too high.
        """
        rest_v = np.asarray(finite("measured_v", measured_v) - self.total_v)
        if set(self.stated()) == {"reversible_v", "anode_v", "cathode_v", "electrolyte_v"}:
            return MeterSplit(replace(self, contacts_v=rest_v), np.asarray(0.0 * rest_v))
        return MeterSplit(self, rest_v)


@dataclass(frozen=True)
class MeterSplit:
    """Terms beside a measured voltage: with `rest_v`, V, they add up to it."""

    terms: VoltageTerms
    rest_v: Numbers


def bath_conductivity_s_m(
    model: CellModel,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    temperature_k: ArrayLike,
    conductivity: Conductivity | None = None,
    others_g_l: Mapping[str, ArrayLike] | None = None,
) -> Numbers:
    """Conductivity of what lies between the plates of a cell, bubbles counted.

    Where the electrolyte of another metal stands in for the cell's own, the metal is counted mole
    for mole.

    Parameters
    ----------
    model : CellModel
        The kind of cell.
    metal_g_l : array_like, shape S
        Metal in solution, g/L; not negative.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid, g/L; not negative.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    conductivity : Conductivity, optional
        The plant's own; the correlation that the model names where not given.
    others_g_l : mapping of str to array_like, optional
        Further metals by symbol, g/L, that the correlation has terms for.

    Returns
    -------
    ndarray, broadcast shape
        S/m. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If the correlation has no term for a further metal.
    OutOfRange
        If an input lies outside its limits, or the correlation does not reach so far.

    Source
    ------
    As `conductivity_s_m` and `bruggeman_s_m`.

    Example
    -------
    >>> model = cell_model("copper electrowinning")
    >>> f"{bath_conductivity_s_m(model, 40.0, 180.0, 318.15):.1f}"
    '58.5'
    """
    counted: ArrayLike = metal_g_l
    if conductivity is None:
        conductivity = CONDUCTIVITIES[model.conductivity_of]
        own, other = process(model.process).metal, metal(model.conductivity_of)
        ratio = other.molar_mass_kg_mol / own.molar_mass_kg_mol
        counted = finite("metal_g_l", metal_g_l) * ratio
    clear = conductivity_s_m(conductivity, counted, acid_g_l, temperature_k, others_g_l)
    return bruggeman_s_m(clear, model.gas_share.value)


def cell_terms(
    model: CellModel,
    current_density_a_m2: ArrayLike,
    temperature_k: ArrayLike,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    gap_m: ArrayLike,
    conductivity: Conductivity | None = None,
    table: PotentialTable = DEFAULT_TABLE,
    *,
    limiting_a_m2: ArrayLike | None = None,
    others_g_l: Mapping[str, ArrayLike] | None = None,
    conductivity_factor: ArrayLike = 1.0,
) -> VoltageTerms:
    """Terms of the voltage of a cell under current.

    Reversible: Nernst's equation at the cell's temperature; activities in proportion to
    concentrations, with the coefficients of the model's usual solution at 25 degC. Anode and
    cathode: the model's curves. Electrolyte: gap over conductivity, with the model's gas and, where
    it has one, its bag or diaphragm. Contacts and bars: the model's resistance. The anode is taken
    to be as large as the cathode. Most values of the models are from memory, see their status;
    `cell_terms_with_doubt` tells what that leaves of the sum.

    Parameters
    ----------
    model : CellModel
        The kind of cell, one of `CELL_MODELS` or a plant's own.
    current_density_a_m2 : array_like, shape S
        Current over the plated area, A/m2; not negative.
    temperature_k : array_like, broadcast with S
        Temperature of the electrolyte, K; above zero.
    metal_g_l : array_like, broadcast with S
        Metal in solution, g/L; above zero.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid at the anode, g/L; above zero.
    gap_m : array_like, broadcast with S
        Distance between the faces of anode and cathode, m; not negative.
    conductivity : Conductivity, optional
        The plant's own; the correlation that the model names where not given.
    table : PotentialTable
        Where the standard potentials are taken from.
    limiting_a_m2 : array_like, broadcast with S, optional
        Limiting current density of the cathode, A/m2; above the current. Without it the supply is
        taken as plentiful, which at a third of the limit forgets 6 mV.
    others_g_l : mapping of str to array_like, optional
        Further metals by symbol, g/L, that the correlation of conductivity has terms for.
    conductivity_factor : array_like, broadcast with S
        Factor on the conductivity, to try its doubt; above zero.

    Returns
    -------
    VoltageTerms
        Arrays of the broadcast shape. NaN where an input of the term is NaN; electrodes also
        where no current flows.

    Raises
    ------
    UnknownName
        If the table has no potential for the metal, or the correlation no term for another.
    OutOfRange
        If an input lies outside its limits, or the current reaches the limiting one.

    Source
    ------
    The sum: any textbook; each value of the model names its own.

    Example
    -------
    >>> terms = cell_terms(cell_model("copper electrowinning"), 300.0, 318.15, 40.0, 180.0, 0.040)
    >>> [f"{volts:.3f}" for volts in terms.stated().values()]
    ['0.911', '0.575', '0.065', '0.205', '0.175']
    >>> f"{terms.total_v:.2f}"
    '1.93'
    """
    current = finite("current_density_a_m2", current_density_a_m2)
    bath = bath_conductivity_s_m(
        model, metal_g_l, acid_g_l, temperature_k, conductivity, others_g_l
    )
    conducting = bath * above_zero("conductivity_factor", conductivity_factor)
    terms = (
        _reversible_v(model, metal_g_l, acid_g_l, temperature_k, table),
        model.anode.overpotential_v(current, temperature_k),
        _cathode_v(model.cathode, current, temperature_k, limiting_a_m2),
        electrolyte_drop_v(current, gap_m, conducting)
        + contact_drop_v(current, model.separator_ohm_m2.value),
        contact_drop_v(current, model.contact_ohm_m2.value),
    )
    return VoltageTerms(*np.broadcast_arrays(*terms))


def terms_without_model(
    known: Process,
    current_density_a_m2: ArrayLike,
    temperature_k: ArrayLike,
    gap_m: ArrayLike | None = None,
    conductivity_s_m: ArrayLike | None = None,
) -> VoltageTerms:
    """The little that is known of a cell whose electrodes are not.

    For refining of lead, tin, silver, gold and nickel, and for aluminium: the reversible voltage,
    which is none in refining, and the electrolyte where the plant states gap and conductivity. The
    electrodes and the contacts are not stated; set against the meter they are the rest.

    Parameters
    ----------
    known : Process
        A refining process, or the electrolysis of alumina.
    current_density_a_m2 : array_like, shape S
        Current over the plated area, A/m2.
    temperature_k : array_like, broadcast with S
        Temperature of the bath, K; above zero.
    gap_m : array_like, broadcast with S, optional
        Distance between the faces of anode and cathode, m; not negative.
    conductivity_s_m : array_like, broadcast with S, optional
        Conductivity of what is in the gap, S/m; above zero.

    Returns
    -------
    VoltageTerms
        Arrays of the broadcast shape, None for what is not stated.

    Raises
    ------
    ScienceError
        If the process has no reversible voltage that is known without its solution.
    OutOfRange
        If an input lies outside its limits.

    Source
    ------
    As `reversible_volts` and `electrolyte_drop_v`.

    Example
    -------
    Aluminium at 960 degC: all but the reversible voltage is the rest.

    >>> split = terms_without_model(process("aluminium electrolysis"), 9000.0, 1233.15)
    >>> f"{split.total_v:.2f} and {split.against_meter(4.2).rest_v:.2f}"
    '1.19 and 3.01'
    """
    if known.kind not in ("electrorefining", "molten salt electrolysis"):
        raise ScienceError("process", found=known.name, allowed="refining, or molten salt")
    reversible = reversible_volts(known, temperature_k=temperature_k, standard_at_temperature=True)
    if gap_m is None or conductivity_s_m is None:
        shape = np.broadcast_shapes(np.shape(current_density_a_m2), reversible.shape)
        return VoltageTerms(np.broadcast_to(reversible, shape))
    drop = electrolyte_drop_v(current_density_a_m2, gap_m, conductivity_s_m)
    reversible, drop = np.broadcast_arrays(reversible, drop)
    return VoltageTerms(reversible, electrolyte_v=drop)


def _reversible_v(
    model: CellModel,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    temperature_k: ArrayLike,
    table: PotentialTable,
) -> Numbers:
    """Reversible voltage at the activities of the solution.

    The coefficients are those of the usual solution: in a mixture they hang on all that is
    dissolved, and taking them at each substance's own molality would have the voltage rise with
    the metal.
    """
    known, usual = process(model.process), model.usual
    # The molar mass of the metal itself, with the coefficients of the sulfate that stands in.
    stand_in = replace(known.metal, symbol=model.activities_of)
    activities = sulfate_activities(stand_in, usual.metal_g_l, usual.acid_g_l, model.water_kg_m3)
    volts = reversible_volts(
        known,
        activities.metal * above_zero("metal_g_l", metal_g_l) / usual.metal_g_l,
        activities.acid * above_zero("acid_g_l", acid_g_l) / usual.acid_g_l,
        temperature_k,
        table=table,
        standard_at_temperature=True,
    )
    return np.asarray(volts + model.reversible_shift_v.value)


def _cathode_v(
    cathode: TwoWayElectrode,
    current: Numbers,
    temperature_k: ArrayLike,
    limiting_a_m2: ArrayLike | None,
) -> Numbers:
    """Overpotential of the cathode; none stated where no current flows, as for the anode."""
    cost_v = cathode.overpotential_v(current, temperature_k, limiting_a_m2)
    return np.asarray(np.where(current > 0.0, cost_v, np.nan))
