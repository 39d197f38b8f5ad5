"""Plant units of energy and of metal per charge to SI and back, one function each."""

from typing import TypeVar

from server.science.arrays import Numbers
from server.science.electrical_units import COULOMBS_PER_KAH

# A function gives back what it is given: a float for a float, an array for an array.
Value = TypeVar("Value", float, Numbers)

# SI Brochure, 9th ed. (2019), tables 7 and 8: 1000 W times 3600 s.
JOULES_PER_KWH = 3.6e6


def joules_from_kwh(kwh: Value) -> Value:
    """Energy in joules, from kilowatt-hours.

    Parameters
    ----------
    kwh : float or ndarray, any shape
        Energy, kWh.

    Returns
    -------
    float or ndarray, same shape
        Energy, J. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kWh is 3.6 MJ.

    Example
    -------
    >>> joules_from_kwh(1.0)
    3600000.0
    """
    return kwh * JOULES_PER_KWH


def kwh_from_joules(energy_j: Value) -> Value:
    """Energy in kilowatt-hours, from joules.

    Parameters
    ----------
    energy_j : float or ndarray, any shape
        Energy, J.

    Returns
    -------
    float or ndarray, same shape
        Energy, kWh. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kWh is 3.6 MJ.

    Example
    -------
    >>> kwh_from_joules(7.2e6)
    2.0
    """
    return energy_j / JOULES_PER_KWH


def j_kg_from_kwh_t(kwh_t: Value) -> Value:
    """Energy per mass in J/kg, from kWh per tonne.

    Parameters
    ----------
    kwh_t : float or ndarray, any shape
        Specific energy, kWh/t; a metric tonne.

    Returns
    -------
    float or ndarray, same shape
        Specific energy, J/kg. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kWh is 3.6 MJ.

    Example
    -------
    >>> j_kg_from_kwh_t(2000.0)
    7200000.0
    """
    return kwh_t * 3600.0


def kwh_t_from_j_kg(energy_j_kg: Value) -> Value:
    """Energy per mass in kWh per tonne, from J/kg.

    Parameters
    ----------
    energy_j_kg : float or ndarray, any shape
        Specific energy, J/kg.

    Returns
    -------
    float or ndarray, same shape
        Specific energy, kWh/t; a metric tonne. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kWh is 3.6 MJ.

    Example
    -------
    >>> kwh_t_from_j_kg(7.2e6)
    2000.0
    """
    return energy_j_kg / 3600.0


def kg_c_from_kg_kah(kg_kah: Value) -> Value:
    """Metal per charge in kg/C, from kg/kAh.

    Parameters
    ----------
    kg_kah : float or ndarray, any shape
        Electrochemical equivalent, kg/kAh (the same number in g/Ah).

    Returns
    -------
    float or ndarray, same shape
        Electrochemical equivalent, kg/C. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kAh is 3.6 MC.

    Example
    -------
    >>> kg_c_from_kg_kah(3.6)
    1e-06
    """
    return kg_kah / COULOMBS_PER_KAH


def kg_kah_from_kg_c(kg_c: Value) -> Value:
    """Metal per charge in kg/kAh, from kg/C.

    Parameters
    ----------
    kg_c : float or ndarray, any shape
        Electrochemical equivalent, kg/C.

    Returns
    -------
    float or ndarray, same shape
        Electrochemical equivalent, kg/kAh (the same number in g/Ah). NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kAh is 3.6 MC.

    Example
    -------
    >>> kg_kah_from_kg_c(1e-3)
    3600.0
    """
    return kg_c * COULOMBS_PER_KAH


def price_per_j_from_price_per_kwh(price_per_kwh: Value) -> Value:
    """Price of a joule, from the price of a kilowatt-hour.

    Parameters
    ----------
    price_per_kwh : float or ndarray, any shape
        Price of energy, currency per kWh.

    Returns
    -------
    float or ndarray, same shape
        Price, currency per J. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kWh is 3.6 MJ.

    Example
    -------
    >>> price_per_j_from_price_per_kwh(0.36)
    1e-07
    """
    return price_per_kwh / JOULES_PER_KWH
