"""How standard potentials move with temperature, from the entropies of what reacts."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.constants import FARADAY_C_MOL, STANDARD_TEMPERATURE_K, Metal
from server.science.errors import OutOfRange, UnknownName
from server.science.ranges import Range

# Standard entropies at 25 degC, J/(mol K), ions on the scale on which H+ has none: NBS tables
# (Wagman et al., J. Phys. Chem. Ref. Data 11, Suppl. 2, 1982). Looked up: H2 and O2 in a public
# database that names them; Cu+, Co2+ and Ga3+ in the CRC Handbook's table of aqueous ions; Ni, Co
# and Mg in a public list of elements; the others in a public copy of a textbook's appendix G, which
# rounds some. From memory: digits rounded there, and Ni2+, Sn2+, In3+, PbSO4, Sn, In, Ga.
ENTROPIES_J_MOL_K: dict[str, float] = {
    "H2": 130.684,
    "O2": 205.138,
    "H2O": 69.91,
    "H+": 0.0,
    "Cu": 33.150,
    "Cu2+": -99.6,
    "Cu+": 40.6,
    "Zn": 41.63,
    "Zn2+": -112.1,
    "Ni": 29.87,
    "Ni2+": -128.9,
    "Co": 30.04,
    "Co2+": -113.0,
    "Ag": 42.55,
    "Ag+": 72.68,
    "Pb": 64.81,
    "Pb2+": 10.5,
    "Sn": 51.55,
    "Sn2+": -17.0,
    "Mn": 32.01,
    "Mn2+": -73.6,
    "Cd": 51.76,
    "Cd2+": -73.2,
    "Fe": 27.28,
    "Fe2+": -137.7,
    "Fe3+": -315.9,
    "In": 57.82,
    "In3+": -151.0,
    "Ga": 40.88,
    "Ga3+": -331.0,
    "Al": 28.33,
    "Al3+": -321.7,
    "Mg": 32.68,
    "Mg2+": -138.1,
    "Cl2": 223.066,
    "Cl-": 56.5,
    "MnO2": 53.05,
    "PbO2": 68.6,
    "PbSO4": 148.57,
    "SO4--": 20.1,
}

# Couples as reductions, moles made (above zero) or used, from stoichiometry; H+ is left out, since
# its entropy is nothing on this scale.
COUPLE_MOLES: dict[str, tuple[int, dict[str, float]]] = {
    "H+/H2": (2, {"H2": 1.0}),
    "O2/H2O": (4, {"O2": -1.0, "H2O": 2.0}),
    "Fe3+/Fe2+": (1, {"Fe3+": -1.0, "Fe2+": 1.0}),
    "Cl2/Cl-": (2, {"Cl2": -1.0, "Cl-": 2.0}),
    "PbO2/PbSO4": (2, {"PbO2": -1.0, "SO4--": -1.0, "PbSO4": 1.0, "H2O": 2.0}),
    "PbSO4/Pb": (2, {"PbSO4": -1.0, "Pb": 1.0, "SO4--": 1.0}),
    "MnO2/Mn2+": (2, {"MnO2": -1.0, "Mn2+": 1.0, "H2O": 2.0}),
    "Cu2+/Cu+": (1, {"Cu2+": -1.0, "Cu+": 1.0}),
}

# Judgement: within it the change of the coefficient itself, some 0.001 mV/K for each kelvin
# (Bratsch 1989, from memory), stays below 5 mV.
COEFFICIENT_RANGE = Range("temperature_k", 273.15, 373.15)


def temperature_coefficient_v_k(entropy_j_mol_k: ArrayLike, electrons: int) -> Numbers:
    """Change of a standard voltage with temperature, from the entropy of its reaction.

    dE0/dT = dS / (n F). For an electrode against the standard hydrogen electrode the reaction is
    the one with hydrogen on the other side, since that electrode counts as zero at every
    temperature (an isothermal cell).

    Parameters
    ----------
    entropy_j_mol_k : array_like, any shape
        Entropy of the reaction, J/(mol K).
    electrons : int
        Electrons exchanged in the reaction as written; at least 1.

    Returns
    -------
    ndarray, same shape
        V/K. NaN where the entropy is NaN.

    Raises
    ------
    OutOfRange
        If an entropy is infinite or no electron is exchanged.

    Source
    ------
    S. G. Bratsch, J. Phys. Chem. Ref. Data 18 (1989) 1, whose method this is.

    Example
    -------
    Oxygen and hydrogen to water.

    >>> f"{1000 * temperature_coefficient_v_k(2 * 69.91 - 205.138 - 2 * 130.684, 4):.3f}"
    '-0.846'
    """
    if electrons < 1:
        raise OutOfRange("electrons", found=electrons, allowed="1 or more")
    entropy = finite("entropy_j_mol_k", entropy_j_mol_k)
    return np.asarray(entropy / (electrons * FARADAY_C_MOL))


def metal_coefficient_v_k(metal: Metal) -> float:
    """Temperature coefficient of a metal in a solution of its simple ion.

    M^n+ + (n/2) H2 = M + n H+. Small for copper, zinc, nickel and cobalt, large for silver.

    Parameters
    ----------
    metal : Metal
        The metal, at the valency of its ion.

    Returns
    -------
    float
        Change of the standard potential against the standard hydrogen electrode, V/K.

    Raises
    ------
    UnknownName
        If the entropy of the metal or of its ion is not held here.

    Source
    ------
    `ENTROPIES_J_MOL_K`, with the method of `temperature_coefficient_v_k`.

    Example
    -------
    >>> from server.science.constants import COPPER, SILVER
    >>> f"{1000 * metal_coefficient_v_k(COPPER):.3f}"
    '0.011'
    >>> f"{1000 * metal_coefficient_v_k(SILVER):.3f}"
    '-0.989'
    """
    charge = "" if metal.electrons == 1 else str(metal.electrons)
    return _coefficient_v_k(metal.electrons, {metal.symbol: 1.0, f"{metal.symbol}{charge}+": -1.0})


def couple_coefficient_v_k(couple: str) -> float:
    """Temperature coefficient of a named couple, such as oxygen over water.

    Parameters
    ----------
    couple : str
        Name of the couple, as in the tables of potentials.

    Returns
    -------
    float
        Change of the standard potential against the standard hydrogen electrode, V/K.

    Raises
    ------
    UnknownName
        If the couple's reaction is not held here.

    Source
    ------
    `ENTROPIES_J_MOL_K`, with the method of `temperature_coefficient_v_k`.

    Example
    -------
    >>> f"{1000 * couple_coefficient_v_k('O2/H2O'):.3f}"
    '-0.846'
    """
    if couple not in COUPLE_MOLES:
        raise UnknownName("couple with known entropies", couple, COUPLE_MOLES)
    return _coefficient_v_k(*COUPLE_MOLES[couple])


def standard_at_v(
    standard_v: ArrayLike, coefficient_v_k: ArrayLike, temperature_k: ArrayLike
) -> Numbers:
    """Standard potential at another temperature than that of its table.

    E0(T) = E0(25 degC) + (T - 298.15 K) dE0/dT, a straight line; good to some millivolts inside
    `COEFFICIENT_RANGE`.

    Parameters
    ----------
    standard_v : array_like, shape S
        Standard potential at 25 degC, V.
    coefficient_v_k : array_like, broadcast with S
        Temperature coefficient, V/K.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Standard potential at that temperature, V. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a potential or coefficient is infinite, or a temperature is not above zero.

    Source
    ------
    S. G. Bratsch, J. Phys. Chem. Ref. Data 18 (1989) 1, section 7 (number from memory).

    Example
    -------
    Oxygen over water at 45 degC.

    >>> f"{standard_at_v(1.229, -0.846e-3, 318.15):.4f}"
    '1.2121'
    """
    kelvin = above_zero("temperature_k", temperature_k)
    slope = finite("coefficient_v_k", coefficient_v_k)
    away_k = kelvin - STANDARD_TEMPERATURE_K
    return np.asarray(finite("standard_v", standard_v) + slope * away_k)


def _coefficient_v_k(electrons: int, moles: dict[str, float]) -> float:
    """Coefficient of a reduction, its hydrogen counter-reaction added."""
    unknown = [name for name in moles if name not in ENTROPIES_J_MOL_K]
    if unknown:
        raise UnknownName("standard entropy", unknown[0], ENTROPIES_J_MOL_K)
    entropy = sum(number * ENTROPIES_J_MOL_K[name] for name, number in moles.items())
    hydrogen = electrons / 2 * ENTROPIES_J_MOL_K["H2"]
    return float(temperature_coefficient_v_k(entropy - hydrogen, electrons))
