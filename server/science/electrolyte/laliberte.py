"""Density and viscosity of sulfate solutions by the model of Laliberte."""

from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, not_negative
from server.science.constants import ZERO_CELSIUS_K
from server.science.electrolyte.laliberte_fits import SALT_FITS, SaltFit
from server.science.electrolyte.water import (
    liquid_k,
    water_density_kg_m3,
    water_viscosity_pa_s,
)
from server.science.errors import OutOfRange, UnknownName, WrongShape
from server.science.ranges import Range

# M. Laliberte and W. E. Cooper, J. Chem. Eng. Data 49 (2004) 1141, abstract (looked up): standard
# deviation of 1600 measured densities of solutions of two or more salts from the model.
DENSITY_SD_KG_M3 = 1.39
# Ours: the largest difference from the CRC Handbook's viscosities at 20 degC up to 15 % of CuSO4,
# ZnSO4 and H2SO4 is 3 %; the paper's own figure (3.7 % of a single salt) is from memory.
VISCOSITY_U_SHARE = 0.04
# What the fits were made from, by property and formula; sources as in `SALT_FITS`.
LALIBERTE_RANGES: dict[str, dict[str, tuple[Range, ...]]] = {
    "density": {formula: fit.density_ranges for formula, fit in SALT_FITS.items()},
    "viscosity": {formula: fit.viscosity_ranges for formula, fit in SALT_FITS.items()},
}
# A step of the iteration gains a digit or more in any bath; a bath that needs this many has none.
_MOST_STEPS = 100
# Relative, far below the model's own error and above the rounding of a float.
_SETTLED = 1e-12


def _broadcast(
    amounts: Mapping[str, ArrayLike], temperature_k: ArrayLike, unit: str
) -> tuple[dict[SaltFit, Numbers], Numbers]:
    """Amounts by fit and degrees Celsius, all of one shape."""
    for formula in amounts:
        if formula not in SALT_FITS:
            raise UnknownName("salt", formula, SALT_FITS)
    checked = [not_negative(f"{formula}_{unit}", amount) for formula, amount in amounts.items()]
    celsius = liquid_k(temperature_k) - ZERO_CELSIUS_K
    try:
        *spread, celsius = np.broadcast_arrays(*checked, celsius)
    except ValueError as problem:
        found = ", ".join(str(amount.shape) for amount in checked)
        raise WrongShape("salts", found, "shapes that broadcast") from problem
    return dict(zip((SALT_FITS[formula] for formula in amounts), spread, strict=True)), celsius


def _apparent_m3_kg(fit: SaltFit, dissolved: Numbers, celsius: Numbers) -> Numbers:
    """Volume that a kilogram of the salt seems to take; NaN where the fit has no value."""
    c0, c1, c2, c3, c4 = fit.density
    weight = (c0 * dissolved + c1) * np.exp(1e-6 * (celsius + c4) ** 2)
    volume = dissolved + c2 + c3 * celsius
    return np.asarray(
        np.divide(volume, weight, where=weight > 0.0, out=np.full_like(weight, np.nan))
    )


def density_from_shares_kg_m3(shares: Mapping[str, ArrayLike], temperature_k: ArrayLike) -> Numbers:
    """Density of a solution whose composition is known by mass.

    Volumes add: 1/rho = w_water/rho_water + sum of w_i v_i, where the volume v_i that a salt
    seems to take depends on temperature and on the share of everything dissolved. For solutions
    of several salts the standard deviation is `DENSITY_SD_KG_M3`; `outside_data` says what has
    been stretched beyond its data.

    Parameters
    ----------
    shares : mapping of str to array_like, shapes that broadcast
        Mass shares of the salts by formula, as in `SALT_FITS`; not negative, together below 1.
    temperature_k : array_like, broadcast with the shares
        Temperature, K; 258.15 to 423.15.

    Returns
    -------
    ndarray, broadcast shape
        Density, kg/m3. NaN where an input is NaN, or where the fit of a salt has no value.

    Raises
    ------
    UnknownName
        If a salt has no fit.
    OutOfRange
        If a share is negative, all together are not below 1, or no bath is liquid there.
    WrongShape
        If the inputs do not broadcast.

    Source
    ------
    M. Laliberte and W. E. Cooper, J. Chem. Eng. Data 49 (2004) 1141; coefficients `SALT_FITS`.

    Example
    -------
    Ten per cent copper sulfate at 20 degC.

    >>> f"{density_from_shares_kg_m3({'CuSO4': 0.10}, 293.15):.1f}"
    '1107.5'
    """
    held, celsius = _broadcast(shares, temperature_k, "share")
    dissolved = _dissolved(held, celsius)
    volume = (1.0 - dissolved) / water_density_kg_m3(celsius + ZERO_CELSIUS_K)
    for fit, share in held.items():
        volume = volume + np.where(share > 0.0, share * _apparent_m3_kg(fit, dissolved, celsius), 0)
    return np.asarray(1.0 / volume)


