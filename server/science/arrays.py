"""Inputs made into arrays of numbers and held against what their quantity can be."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.errors import OutOfRange

Numbers = NDArray[np.float64]
Moments = NDArray[np.int64]


def finite(quantity: str, values: ArrayLike) -> Numbers:
    """Values as an array of floats, without infinities.

    NaN passes, because it is a missing number and stays missing in every result.

    Parameters
    ----------
    quantity : str
        Name to give in the error, with its unit, such as ``charge_c``.
    values : array_like, any shape
        Numbers in the unit that the name states.

    Returns
    -------
    ndarray, same shape
        The same numbers; NaN where the input is NaN.

    Raises
    ------
    OutOfRange
        If any value is infinite.

    Source
    ------
    House rule: a missing number is NaN, never zero and never infinite.

    Example
    -------
    >>> finite("volts", [2.0, float("nan")])
    array([ 2., nan])
    """
    numbers = np.asarray(values, dtype=np.float64)
    infinite = np.isinf(numbers)
    if infinite.any():
        raise OutOfRange(quantity, found=float(numbers[infinite].flat[0]), allowed="finite")
    return numbers


def not_negative(quantity: str, values: ArrayLike) -> Numbers:
    """Values as an array of floats, none below zero.

    For masses, charges, areas and other quantities whose sign can only be a mistake.

    Parameters
    ----------
    quantity : str
        Name to give in the error, with its unit.
    values : array_like, any shape
        Numbers in the unit that the name states.

    Returns
    -------
    ndarray, same shape
        The same numbers; NaN where the input is NaN.

    Raises
    ------
    OutOfRange
        If any value is negative or infinite; it carries the lowest.

    Source
    ------
    House rule: an error names the quantity, the value found and what is allowed.

    Example
    -------
    >>> not_negative("mass_kg", [0.0, 41.5])
    array([ 0. , 41.5])
    """
    numbers = finite(quantity, values)
    if (numbers < 0.0).any():
        raise OutOfRange(quantity, found=float(np.nanmin(numbers)), allowed="zero or more")
    return numbers


def above_zero(quantity: str, values: ArrayLike) -> Numbers:
    """Values as an array of floats, all above zero.

    For areas, temperatures and other quantities that something is divided by.

    Parameters
    ----------
    quantity : str
        Name to give in the error, with its unit.
    values : array_like, any shape
        Numbers in the unit that the name states.

    Returns
    -------
    ndarray, same shape
        The same numbers; NaN where the input is NaN.

    Raises
    ------
    OutOfRange
        If any value is zero, negative or infinite; it carries the lowest.

    Source
    ------
    House rule: an error names the quantity, the value found and what is allowed.

    Example
    -------
    >>> above_zero("area_m2", 2.3)
    array(2.3)
    """
    numbers = finite(quantity, values)
    if (numbers <= 0.0).any():
        raise OutOfRange(quantity, found=float(np.nanmin(numbers)), allowed="above zero")
    return numbers
