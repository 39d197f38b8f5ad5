"""How fast ions diffuse: in pure water, in a bath, and copper as measured in refineries."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.constants import GAS_CONSTANT_J_MOL_K, STANDARD_TEMPERATURE_K
from server.science.electrode.arrhenius import arrhenius_at
from server.science.electrolyte.water import liquid_k, water_viscosity_pa_s
from server.science.errors import UnknownName
from server.science.ranges import Range

# At 25 degC and infinite dilution, m2/s. Looked up in the public table of diffusion coefficients
# of the water chemistry program aqion, which takes them from the database phreeqc.dat and, for Fe3+
# and Co2+, from P. Vanysek's table in the CRC Handbook; Ni2+ from R T lambda / (z F^2) with the
# handbook's 49.6 S cm2 per equivalent (looked up in a data table of the library chemicals).
ION_DIFFUSIVITIES_M2_S: dict[str, float] = {
    "H+": 9.31e-9,
    "Cu2+": 0.733e-9,
    "Zn2+": 0.715e-9,
    "Ni2+": 0.660e-9,
    "Co2+": 0.732e-9,
    "Mn2+": 0.688e-9,
    "Cd2+": 0.717e-9,
    "Fe2+": 0.719e-9,
    "Fe3+": 0.604e-9,
    "Mg2+": 0.705e-9,
    "HSO4-": 1.33e-9,
}
# Ours: tables of limiting values differ by 3 %; the way from pure water to a bath by viscosity
# alone is good to some 20 % (ion pairs with sulfate, acid that carries the current).
ION_U_SHARE = 0.20
# M. S. Moats, J. B. Hiskey and co-workers, Hydrometallurgy 56 (2000) 255, abstract (looked up).
COPPER_ACTIVATION_J_MOL = 19_200.0
# J. Appl. Electrochem. 37 (2007) 1093, abstract (looked up): industrial refining electrolytes.
INDUSTRIAL_COPPER_ACTIVATION_J_MOL = 26_800.0
# From memory: 6 to 10 times 1e-10 m2/s is the order of magnitude at 60 degC in copper refining.
COPPER_REFERENCE_M2_S = 8.0e-10
# The temperature to which the figure above belongs: 60 degC.
COPPER_REFERENCE_K = 333.15
# Half of 6 to 10 over the square root of 3, as a share of 8: a rectangle's standard uncertainty.
COPPER_REFERENCE_U_SHARE = 0.144
# Half the distance of the two activation energies above over the square root of 3, J/mol.
COPPER_ACTIVATION_U_J_MOL = 2_200.0
# M. S. Moats, J. B. Hiskey and co-workers, as above: what they measured.
COPPER_DIFFUSION_RANGES = (
    Range("metal_g_l", 35.0, 70.0),
    Range("acid_g_l", 160.0, 250.0),
    Range("temperature_k", 313.15, 338.15),
)


def ion_diffusivity_m2_s(
    ion: str, temperature_k: ArrayLike, viscosity_pa_s: ArrayLike | None = None
) -> Numbers:
    """Diffusivity of an ion, from its value in pure water and the viscosity of the bath.

    D = D25 (T / 298.15 K) (viscosity of water at 25 degC / viscosity of the bath): an ion drags
    the same shell of water through any bath. With a bath's viscosity its standard uncertainty is
    `ION_U_SHARE`; in pure water a few per cent.

    Parameters
    ----------
    ion : str
        Ion as in `ION_DIFFUSIVITIES_M2_S`, such as "Zn2+".
    temperature_k : array_like, shape S
        Temperature, K; 258.15 to 423.15.
    viscosity_pa_s : array_like, broadcast with S, optional
        Viscosity of the bath at that temperature, Pa s; above zero. Pure water when not given.

    Returns
    -------
    ndarray, broadcast shape
        Diffusivity, m2/s. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If the ion is not in the table; it offers the near ones.
    OutOfRange
        If a viscosity is not above zero or no bath is liquid at a temperature.

    Source
    ------
    A. Einstein, Ann. Phys. 322 (1905) 549, with Stokes' law; values: `ION_DIFFUSIVITIES_M2_S`.

    Example
    -------
    Zinc at 38 degC in a bath of 1.73 mPa s.

    >>> f"{ion_diffusivity_m2_s('Zn2+', 311.15, 1.73e-3):.2e}"
    '3.84e-10'
    """
    if ion not in ION_DIFFUSIVITIES_M2_S:
        raise UnknownName("ion", ion, ION_DIFFUSIVITIES_M2_S)
    kelvin = liquid_k(temperature_k)
    thickness = water_viscosity_pa_s(kelvin) if viscosity_pa_s is None else viscosity_pa_s
    drag = above_zero("viscosity_pa_s", thickness) / water_viscosity_pa_s(STANDARD_TEMPERATURE_K)
    warmth = kelvin / STANDARD_TEMPERATURE_K
    return np.asarray(ION_DIFFUSIVITIES_M2_S[ion] * warmth / drag)


def copper_diffusivity_m2_s(
    temperature_k: ArrayLike,
    reference_m2_s: ArrayLike = COPPER_REFERENCE_M2_S,
    reference_k: ArrayLike = COPPER_REFERENCE_K,
    activation_j_mol: ArrayLike = COPPER_ACTIVATION_J_MOL,
) -> Numbers:
    """Diffusivity of copper(II) in an acid sulfate bath of refining or winning.

    A known value, carried to another temperature by Arrhenius. The activation energy is
    published; the value at 60 degC is from memory and good to 14 %, so a plant that knows its own
    gives it. Copper and acid lower it slightly, arsenic too.

    Parameters
    ----------
    temperature_k : array_like, shape S
        Temperature wanted, K; above zero. Measured were 313.15 to 338.15 K.
    reference_m2_s : array_like, broadcast with S
        Known diffusivity, m2/s; not negative.
    reference_k : array_like, broadcast with S
        Temperature at which it is known, K; above zero.
    activation_j_mol : array_like, broadcast with S
        Activation energy, J/mol.

    Returns
    -------
    ndarray, broadcast shape
        Diffusivity, m2/s. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is not above zero or a diffusivity is negative.

    Source
    ------
    M. S. Moats, J. B. Hiskey and co-workers, Hydrometallurgy 56 (2000) 255 (activation energy,
    looked up in the abstract); the value at 60 degC is from memory.

    Example
    -------
    >>> f"{copper_diffusivity_m2_s(318.15):.2e}"
    '5.77e-10'
    """
    known = not_negative("reference_m2_s", reference_m2_s)
    return arrhenius_at(known, activation_j_mol, reference_k, temperature_k)


def copper_diffusivity_with_doubt(
    temperature_k: ArrayLike,
    reference_m2_s: ArrayLike = COPPER_REFERENCE_M2_S,
    reference_k: ArrayLike = COPPER_REFERENCE_K,
    reference_u_share: ArrayLike = COPPER_REFERENCE_U_SHARE,
) -> tuple[Numbers, Numbers]:
    """Diffusivity of copper(II) in an acid bath, with its standard uncertainty.

    As `copper_diffusivity_m2_s`. Its uncertainty is that of the known value and, the further the
    temperature is from it the more, that of the activation energy: two publications differ by
    7.6 kJ/mol.

    Parameters
    ----------
    temperature_k : array_like, shape S
        Temperature wanted, K; above zero.
    reference_m2_s : array_like, broadcast with S
        Known diffusivity, m2/s; not negative.
    reference_k : array_like, broadcast with S
        Temperature at which it is known, K; above zero.
    reference_u_share : array_like, broadcast with S
        Relative standard uncertainty of the known value, as a share; not negative.

    Returns
    -------
    tuple of two ndarrays, broadcast shape
        Diffusivity and its standard uncertainty, m2/s. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is not above zero, or a diffusivity or uncertainty is negative.

    Source
    ------
    As `copper_diffusivity_m2_s`; JCGM 100:2008, 5.1.2, eq. (10).

    Example
    -------
    >>> value, doubt = copper_diffusivity_with_doubt(318.15)
    >>> f"{value:.1e} +- {doubt:.1e}"
    '5.8e-10 +- 8.6e-11'
    """
    value = copper_diffusivity_m2_s(temperature_k, reference_m2_s, reference_k)
    distance = 1.0 / above_zero("reference_k", reference_k) - 1.0 / np.asarray(temperature_k)
    carried = COPPER_ACTIVATION_U_J_MOL / GAS_CONSTANT_J_MOL_K * distance
    known = not_negative("reference_u_share", reference_u_share)
    return value, np.asarray(value * np.hypot(known, carried))