def _dissolved(held: Mapping[SaltFit, Numbers], celsius: Numbers) -> Numbers:
    """Mass share of everything dissolved."""
    dissolved = sum(held.values(), start=np.zeros_like(celsius))
    if (dissolved >= 1.0).any():
        raise OutOfRange("dissolved_share", float(np.nanmax(dissolved)), "below 1")
    return np.asarray(dissolved)


def density_kg_m3(salts_g_l: Mapping[str, ArrayLike], temperature_k: ArrayLike) -> Numbers:
    """Density of a bath whose composition is known in grams per litre.

    As `density_from_shares_kg_m3`, solved for the density at which the concentrations are those
    given: rho = C + rho_water (1 - sum of c_i v_i(C / rho)), with C the sum of all c_i, is
    repeated until it stands still. Concentrations are those at the bath's temperature: a sample
    cooled to 20 degC for its assay reads about 1 % higher.

    Parameters
    ----------
    salts_g_l : mapping of str to array_like, shapes that broadcast
        Concentrations by formula, g/L, as in `SALT_FITS` (and from `bath_g_l`); not negative. A
        salt at zero changes nothing, and without any this is water.
    temperature_k : array_like, broadcast with the concentrations
        Temperature, K; 258.15 to 423.15.

    Returns
    -------
    ndarray, broadcast shape
        Density, kg/m3. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If a salt has no fit.
    OutOfRange
        If a concentration is negative, no bath is liquid there, or there is so much salt that no
        density fits it.
    WrongShape
        If the inputs do not broadcast.

    Source
    ------
    M. Laliberte and W. E. Cooper, J. Chem. Eng. Data 49 (2004) 1141; coefficients `SALT_FITS`.

    Example
    -------
    Copper electrowinning: 40 g/L copper, 180 g/L acid, 45 degC.

    >>> f"{density_kg_m3({'CuSO4': 100.464, 'H2SO4': 180.0}, 318.15):.1f}"
    '1190.5'
    """
    held, celsius = _broadcast(salts_g_l, temperature_k, "g_l")
    water = water_density_kg_m3(celsius + ZERO_CELSIUS_K)
    # A gram per litre is a kilogram per cubic metre.
    total = np.asarray(sum(held.values(), start=np.zeros_like(celsius)))
    density = water + total
    # Not scipy.optimize.fixed_point, which runs on as long as one element is NaN.
    for _ in range(_MOST_STEPS):
        before, taken = density, np.zeros_like(total)
        for fit, salt in held.items():
            apparent = _apparent_m3_kg(fit, total / before, celsius)
            taken = taken + np.where(salt > 0.0, salt * apparent, 0.0)
        density = np.asarray(total + water * (1.0 - taken))
        settled = (np.abs(density - before) <= _SETTLED * before) & (total < density)
        unsettled = ~settled & ~np.isnan(water + total)
        if not unsettled.any():
            return density
    crowded = float(total[unsettled].max())
    raise OutOfRange("all salts together, g/L", crowded, "less, so that a density fits them")


def mass_shares(salts_g_l: Mapping[str, ArrayLike], temperature_k: ArrayLike) -> dict[str, Numbers]:
    """Mass share of each salt of a bath that is known in grams per litre.

    Parameters
    ----------
    salts_g_l : mapping of str to array_like, shapes that broadcast
        Concentrations by formula, g/L; not negative.
    temperature_k : array_like, broadcast with the concentrations
        Temperature, K; 258.15 to 423.15.

    Returns
    -------
    dict of str to ndarray
        Share of each, in the order given; what lacks to 1 is water. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If a salt has no fit.
    OutOfRange
        As in `density_kg_m3`.
    WrongShape
        If the inputs do not broadcast.

    Source
    ------
    Definition, with the density of `density_kg_m3`.

    Example
    -------
    >>> f"{mass_shares({'H2SO4': 180.0}, 333.15)['H2SO4']:.4f}"
    '0.1650'
    """
    density = density_kg_m3(salts_g_l, temperature_k)
    return {
        formula: np.asarray(np.asarray(salt_g_l, dtype=np.float64) / density)
        for formula, salt_g_l in salts_g_l.items()
    }


def _ln_viscosity(fit: SaltFit, dissolved: Numbers, celsius: Numbers) -> Numbers:
    """Logarithm of the salt's own viscosity in mPa s; NaN where the fit has no value."""
    v1, v2, v3, v4, v5, v6 = fit.viscosity
    # Without anything dissolved the salt has no part in the mixture, and powers have no value.
    share = np.where(dissolved > 0.0, dissolved, 1.0)
    divisor = 1.0 + v5 * share**v6
    logarithm = np.log(divisor, where=divisor > 0.0, out=np.full_like(divisor, np.nan))
    return np.asarray((v1 * share**v2 + v3) / (v4 * celsius + 1.0) - logarithm)


