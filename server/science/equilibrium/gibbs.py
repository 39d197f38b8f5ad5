"""Gibbs energy and voltage of a reaction, each from the other, and heat beside them."""

from dataclasses import dataclass

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


@dataclass(frozen=True)
class Formation:
    """Enthalpy and Gibbs energy of formation of one species at 25 degC, J/mol."""

    enthalpy_j_mol: float
    gibbs_j_mol: float


# NBS tables of chemical thermodynamic properties (Wagman et al., J. Phys. Chem. Ref. Data 11,
# Suppl. 2, 1982): the Gibbs energy looked up in a public database that names them as its source.
WATER_FORMATION = Formation(-285_830.0, -237_129.0)
# Simple ions in water, by symbol and electrons, from the same tables: looked up in a public copy of
# a textbook's appendix G, cobalt in the CRC Handbook's table of aqueous ions. Nickel and tin are
# from memory (the textbook's nickel is of an older generation), and so are digits that it rounds.
ION_FORMATION: dict[tuple[str, int], Formation] = {
    ("Cu", 2): Formation(64_770.0, 65_490.0),
    ("Zn", 2): Formation(-153_890.0, -147_060.0),
    ("Ni", 2): Formation(-54_000.0, -45_600.0),
    ("Co", 2): Formation(-58_200.0, -54_400.0),
    ("Ag", 1): Formation(105_579.0, 77_107.0),
    ("Pb", 2): Formation(-1_700.0, -24_430.0),
    ("Sn", 2): Formation(-8_800.0, -27_200.0),
    ("Mn", 2): Formation(-220_750.0, -228_100.0),
    ("Cd", 2): Formation(-75_900.0, -77_612.0),
    ("Fe", 2): Formation(-89_100.0, -78_900.0),
    ("Al", 3): Formation(-531_000.0, -485_000.0),
    ("Mg", 2): Formation(-466_850.0, -454_800.0),
}


def gibbs_j_mol(volts: ArrayLike, electrons: int) -> Numbers:
    """Gibbs energy of a cell reaction that gives a voltage.

    dG = -n F E. The voltage that a cell demands counts as negative, since its reaction does not
    run by itself.

    Parameters
    ----------
    volts : array_like, any shape
        Voltage that the reaction gives, V; negative where it has to be driven.
    electrons : int
        Electrons exchanged in the reaction as written; at least 1.

    Returns
    -------
    ndarray, same shape
        Gibbs energy, J/mol of the reaction as written. NaN where the voltage is NaN.

    Raises
    ------
    OutOfRange
        If a voltage is infinite or no electron is exchanged.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 71.

    Example
    -------
    Electrowinning of copper, which has to be driven with 0.89 V.

    >>> f"{gibbs_j_mol(-0.89, electrons=2):.0f}"
    '171744'
    """
    return np.asarray(-_electrons(electrons) * FARADAY_C_MOL * finite("volts", volts))


def volts_from_gibbs(gibbs_j_mol: ArrayLike, electrons: int) -> Numbers:
    """Voltage that a reaction of known Gibbs energy gives.

    E = -dG / (n F); negative where the reaction has to be driven.

    Parameters
    ----------
    gibbs_j_mol : array_like, any shape
        Gibbs energy, J/mol of the reaction as written.
    electrons : int
        Electrons exchanged in the reaction as written; at least 1.

    Returns
    -------
    ndarray, same shape
        Voltage, V. NaN where the Gibbs energy is NaN.

    Raises
    ------
    OutOfRange
        If a Gibbs energy is infinite or no electron is exchanged.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 71.

    Example
    -------
    >>> f"{volts_from_gibbs(171_639.0, electrons=2):.4f}"
    '-0.8895'
    """
    energy = finite("gibbs_j_mol", gibbs_j_mol)
    return np.asarray(-energy / (_electrons(electrons) * FARADAY_C_MOL))


def equilibrium_ln_constant(
    volts: ArrayLike, electrons: int, temperature_k: ArrayLike = STANDARD_TEMPERATURE_K
) -> Numbers:
    """Natural logarithm of the equilibrium constant of a reaction that gives a standard voltage.

    ln K = n F E0 / (R T). The logarithm is given because the constant itself outgrows a float
    at some 9 V and two electrons.

    Parameters
    ----------
    volts : array_like, shape S
        Standard voltage at that temperature, V; negative where the reaction has to be driven.
    electrons : int
        Electrons exchanged in the reaction as written; at least 1.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        ln K, without unit. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a voltage is infinite, a temperature not above zero, or no electron is exchanged.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 61 and 71.

    Example
    -------
    >>> f"{equilibrium_ln_constant(0.89, electrons=2, temperature_k=328.0):.2f}"
    '62.98'
    """
    kelvin = above_zero("temperature_k", temperature_k)
    return np.asarray(-gibbs_j_mol(volts, electrons) / (GAS_CONSTANT_J_MOL_K * kelvin))


