"""Activities of the metal's ion and of acid in sulfate solutions, from what the plant measures."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.constants import Metal
from server.science.errors import UnknownName
from server.science.ranges import Range
from server.science.stoichiometry import SULFURIC_ACID_KG_MOL


@dataclass(frozen=True)
class SulfateFit:
    """Coefficients of Pitzer's equation for one metal sulfate in water at 25 degC."""

    beta_0: float
    beta_1: float
    beta_2: float
    c_phi: float
    highest_mol_kg: float

    @property
    def molality_range(self) -> Range:
        """Give the molalities to which the coefficients were fitted."""
        return Range("mol_kg", 0.0, self.highest_mol_kg)


# P. M. May, D. Rowland, G. Hefter and E. Koenigsberger, J. Chem. Eng. Data 56 (2011) 5066,
# doi:10.1021/je2009329; looked up in the database of a public library that names the paper.
SULFATE_FITS: dict[str, SulfateFit] = {
    "Cu": SulfateFit(0.2281, 2.505, -50.28, 0.005787, 1.42),
    "Zn": SulfateFit(0.1991, 2.63, -37.74, 0.02892, 3.5),
    "Ni": SulfateFit(0.1594, 2.944, -50.94, 0.04078, 2.5),
    "Mn": SulfateFit(0.2139, 2.875, -52.32, 0.01497, 4.966),
    "Cd": SulfateFit(0.2072, 2.564, -45.05, 0.01071, 3.5),
}
# Debye and Hueckel's slope for the osmotic coefficient of water at 25 degC, from memory of Pitzer's
# papers; the same library uses 0.3915 too.
DEBYE_HUECKEL_SLOPE = 0.3915
# Pitzer's b for all electrolytes, and his two alphas for salts of 2-2 type (from memory).
PITZER_B, PITZER_ALPHA_1, PITZER_ALPHA_2 = 1.2, 1.4, 12.0
# Sulfuric acid in water at 25 degC, mol/kg and mean activity coefficient: R. A. Robinson and R. H.
# Stokes, Electrolyte Solutions, appendix 8.10. Looked up to 1 mol/kg in a public test suite quoting
# a handbook; above 1 mol/kg from memory. Later evaluations lie some 5 per cent lower.
ACID_COEFFICIENTS: dict[float, float] = {
    0.1: 0.2655,
    0.2: 0.2090,
    0.3: 0.1826,
    0.5: 0.1557,
    0.7: 0.1417,
    1.0: 0.1316,
    1.5: 0.1263,
    2.0: 0.1276,
    2.5: 0.1331,
    3.0: 0.1422,
}
# Ends of the table above.
ACID_RANGE = Range("mol_kg", 0.1, 3.0)


@dataclass(frozen=True)
class Activities:
    """Activities of the metal's ion and of the hydrogen ion, for Nernst's equation.

    A single ion's activity is a convention; here the sulfate ion is given the mean coefficient of
    the metal's sulfate. The voltage of a winning cell, which asks for acid squared over metal,
    does not depend on that convention.
    """

    metal: Numbers
    acid: Numbers


def molality_mol_kg(mol_m3: ArrayLike, water_kg_m3: ArrayLike = 1000.0) -> Numbers:
    """Moles per kilogram of water, from moles per cubic metre of solution.

    A winning electrolyte holds about 900 kg of water in a cubic metre: its density less what is
    dissolved. With the 1000 that stand in, molality is 10 % too low there, which moves a
    potential of two electrons by little more than 1 mV.

    Parameters
    ----------
    mol_m3 : array_like, shape S
        Concentration, mol/m3; not negative.
    water_kg_m3 : array_like, broadcast with S
        Water in the solution, kg/m3; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Molality, mol/kg. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a concentration is negative or the water is not above zero.

    Source
    ------
    Definition; IUPAC Green Book, 3rd ed. (2007), p. 48.

    Example
    -------
    >>> f"{molality_mol_kg(630.0, water_kg_m3=910.0):.3f}"
    '0.692'
    """
    return np.asarray(not_negative("mol_m3", mol_m3) / above_zero("water_kg_m3", water_kg_m3))


def sulfate_coefficient(symbol: str, mol_kg: ArrayLike) -> Numbers:
    """Mean activity coefficient of a metal sulfate alone in water at 25 degC.

    Pitzer's equation for salts of 2-2 type. Low, 0.04 to 0.15 where plants work, because the ions
    pair. Beside acid the sulfate of the acid counts too; the value at the salt's own molality is
    then a guess that may be wrong by half, 5 to 9 mV in a potential.

    Parameters
    ----------
    symbol : str
        Chemical symbol of the metal: Cu, Zn, Ni, Mn or Cd.
    mol_kg : array_like, any shape
        Molality of the sulfate, mol/kg of water; not negative; fitted up to `highest_mol_kg` of
        its coefficients.

    Returns
    -------
    ndarray, same shape
        Mean molal activity coefficient, without unit. NaN where the molality is NaN.

    Raises
    ------
    UnknownName
        If no coefficients of that sulfate are held here.
    OutOfRange
        If a molality is negative.

    Source
    ------
    K. S. Pitzer and G. Mayorga, J. Solution Chem. 3 (1974) 539 (form, from memory); coefficients:
    `SULFATE_FITS`.

    Example
    -------
    >>> f"{sulfate_coefficient('Zn', 1.0):.4f}"
    '0.0438'
    """
    if symbol not in SULFATE_FITS:
        raise UnknownName("sulfate with known activity coefficients", symbol, SULFATE_FITS)
    fit = SULFATE_FITS[symbol]
    molality = not_negative("mol_kg", mol_kg)
    root = np.sqrt(4.0 * molality)
    around = root / (1.0 + PITZER_B * root) + 2.0 / PITZER_B * np.log1p(PITZER_B * root)
    pairs = (
        2.0 * fit.beta_0
        + fit.beta_1 * _fading(PITZER_ALPHA_1 * root)
        + fit.beta_2 * _fading(PITZER_ALPHA_2 * root)
    )
    logarithm = (
        -4.0 * DEBYE_HUECKEL_SLOPE * around + molality * pairs + 1.5 * fit.c_phi * molality**2
    )
    return np.asarray(np.exp(logarithm))