def viscosity_from_shares_pa_s(
    shares: Mapping[str, ArrayLike], temperature_k: ArrayLike
) -> Numbers:
    """Viscosity of a solution whose composition is known by mass.

    ln mu = w_water ln mu_water + sum of w_i ln mu_i, where the mu_i of a salt depends on
    temperature and on the share of everything dissolved. The standard uncertainty is about
    `VISCOSITY_U_SHARE`, more near saturation; `outside_data` says what has been stretched.

    Parameters
    ----------
    shares : mapping of str to array_like, shapes that broadcast
        Mass shares of the salts by formula, as in `SALT_FITS`; not negative, together below 1.
    temperature_k : array_like, broadcast with the shares
        Temperature, K; 258.15 to 423.15.

    Returns
    -------
    ndarray, broadcast shape
        Dynamic viscosity, Pa s. NaN where an input is NaN, or where the fit of a salt has no
        value (copper's, with more than 0.43 of the mass dissolved).

    Raises
    ------
    UnknownName
        If a salt has no fit.
    OutOfRange
        If a share is negative, all together are not below 1, or no bath is liquid there.
    WrongShape
        If the inputs do not broadcast.

    Source
    ------
    M. Laliberte, J. Chem. Eng. Data 52 (2007) 321 (from memory), with the coefficients of ibid.
    54 (2009) 1725, DOI 10.1021/je8008123, `SALT_FITS`.

    Example
    -------
    Ten per cent copper sulfate at 20 degC.

    >>> f"{viscosity_from_shares_pa_s({'CuSO4': 0.10}, 293.15) * 1000:.3f}"
    '1.572'
    """
    held, celsius = _broadcast(shares, temperature_k, "share")
    dissolved = _dissolved(held, celsius)
    water_mpa_s = water_viscosity_pa_s(celsius + ZERO_CELSIUS_K) * 1000.0
    logarithm = (1.0 - dissolved) * np.log(water_mpa_s)
    for fit, share in held.items():
        part = share * _ln_viscosity(fit, dissolved, celsius)
        logarithm = logarithm + np.where(share > 0.0, part, 0.0)
    return np.asarray(np.exp(logarithm) / 1000.0)


def viscosity_pa_s(salts_g_l: Mapping[str, ArrayLike], temperature_k: ArrayLike) -> Numbers:
    """Viscosity of a bath whose composition is known in grams per litre.

    As `viscosity_from_shares_pa_s`, with the mass shares that the model's density gives.

    Parameters
    ----------
    salts_g_l : mapping of str to array_like, shapes that broadcast
        Concentrations by formula, g/L, as in `SALT_FITS`; not negative.
    temperature_k : array_like, broadcast with the concentrations
        Temperature, K; 258.15 to 423.15.

    Returns
    -------
    ndarray, broadcast shape
        Dynamic viscosity, Pa s. NaN where an input is NaN or the fit of a salt has no value.

    Raises
    ------
    UnknownName
        If a salt has no fit.
    OutOfRange
        As in `density_kg_m3`.
    WrongShape
        If the inputs do not broadcast.

    Source
    ------
    As `viscosity_from_shares_pa_s`.

    Example
    -------
    Copper refining: 45 g/L copper, 180 g/L acid, 60 degC.

    >>> f"{viscosity_pa_s({'CuSO4': 113.022, 'H2SO4': 180.0}, 333.15) * 1000:.3f}"
    '0.902'
    """
    return viscosity_from_shares_pa_s(mass_shares(salts_g_l, temperature_k), temperature_k)


def kinematic_viscosity_m2_s(
    salts_g_l: Mapping[str, ArrayLike], temperature_k: ArrayLike
) -> Numbers:
    """Viscosity over density, as flow and mass transfer ask for it.

    Parameters
    ----------
    salts_g_l : mapping of str to array_like, shapes that broadcast
        Concentrations by formula, g/L, as in `SALT_FITS`; not negative.
    temperature_k : array_like, broadcast with the concentrations
        Temperature, K; 258.15 to 423.15.

    Returns
    -------
    ndarray, broadcast shape
        Kinematic viscosity, m2/s. NaN where an input is NaN or the fit of a salt has no value.

    Raises
    ------
    UnknownName
        If a salt has no fit.
    OutOfRange
        As in `density_kg_m3`.
    WrongShape
        If the inputs do not broadcast.

    Source
    ------
    Definition; density and viscosity of this module.

    Example
    -------
    >>> f"{kinematic_viscosity_m2_s({'CuSO4': 113.022, 'H2SO4': 180.0}, 333.15):.2e}"
    '7.56e-07'
    """
    shares = mass_shares(salts_g_l, temperature_k)
    dynamic_pa_s = viscosity_from_shares_pa_s(shares, temperature_k)
    return np.asarray(dynamic_pa_s / density_kg_m3(salts_g_l, temperature_k))
