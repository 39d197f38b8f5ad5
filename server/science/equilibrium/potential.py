"""Equilibrium potentials, and the voltage below which no cell can work."""

import math

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.constants import (
    FARADAY_C_MOL,
    GAS_CONSTANT_J_MOL_K,
    STANDARD_TEMPERATURE_K,
    Metal,
)
from server.science.equilibrium.alumina import alumina_volts
from server.science.equilibrium.entropy import (
    couple_coefficient_v_k,
    metal_coefficient_v_k,
    standard_at_v,
)
from server.science.equilibrium.tables import DEFAULT_TABLE, PotentialTable
from server.science.errors import OutOfRange
from server.science.processes import Process

# Public course notes on the decomposition of alumina (looked up): with a carbon anode that burns
# away, near 960 degC; textbooks say 1.2 V (from memory).
ALUMINA_CARBON_VOLTS = 1.19


def nernst_slope_v(temperature_k: ArrayLike, electrons: int = 1) -> Numbers:
    """Change of an equilibrium potential for a tenfold change of activity.

    ln(10) R T / (n F).

    Parameters
    ----------
    temperature_k : array_like, any shape
        Temperature, K; above zero.
    electrons : int
        Electrons exchanged; at least 1.

    Returns
    -------
    ndarray, same shape
        V per decade. NaN where the temperature is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is not above zero or no electron is exchanged.

    Source
    ------
    W. Nernst, Z. Phys. Chem. 4 (1889) 129; IUPAC Green Book, 3rd ed. (2007), p. 72.

    Example
    -------
    >>> f"{nernst_slope_v(298.15):.8f}"
    '0.05915935'
    """
    if electrons < 1:
        raise OutOfRange("electrons", found=electrons, allowed="1 or more")
    kelvin = above_zero("temperature_k", temperature_k)
    return np.asarray(math.log(10.0) * GAS_CONSTANT_J_MOL_K * kelvin / (electrons * FARADAY_C_MOL))


def nernst_v(
    standard_v: ArrayLike,
    electrons: int,
    activity_ratio: ArrayLike,
    temperature_k: ArrayLike = STANDARD_TEMPERATURE_K,
) -> Numbers:
    """Equilibrium potential of a couple at given activities.

    E = E0 + (R T / n F) ln(a_ox / a_red). The standard potential is taken as it comes: a value
    tabulated at 25 degC is used at other temperatures without its own change, which for oxygen
    is -0.85 mV/K and for most metals less; `standard_at_v` works it out.

    Parameters
    ----------
    standard_v : array_like, shape S
        Standard potential E0, V.
    electrons : int
        Electrons exchanged; at least 1.
    activity_ratio : array_like, broadcast with S
        Product of the activities on the oxidised side over the reduced side; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Potential on the scale of the standard one, V. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a ratio or temperature is not above zero, or no electron is exchanged.

    Source
    ------
    W. Nernst, Z. Phys. Chem. 4 (1889) 129; IUPAC Green Book, 3rd ed. (2007), p. 72.

    Example
    -------
    Copper at an activity of one thousandth.

    >>> f"{nernst_v(0.3419, 2, 0.001):.4f}"
    '0.2532'
    """
    decades = np.log10(above_zero("activity_ratio", activity_ratio))
    slope = nernst_slope_v(temperature_k, electrons)
    return np.asarray(finite("standard_v", standard_v) + slope * decades)


