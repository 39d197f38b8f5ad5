"""Sulfates as a bath holds them, and the metals that a laboratory reports instead."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, not_negative
from server.science.constants import (
    CADMIUM,
    COBALT,
    COPPER,
    HYDROGEN_KG_MOL,
    IRON,
    MAGNESIUM,
    MANGANESE,
    NICKEL,
    OXYGEN_KG_MOL,
    SULFUR_KG_MOL,
    ZINC,
)
from server.science.errors import UnknownName

# IUPAC standard atomic weight of nitrogen (CIAAW 2021), abridged conventional value.
NITROGEN_KG_MOL = 14.007e-3
# IUPAC standard atomic weight of sodium (CIAAW 2021), 22.98976928(2).
SODIUM_KG_MOL = 22.98976928e-3
# IUPAC standard atomic weight of potassium (CIAAW 2021), 39.0983(1).
POTASSIUM_KG_MOL = 39.0983e-3
# Sum of the atomic weights of S and four O.
SULFATE_KG_MOL = SULFUR_KG_MOL + 4.0 * OXYGEN_KG_MOL
# Sum of the atomic weights of N and four H.
AMMONIUM_KG_MOL = NITROGEN_KG_MOL + 4.0 * HYDROGEN_KG_MOL
# Sum of the atomic weights: two H and a sulfate.
SULFURIC_ACID_KG_MOL = 2.0 * HYDROGEN_KG_MOL + SULFATE_KG_MOL


@dataclass(frozen=True)
class Sulfate:
    """A sulfate without its water of crystals: what a mole of it weighs, and the metal therein."""

    formula: str
    cation_kg_mol: float
    molar_mass_kg_mol: float

    @property
    def salt_per_cation(self) -> float:
        """Mass of salt that holds one mass of the cation."""
        return self.molar_mass_kg_mol / self.cation_kg_mol


def _sulfate(formula: str, cation_kg_mol: float, cations: int = 1, sulfates: int = 1) -> Sulfate:
    """A sulfate from the weight of one cation and how many of each it holds."""
    held = cations * cation_kg_mol
    return Sulfate(formula, held, held + sulfates * SULFATE_KG_MOL)


# Sulfates by the name under which a laboratory reports their cation; formulas are common
# knowledge. Iron is taken as ferrous, which is what most of it is; ferric has its own name.
SULFATES: dict[str, Sulfate] = {
    "Cu": _sulfate("CuSO4", COPPER.molar_mass_kg_mol),
    "Zn": _sulfate("ZnSO4", ZINC.molar_mass_kg_mol),
    "Ni": _sulfate("NiSO4", NICKEL.molar_mass_kg_mol),
    "Co": _sulfate("CoSO4", COBALT.molar_mass_kg_mol),
    "Fe": _sulfate("FeSO4", IRON.molar_mass_kg_mol),
    "Fe3+": _sulfate("Fe2(SO4)3", IRON.molar_mass_kg_mol, cations=2, sulfates=3),
    "Mn": _sulfate("MnSO4", MANGANESE.molar_mass_kg_mol),
    "Cd": _sulfate("CdSO4", CADMIUM.molar_mass_kg_mol),
    "Mg": _sulfate("MgSO4", MAGNESIUM.molar_mass_kg_mol),
    "Na": _sulfate("Na2SO4", SODIUM_KG_MOL, cations=2),
    "K": _sulfate("K2SO4", POTASSIUM_KG_MOL, cations=2),
    "NH4": _sulfate("(NH4)2SO4", AMMONIUM_KG_MOL, cations=2),
}


def sulfate(symbol: str) -> Sulfate:
    """The sulfate of a cation.

    Capitals or not. Only those for which the density of a solution is known here.

    Parameters
    ----------
    symbol : str
        Cation as in `SULFATES`: a metal's symbol, "Fe3+" or "NH4".

    Returns
    -------
    Sulfate
        The sulfate without its water of crystals.

    Raises
    ------
    UnknownName
        If no sulfate of that cation is known; it offers the near names.

    Source
    ------
    `SULFATES`, with the IUPAC standard atomic weights.

    Example
    -------
    >>> f"{sulfate('Cu').molar_mass_kg_mol * 1000:.3f}"
    '159.602'
    """
    for known, found in SULFATES.items():
        if known.lower() == symbol.strip().lower():
            return found
    raise UnknownName("cation of a sulfate", symbol, SULFATES)


def salt_g_l_from_metal(metal_g_l: ArrayLike, symbol: str) -> Numbers:
    """Sulfate without water of crystals that holds a concentration of metal.

    Parameters
    ----------
    metal_g_l : array_like, any shape
        Concentration of the metal (or of ammonium), g/L; not negative.
    symbol : str
        Cation as in `SULFATES`.

    Returns
    -------
    ndarray, same shape
        Concentration of the sulfate, g/L. NaN where the input is NaN.

    Raises
    ------
    UnknownName
        If no sulfate of that cation is known.
    OutOfRange
        If a concentration is negative or infinite.

    Source
    ------
    Conservation of mass, with the IUPAC standard atomic weights.

    Example
    -------
    >>> f"{salt_g_l_from_metal(45.0, 'Cu'):.3f}"
    '113.022'
    """
    known = sulfate(symbol)
    return np.asarray(not_negative(f"{symbol}_g_l", metal_g_l) * known.salt_per_cation)


def metal_g_l_from_salt(salt_g_l: ArrayLike, symbol: str) -> Numbers:
    """Metal held by a concentration of its sulfate without water of crystals.

    Parameters
    ----------
    salt_g_l : array_like, any shape
        Concentration of the sulfate, g/L; not negative.
    symbol : str
        Cation as in `SULFATES`.

    Returns
    -------
    ndarray, same shape
        Concentration of the metal, g/L. NaN where the input is NaN.

    Raises
    ------
    UnknownName
        If no sulfate of that cation is known.
    OutOfRange
        If a concentration is negative or infinite.

    Source
    ------
    Conservation of mass, with the IUPAC standard atomic weights.

    Example
    -------
    >>> f"{metal_g_l_from_salt(159.602, 'Cu'):.3f}"
    '63.546'
    """
    known = sulfate(symbol)
    return np.asarray(not_negative(f"{known.formula}_g_l", salt_g_l) / known.salt_per_cation)


def bath_g_l(metals_g_l: Mapping[str, ArrayLike], acid_g_l: ArrayLike = 0.0) -> dict[str, Numbers]:
    """A bath's salts and acid, from what the laboratory reports of it.

    Every cation is taken as its sulfate; free acid is that which no metal holds. What is neither
    (chloride, arsenic, glue) is left out.

    Parameters
    ----------
    metals_g_l : mapping of str to array_like
        Concentration of each cation, g/L, by its name in `SULFATES`; not negative.
    acid_g_l : array_like
        Free sulfuric acid, g/L; not negative.

    Returns
    -------
    dict of str to ndarray
        Concentrations by formula, g/L, as `density_kg_m3` and `viscosity_pa_s` take them.

    Raises
    ------
    UnknownName
        If no sulfate of a cation is known.
    OutOfRange
        If a concentration is negative or infinite.

    Source
    ------
    Conservation of mass, with the IUPAC standard atomic weights.

    Example
    -------
    >>> bath = bath_g_l({"Cu": 40.0, "Ni": 10.0}, acid_g_l=180.0)
    >>> {formula: f"{g_l:.1f}" for formula, g_l in bath.items()}
    {'CuSO4': '100.5', 'NiSO4': '26.4', 'H2SO4': '180.0'}
    """
    bath = {
        sulfate(symbol).formula: salt_g_l_from_metal(metal_g_l, symbol)
        for symbol, metal_g_l in metals_g_l.items()
    }
    return {**bath, "H2SO4": not_negative("acid_g_l", acid_g_l)}
