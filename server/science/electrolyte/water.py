"""Density and viscosity of pure water, which the model of solutions starts from."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero
from server.science.constants import ZERO_CELSIUS_K
from server.science.errors import OutOfRange
from server.science.ranges import Range

# Ours: beyond these no bath is liquid, and fits of the model of solutions have poles (that of
# copper's viscosity lies at -16.4 degC).
LIQUID_TEMPERATURES = Range("temperature_k", 258.15, 423.15)


def liquid_k(temperature_k: ArrayLike) -> Numbers:
    """Temperatures as an array of floats, all such that a bath can be liquid.

    Parameters
    ----------
    temperature_k : array_like, any shape
        Temperature, K.

    Returns
    -------
    ndarray, same shape
        The same temperatures, K; NaN where the input is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is below 258.15 K or above 423.15 K; it carries the first.

    Source
    ------
    `LIQUID_TEMPERATURES`.

    Example
    -------
    >>> liquid_k([293.15, 333.15])
    array([293.15, 333.15])
    """
    kelvin = above_zero("temperature_k", temperature_k)
    beyond = LIQUID_TEMPERATURES.outside(kelvin)
    if beyond.any():
        low, high = LIQUID_TEMPERATURES.low, LIQUID_TEMPERATURES.high
        found = float(kelvin[beyond].flat[0])
        raise OutOfRange("temperature_k", found, f"{low} to {high}, where a bath is liquid")
    return kelvin


def water_density_kg_m3(temperature_k: ArrayLike) -> Numbers:
    """Density of pure water at ordinary pressure, as the model has it.

    Within 0.01 kg/m3 of the international standard from 0 to 80 degC.

    Parameters
    ----------
    temperature_k : array_like, any shape
        Temperature, K; 258.15 to 423.15.

    Returns
    -------
    ndarray, same shape
        Density, kg/m3. NaN where the temperature is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is one at which no bath is liquid.

    Source
    ------
    M. Laliberte, J. Chem. Eng. Data 54 (2009) 1725, DOI 10.1021/je8008123; the equation is that
    of G. S. Kell, ibid. 20 (1975) 97 (from memory).

    Example
    -------
    >>> f"{water_density_kg_m3(298.15):.3f}"
    '997.045'
    """
    t = liquid_k(temperature_k) - ZERO_CELSIUS_K
    series = np.polynomial.polynomial.polyval(
        t,
        [999.83952, 16.945176, -0.0079870401, -4.6170461e-5, 1.0556302e-7, -2.8054253e-10],
    )
    return np.asarray(series / (1.0 + 0.01687985 * t))


def water_viscosity_pa_s(temperature_k: ArrayLike) -> Numbers:
    """Viscosity of pure water at ordinary pressure, as the model has it.

    Within 0.3 % of the international standard from 0 to 80 degC.

    Parameters
    ----------
    temperature_k : array_like, any shape
        Temperature, K; 258.15 to 423.15.

    Returns
    -------
    ndarray, same shape
        Dynamic viscosity, Pa s. NaN where the temperature is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is one at which no bath is liquid.

    Source
    ------
    M. Laliberte, J. Chem. Eng. Data 54 (2009) 1725, DOI 10.1021/je8008123.

    Example
    -------
    >>> f"{water_viscosity_pa_s(298.15) * 1000:.4f}"
    '0.8902'
    """
    t = liquid_k(temperature_k) - ZERO_CELSIUS_K
    return np.asarray((t + 246.0) / ((0.05594 * t + 5.2842) * t + 137.37) * 1e-3)