def metal_potential_v(
    metal: Metal,
    activity: ArrayLike = 1.0,
    temperature_k: ArrayLike = STANDARD_TEMPERATURE_K,
    table: PotentialTable = DEFAULT_TABLE,
    *,
    standard_at_temperature: bool = False,
) -> Numbers:
    """Equilibrium potential of a metal in a solution of its simple ion.

    The aquo ion is meant. In chloride, cyanide or ammonia most of the metal is complexed and the
    potential is lower; its activity there is not its concentration. The standard potential stays
    that of 25 degC unless asked otherwise: that is how plants and course sheets do the sum, and
    for the metals won from sulfate the difference is below 6 mV up to 65 degC.

    Parameters
    ----------
    metal : Metal
        The metal, at the valency of its ion.
    activity : array_like, shape S
        Activity of the ion; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    table : PotentialTable
        Where the standard potential is taken from.
    standard_at_temperature : bool
        Move the standard potential with the temperature, by `metal_coefficient_v_k`.

    Returns
    -------
    ndarray, broadcast shape
        Potential against the standard hydrogen electrode, V. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If the table has no potential for that metal and valency, or its entropy is not held.
    OutOfRange
        If an activity or temperature is not above zero.

    Source
    ------
    The table, with Nernst's equation as in `nernst_v`.

    Example
    -------
    >>> from server.science.constants import ZINC
    >>> f"{metal_potential_v(ZINC, 0.01):.4f}"
    '-0.8210'
    >>> f"{metal_potential_v(ZINC, 0.01, 311.15, standard_at_temperature=True):.4f}"
    '-0.8220'
    """
    standard_v: ArrayLike = table.metal_v(metal.symbol, metal.electrons)
    if standard_at_temperature:
        standard_v = standard_at_v(standard_v, metal_coefficient_v_k(metal), temperature_k)
    return nernst_v(standard_v, metal.electrons, activity, temperature_k)


def oxygen_potential_v(
    acid_activity: ArrayLike = 1.0,
    temperature_k: ArrayLike = STANDARD_TEMPERATURE_K,
    oxygen_bar: ArrayLike = 1.0,
    table: PotentialTable = DEFAULT_TABLE,
    *,
    standard_at_temperature: bool = False,
) -> Numbers:
    """Equilibrium potential of oxygen over water, the anode of most electrowinning cells.

    E = E0 + (R T / 4 F) ln(a_H^4 p_O2), with water at unit activity and the standard potential
    of 25 degC unless asked otherwise; at 45 degC it lies 17 mV lower.

    Parameters
    ----------
    acid_activity : array_like, shape S
        Activity of the hydrogen ion, 10^-pH; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    oxygen_bar : array_like, broadcast with S
        Partial pressure of oxygen, bar; above zero.
    table : PotentialTable
        Where the standard potential is taken from.
    standard_at_temperature : bool
        Move the standard potential with the temperature, by `couple_coefficient_v_k`.

    Returns
    -------
    ndarray, broadcast shape
        Potential against the standard hydrogen electrode, V. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an activity, pressure or temperature is not above zero.

    Source
    ------
    The table, with Nernst's equation as in `nernst_v`.

    Example
    -------
    Neutral water.

    >>> f"{oxygen_potential_v(1e-7):.4f}"
    '0.8149'
    """
    acid = above_zero("acid_activity", acid_activity)
    ratio = acid**4 * above_zero("oxygen_bar", oxygen_bar)
    standard_v: ArrayLike = table.couple_v("O2/H2O")
    if standard_at_temperature:
        standard_v = standard_at_v(standard_v, couple_coefficient_v_k("O2/H2O"), temperature_k)
    return nernst_v(standard_v, 4, ratio, temperature_k)


