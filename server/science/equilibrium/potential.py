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
from server.science.errors import OutOfRange, UnknownName
from server.science.processes import Process

# The one table used here; older editions differ, by 0.16 V for manganese.
STANDARD_POTENTIAL_TABLE = "CRC Handbook of Chemistry and Physics, Electrochemical Series (Vanysek)"

# Standard potentials at 25 degC against the standard hydrogen electrode, V, by metal and electrons.
# All from the table named above. Silver was looked up in its 92nd edition. Every other figure was
# looked up in a public copy of a textbook's appendix L that follows the table, but for copper(II),
# whose 0.3419 V was looked up in a page quoting the handbook (the appendix rounds it to 0.34),
# and for bismuth and tellurium, which are from memory.
STANDARD_POTENTIALS_V: dict[tuple[str, int], float] = {
    ("Cu", 2): 0.3419,
    ("Cu", 1): 0.521,
    ("Zn", 2): -0.7618,
    ("Ni", 2): -0.257,
    ("Co", 2): -0.28,
    ("Ag", 1): 0.7996,
    ("Au", 3): 1.498,
    ("Au", 1): 1.692,
    ("Pb", 2): -0.1262,
    ("Sn", 2): -0.1375,
    ("Mn", 2): -1.185,
    ("Cd", 2): -0.403,
    ("Cr", 3): -0.744,
    ("Fe", 2): -0.447,
    ("In", 3): -0.3382,
    ("Ga", 3): -0.549,
    ("Al", 3): -1.662,
    ("Mg", 2): -2.372,
    ("Bi", 3): 0.308,
    ("Te", 4): 0.568,
}
# Same table: O2 + 4 H+ + 4 e = 2 H2O, looked up in both generations of the table.
OXYGEN_WATER_V = 1.229
# Same table: Fe3+ + e = Fe2+, looked up in the textbook's appendix.
FERRIC_FERROUS_V = 0.771
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
    is -0.85 mV/K (from memory) and for most metals less.

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
    Copper at an activity of 0.001.

    >>> f"{nernst_v(0.3419, 2, 0.001):.6f}"
    '0.253161'
    """
    decades = np.log10(above_zero("activity_ratio", activity_ratio))
    return np.asarray(
        finite("standard_v", standard_v) + nernst_slope_v(temperature_k, electrons) * decades
    )


def metal_potential_v(
    metal: Metal,
    activity: ArrayLike = 1.0,
    temperature_k: ArrayLike = STANDARD_TEMPERATURE_K,
) -> Numbers:
    """Equilibrium potential of a metal in a solution of its simple ion.

    The aquo ion is meant. In chloride, cyanide or ammonia most of the metal is complexed and the
    potential is lower; its activity there is not its concentration. The standard potential is
    that of 25 degC.

    Parameters
    ----------
    metal : Metal
        The metal, at the valency of its ion.
    activity : array_like, shape S
        Activity of the ion; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Potential against the standard hydrogen electrode, V. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If the table has no potential for that metal and valency.
    OutOfRange
        If an activity or temperature is not above zero.

    Source
    ------
    `STANDARD_POTENTIAL_TABLE`, with Nernst's equation as in `nernst_v`.

    Example
    -------
    >>> from server.science.constants import ZINC
    >>> f"{metal_potential_v(ZINC, 0.01):.4f}"
    '-0.8210'
    """
    couple = (metal.symbol, metal.electrons)
    if couple not in STANDARD_POTENTIALS_V:
        known = [f"{symbol} with {electrons}" for symbol, electrons in STANDARD_POTENTIALS_V]
        found = f"{metal.symbol} with {metal.electrons}"
        raise UnknownName("standard potential (metal and electrons)", found, known)
    return nernst_v(STANDARD_POTENTIALS_V[couple], metal.electrons, activity, temperature_k)


def oxygen_potential_v(
    acid_activity: ArrayLike = 1.0,
    temperature_k: ArrayLike = STANDARD_TEMPERATURE_K,
    oxygen_bar: ArrayLike = 1.0,
) -> Numbers:
    """Equilibrium potential of oxygen over water, the anode of most electrowinning cells.

    E = E0 + (R T / 4 F) ln(a_H^4 p_O2), with water at unit activity and the standard potential
    of 25 degC.

    Parameters
    ----------
    acid_activity : array_like, shape S
        Activity of the hydrogen ion, 10^-pH; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    oxygen_bar : array_like, broadcast with S
        Partial pressure of oxygen, bar; above zero.

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
    `STANDARD_POTENTIAL_TABLE`, with Nernst's equation as in `nernst_v`.

    Example
    -------
    Neutral water.

    >>> f"{oxygen_potential_v(1e-7):.4f}"
    '0.8149'
    """
    acid = above_zero("acid_activity", acid_activity)
    ratio = acid**4 * above_zero("oxygen_bar", oxygen_bar)
    return nernst_v(OXYGEN_WATER_V, 4, ratio, temperature_k)


def reversible_volts(
    process: Process,
    metal_activity: ArrayLike = 1.0,
    acid_activity: ArrayLike = 1.0,
    temperature_k: ArrayLike = STANDARD_TEMPERATURE_K,
    oxygen_bar: ArrayLike = 1.0,
) -> Numbers:
    """Cell voltage that the reaction itself asks for, before any current flows.

    Electrowinning: oxygen on an inert anode less the metal's potential. Electrorefining: zero,
    the same couple stands on both sides. Alumina with carbon anodes: the literature's figure,
    whatever the activities. Process "other": unknown, because its anode reaction is.

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

    Returns
    -------
    ndarray, broadcast shape
        Reversible cell voltage, V. NaN where an input is NaN, and for process "other".

    Raises
    ------
    UnknownName
        If the table has no potential for the metal.
    OutOfRange
        If an activity, pressure or temperature is not above zero.

    Source
    ------
    `STANDARD_POTENTIAL_TABLE`; alumina: `ALUMINA_CARBON_VOLTS`.

    Example
    -------
    >>> from server.science.processes import process
    >>> f"{reversible_volts(process('copper electrowinning')):.4f}"
    '0.8871'
    >>> f"{reversible_volts(process('copper electrorefining')):.4f}"
    '0.0000'
    """
    # Both potentials are worked out for every kind, so that bad input is refused by all alike.
    anode_v = oxygen_potential_v(acid_activity, temperature_k, oxygen_bar)
    activity = above_zero("metal_activity", metal_activity)
    if process.kind == "electrowinning":
        return np.asarray(anode_v - metal_potential_v(process.metal, activity, temperature_k))
    fixed = {"electrorefining": 0.0, "molten salt electrolysis": ALUMINA_CARBON_VOLTS}
    volts = fixed.get(process.kind, math.nan)
    missing = np.isnan(anode_v) | np.isnan(activity)
    return np.asarray(np.where(missing, math.nan, volts))
