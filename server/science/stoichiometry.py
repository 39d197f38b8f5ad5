"""What the other electrode makes: oxygen and acid beside the metal, hydrogen in its stead."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, not_negative
from server.science.constants import (
    FARADAY_C_MOL,
    HYDROGEN_KG_MOL,
    IDEAL_GAS_M3_MOL,
    OXYGEN_KG_MOL,
    SULFUR_KG_MOL,
    Metal,
)

# Sum of the atomic weights: 2 H + S + 4 O.
SULFURIC_ACID_KG_MOL = 2 * HYDROGEN_KG_MOL + SULFUR_KG_MOL + 4 * OXYGEN_KG_MOL


def oxygen_made_kg(metal_kg: ArrayLike, metal: Metal) -> Numbers:
    """Oxygen that an inert anode gives off while metal is won.

    Four electrons make one O2. For electrowinning from sulfate with all anode current making
    oxygen; manganese dioxide or chlorine on the anode takes its share away. Current that makes no
    metal makes oxygen too and is not counted here.

    Parameters
    ----------
    metal_kg : array_like, any shape
        Metal won, kg; not negative.
    metal : Metal
        The metal won.

    Returns
    -------
    ndarray, same shape
        Oxygen, kg. NaN where the mass is NaN.

    Raises
    ------
    OutOfRange
        If any mass is negative or infinite.

    Source
    ------
    Stoichiometry of M(n+) + (n/2) H2O = M + (n/4) O2 + n H+.

    Example
    -------
    >>> from server.science.constants import COPPER
    >>> f"{oxygen_made_kg(1.0, COPPER):.5f}"
    '0.25177'
    """
    moles = not_negative("metal_kg", metal_kg) / metal.molar_mass_kg_mol
    return np.asarray(moles * metal.electrons / 4.0 * 2.0 * OXYGEN_KG_MOL)


def sulfuric_acid_made_kg(metal_kg: ArrayLike, metal: Metal) -> Numbers:
    """Sulfuric acid that the electrolyte gains while metal is won from sulfate.

    Two hydrogen ions are left for every two electrons, one H2SO4. For electrowinning; in
    electrorefining the anode gives back what the cathode takes and no acid is made.

    Parameters
    ----------
    metal_kg : array_like, any shape
        Metal won, kg; not negative.
    metal : Metal
        The metal won.

    Returns
    -------
    ndarray, same shape
        Sulfuric acid, kg. NaN where the mass is NaN.

    Raises
    ------
    OutOfRange
        If any mass is negative or infinite.

    Source
    ------
    Stoichiometry of M(n+) + (n/2) H2O = M + (n/4) O2 + n H+.

    Example
    -------
    >>> from server.science.constants import COPPER
    >>> f"{sulfuric_acid_made_kg(1.0, COPPER):.4f}"
    '1.5433'
    """
    moles = not_negative("metal_kg", metal_kg) / metal.molar_mass_kg_mol
    return np.asarray(moles * metal.electrons / 2.0 * SULFURIC_ACID_KG_MOL)


def hydrogen_made_m3(charge_c: ArrayLike) -> Numbers:
    """Hydrogen that a charge gives off at the cathode, as dry gas at 0 degC and 101.325 kPa.

    Two electrons make one H2, taken as an ideal gas. At 40 degC the volume is 15 % more, and wet
    gas more again: size ventilation with that in mind.

    Parameters
    ----------
    charge_c : array_like, any shape
        Charge lost to hydrogen, C; not negative.

    Returns
    -------
    ndarray, same shape
        Volume, m3. NaN where the charge is NaN.

    Raises
    ------
    OutOfRange
        If any charge is negative or infinite.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77; molar volume as in CODATA.

    Example
    -------
    Litres from one ampere-hour.

    >>> f"{hydrogen_made_m3(3600.0) * 1000:.4f}"
    '0.4181'
    """
    moles = not_negative("charge_c", charge_c) / (2.0 * FARADAY_C_MOL)
    return np.asarray(moles * IDEAL_GAS_M3_MOL)