def acid_coefficient(mol_kg: ArrayLike) -> Numbers:
    """Mean activity coefficient of sulfuric acid alone in water at 25 degC.

    Read between the entries of a table, straight in the logarithms. Outside `ACID_RANGE` the
    nearest entry stands in. Counted as if all the acid gave two hydrogen ions, as such tables do.

    Parameters
    ----------
    mol_kg : array_like, any shape
        Molality of the acid, mol/kg of water; above zero.

    Returns
    -------
    ndarray, same shape
        Mean molal activity coefficient, without unit. NaN where the molality is NaN.

    Raises
    ------
    OutOfRange
        If a molality is not above zero.

    Source
    ------
    R. A. Robinson and R. H. Stokes, Electrolyte Solutions, appendix 8.10; see `ACID_COEFFICIENTS`.

    Example
    -------
    >>> f"{acid_coefficient(1.0):.4f}"
    '0.1316'
    """
    molality = above_zero("mol_kg", mol_kg)
    entries = np.log(list(ACID_COEFFICIENTS))
    read = np.interp(np.log(molality), entries, np.log(list(ACID_COEFFICIENTS.values())))
    return np.asarray(np.exp(read))


def sulfate_activities(
    metal: Metal, metal_g_l: ArrayLike, acid_g_l: ArrayLike, water_kg_m3: ArrayLike = 1000.0
) -> Activities:
    """Activities in an electrolyte of metal sulfate and sulfuric acid, at 25 degC.

    Metal: molality times the mean coefficient of its sulfate. Acid: the root of
    (2 m)^2 g_acid^3 / g_salt, so that the pair gives the right voltage of the winning reaction.
    Each coefficient is taken at the molality of its own substance as if the other were not there:
    the voltage is good to about 10 mV. Other salts in the solution are left out.

    Parameters
    ----------
    metal : Metal
        The metal; Cu, Zn, Ni, Mn or Cd.
    metal_g_l : array_like, shape S
        Metal in solution, g/L; above zero.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid, g/L; above zero. Where only a pH is known, the acid's activity is
        10^-pH instead.
    water_kg_m3 : array_like, broadcast with S
        Water in the solution, kg/m3; above zero.

    Returns
    -------
    Activities
        Of the metal's ion and the hydrogen ion, arrays of the broadcast shape. NaN where an input
        is NaN.

    Raises
    ------
    UnknownName
        If no coefficients of the metal's sulfate are held here.
    OutOfRange
        If a concentration or the water is not above zero.

    Source
    ------
    Mean activities of the cell reaction M2+ + H2O = M + 1/2 O2 + 2 H+, worked out here.

    Example
    -------
    A copper electrolyte of 40 g/L copper and 180 g/L acid.

    >>> from server.science.constants import COPPER
    >>> found = sulfate_activities(COPPER, 40.0, 180.0, water_kg_m3=910.0)
    >>> f"{found.metal:.3f} and {found.acid:.2f}"
    '0.035 and 0.82'
    """
    # A gram per litre is a kilogram per cubic metre.
    metal_mol_m3 = above_zero("metal_g_l", metal_g_l) / metal.molar_mass_kg_mol
    acid_mol_m3 = above_zero("acid_g_l", acid_g_l) / SULFURIC_ACID_KG_MOL
    metal_mol_kg = molality_mol_kg(metal_mol_m3, water_kg_m3)
    acid_mol_kg = molality_mol_kg(acid_mol_m3, water_kg_m3)
    salt = sulfate_coefficient(metal.symbol, metal_mol_kg)
    acid = 2.0 * acid_mol_kg * np.sqrt(acid_coefficient(acid_mol_kg) ** 3 / salt)
    return Activities(*np.broadcast_arrays(metal_mol_kg * salt, acid))


def _fading(distance: Numbers) -> Numbers:
    """Pitzer's function of alpha times the root of ionic strength, twice his g."""
    # At zero it would be 0/0; its limit there is 2.
    safe = np.where(distance == 0.0, 1.0, distance)
    value = 2.0 / safe**2 * (1.0 - (1.0 + safe - safe**2 / 2.0) * np.exp(-safe))
    return np.asarray(np.where(distance == 0.0, 2.0, value))