def reversible_volts(
    process: Process,
    metal_activity: ArrayLike = 1.0,
    acid_activity: ArrayLike = 1.0,
    temperature_k: ArrayLike = STANDARD_TEMPERATURE_K,
    oxygen_bar: ArrayLike = 1.0,
    table: PotentialTable = DEFAULT_TABLE,
    *,
    standard_at_temperature: bool = False,
) -> Numbers:
    """Cell voltage that the reaction itself asks for, before any current flows.

    Electrowinning: oxygen on an inert anode less the metal's potential.

    Electrorefining has none: what dissolves at the anode is what is deposited at the cathode, the
    same couple stands on both sides, and its standard potential and the activity of its ion
    cancel at every temperature and in every table. What is left is a difference of
    concentration between the two faces, (R T / n F) ln of their ratio, see
    `concentration_cell_volts`: a few millivolts, and an overpotential of mass transfer rather than
    a voltage of the reaction.

    Alumina with carbon anodes: the literature's figure, whatever the activities, or that of
    `alumina_volts` at the given temperature. Process "other": unknown, because its anode reaction
    is.

    Parameters
    ----------
    process : Process
        The process.
    metal_activity : array_like, shape S
        Activity of the metal's ion; above zero.
    acid_activity : array_like, broadcast with S
        Activity of the hydrogen ion; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    oxygen_bar : array_like, broadcast with S
        Partial pressure of oxygen, bar; above zero.
    table : PotentialTable
        Where the standard potentials are taken from.
    standard_at_temperature : bool
        Move the standard potentials with the temperature; as they stand at 25 degC otherwise,
        which is how plants and course sheets do the sum.

    Returns
    -------
    ndarray, broadcast shape
        Reversible cell voltage, V. NaN where an input is NaN, and for process "other".

    Raises
    ------
    UnknownName
        If the table has no potential for the metal, or its entropy is not held.
    OutOfRange
        If an activity, pressure or temperature is not above zero.

    Source
    ------
    The table, with Nernst's equation as in `nernst_v`; alumina: `ALUMINA_CARBON_VOLTS`.

    Example
    -------
    >>> from server.science.processes import process
    >>> f"{reversible_volts(process('copper electrowinning')):.4f}"
    '0.8871'
    >>> f"{reversible_volts(process('copper electrorefining')):.4f}"
    '0.0000'
    """
    # Both potentials are worked out for every kind, so that bad input is refused by all alike.
    anode_v = oxygen_potential_v(
        acid_activity,
        temperature_k,
        oxygen_bar,
        table,
        standard_at_temperature=standard_at_temperature,
    )
    activity = above_zero("metal_activity", metal_activity)
    if process.kind == "electrowinning":
        metal_v = metal_potential_v(
            process.metal,
            activity,
            temperature_k,
            table,
            standard_at_temperature=standard_at_temperature,
        )
        return np.asarray(anode_v - metal_v)
    fixed = {"electrorefining": 0.0, "molten salt electrolysis": ALUMINA_CARBON_VOLTS}
    volts: ArrayLike = fixed.get(process.kind, math.nan)
    if process.kind == "molten salt electrolysis" and standard_at_temperature:
        volts = alumina_volts(temperature_k)
    missing = np.isnan(anode_v) | np.isnan(activity)
    return np.asarray(np.where(missing, math.nan, volts))


def concentration_cell_volts(
    anode_activity: ArrayLike,
    cathode_activity: ArrayLike,
    electrons: int,
    temperature_k: ArrayLike = STANDARD_TEMPERATURE_K,
) -> Numbers:
    """Voltage that one couple on both sides asks for, when its ion is unequally strong.

    (R T / n F) ln(a_anode / a_cathode): the only equilibrium voltage that an electrorefining cell
    can have. The standard potential stands on both sides and drops out, with its temperature
    coefficient. Under current the anode's face is the richer one.

    Parameters
    ----------
    anode_activity : array_like, shape S
        Activity of the ion at the face of the anode; above zero.
    cathode_activity : array_like, broadcast with S
        Activity of the ion at the face of the cathode; above zero.
    electrons : int
        Electrons exchanged; at least 1.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Voltage that has to be supplied, V; zero where both faces are alike. NaN where an input is
        NaN.

    Raises
    ------
    OutOfRange
        If an activity or temperature is not above zero, or no electron is exchanged.

    Source
    ------
    W. Nernst, Z. Phys. Chem. 4 (1889) 129.

    Example
    -------
    Twice as much copper at the anode as at the cathode, 60 degC.

    >>> f"{1000 * concentration_cell_volts(0.04, 0.02, 2, 333.15):.1f} mV"
    '9.9 mV'
    """
    anode = above_zero("anode_activity", anode_activity)
    cathode = above_zero("cathode_activity", cathode_activity)
    return nernst_v(0.0, electrons, anode / cathode, temperature_k)