def thermoneutral_volts(enthalpy_j_mol: ArrayLike, electrons: int) -> Numbers:
    """Cell voltage at which a driven reaction neither heats nor cools its cell.

    dH / (n F). What a cell takes above it turns into heat of the electrolyte; between the
    reversible and the thermoneutral voltage the reaction would draw heat from it. A tankhouse
    heats its electrolyte with the difference.

    Parameters
    ----------
    enthalpy_j_mol : array_like, any shape
        Enthalpy taken up by the reaction as it is driven, J/mol.
    electrons : int
        Electrons exchanged in the reaction as written; at least 1.

    Returns
    -------
    ndarray, same shape
        Voltage, V. NaN where the enthalpy is NaN.

    Raises
    ------
    OutOfRange
        If an enthalpy is infinite or no electron is exchanged.

    Source
    ------
    Definition; the first law with electrical work n F E.

    Example
    -------
    Water into hydrogen and oxygen.

    >>> f"{thermoneutral_volts(285_830.0, electrons=2):.3f}"
    '1.481'
    """
    heat = finite("enthalpy_j_mol", enthalpy_j_mol)
    return np.asarray(heat / (_electrons(electrons) * FARADAY_C_MOL))


def winning_gibbs_j_mol(metal: Metal) -> float:
    """Gibbs energy that winning one mole of metal takes, with oxygen on the anode.

    M^n+ + (n/2) H2O = M + (n/4) O2 + n H+, at 25 degC and unit activities, from Gibbs energies of
    formation: an estimate made apart from every table of potentials. For nickel it lies 20 mV
    below the recent tables, whose potential is another measurement.

    Parameters
    ----------
    metal : Metal
        The metal, at the valency of its ion.

    Returns
    -------
    float
        Gibbs energy, J/mol of metal; positive.

    Raises
    ------
    UnknownName
        If no Gibbs energy of formation of the ion is held here.

    Source
    ------
    Wagman et al., J. Phys. Chem. Ref. Data 11, Suppl. 2 (1982); see `ION_FORMATION`.

    Example
    -------
    >>> from server.science.constants import COPPER
    >>> f"{-volts_from_gibbs(winning_gibbs_j_mol(COPPER), 2):.4f}"
    '0.8895'
    """
    water_moles = metal.electrons / 2
    return -water_moles * WATER_FORMATION.gibbs_j_mol - _ion(metal).gibbs_j_mol


def winning_enthalpy_j_mol(metal: Metal) -> float:
    """Enthalpy that winning one mole of metal takes, with oxygen on the anode.

    The reaction of `winning_gibbs_j_mol`, at 25 degC; with `thermoneutral_volts` it says where a
    cell starts to heat its electrolyte.

    Parameters
    ----------
    metal : Metal
        The metal, at the valency of its ion.

    Returns
    -------
    float
        Enthalpy, J/mol of metal; positive.

    Raises
    ------
    UnknownName
        If no enthalpy of formation of the ion is held here.

    Source
    ------
    Wagman et al., J. Phys. Chem. Ref. Data 11, Suppl. 2 (1982); see `ION_FORMATION`.

    Example
    -------
    >>> from server.science.constants import COPPER
    >>> f"{thermoneutral_volts(winning_enthalpy_j_mol(COPPER), 2):.3f}"
    '1.146'
    """
    water_moles = metal.electrons / 2
    return -water_moles * WATER_FORMATION.enthalpy_j_mol - _ion(metal).enthalpy_j_mol


def _ion(metal: Metal) -> Formation:
    """Formation of the metal's ion, or a refusal that says what is held."""
    if (metal.symbol, metal.electrons) not in ION_FORMATION:
        known = [f"{symbol} with {electrons}" for symbol, electrons in ION_FORMATION]
        found = f"{metal.symbol} with {metal.electrons}"
        raise UnknownName("formation of the ion (metal and electrons)", found, known)
    return ION_FORMATION[metal.symbol, metal.electrons]


def _electrons(electrons: int) -> int:
    """The number of electrons, once it is certain that some are exchanged."""
    if electrons < 1:
        raise OutOfRange("electrons", found=electrons, allowed="1 or more")
    return electrons
