"""Conductivity of sulfuric acid in water, which carries most of the current of an acid bath."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.constants import STANDARD_TEMPERATURE_K
from server.science.electrolyte.salts import SULFURIC_ACID_KG_MOL
from server.science.ranges import Range

# Ours: where the recalled correlation was held against other recalled figures, see its docstring.
ACID_CONDUCTIVITY_RANGES = (
    Range("acid_g_l", 50.0, 520.0),
    Range("temperature_k", 291.15, 333.15),
)
# Ours: the largest difference from Kohlrausch's table (from memory) is 2 %, rounded up.
ACID_CONDUCTIVITY_U_SHARE = 0.03


def acid_conductivity_s_m(
    acid_g_l: ArrayLike, temperature_k: ArrayLike = STANDARD_TEMPERATURE_K
) -> Numbers:
    """Conductivity of sulfuric acid alone: the ceiling of any acid bath, since metals lower it.

    kappa = c exp(1.1104 + (199.475 - 16097.781 c) c + (3916.95 - 99406 c - 721960 / T) / T) in
    S/cm, with c in mol/cm3. The coefficients are from memory. They meet Kohlrausch's table at
    18 degC (from memory too) within 2 %. Another correlation of battery models, looked up, lies
    11 % higher at 25 degC whatever the acid, as if it were for another temperature.

    Parameters
    ----------
    acid_g_l : array_like, shape S
        Sulfuric acid, g/L; not negative.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Conductivity, S/m. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a concentration is negative or infinite, or a temperature is not above zero.

    Source
    ------
    W. H. Tiedemann and J. Newman, in: S. Gross (ed.), Battery Design and Optimization (1979) 23,
    from memory.

    Example
    -------
    >>> f"{acid_conductivity_s_m(180.0, 318.15):.1f}"
    '76.1'
    """
    mol_cm3 = not_negative("acid_g_l", acid_g_l) / SULFURIC_ACID_KG_MOL * 1e-6
    kelvin = above_zero("temperature_k", temperature_k)
    crowding = (199.475 - 16097.781 * mol_cm3) * mol_cm3
    warmth = (3916.95 - 99406.0 * mol_cm3 - 721960.0 / kelvin) / kelvin
    return np.asarray(100.0 * mol_cm3 * np.exp(1.1104 + crowding + warmth))
