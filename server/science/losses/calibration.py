"""A constant found from a plant's own pairs of readings, with how sure it is."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, finite
from server.science.errors import WrongShape


@dataclass(frozen=True)
class Calibration:
    """One constant, its standard uncertainty, and what that uncertainty rests on.

    `pairs` counts the pairs that were used; 0 stands for a constant taken from elsewhere, whose
    degrees of freedom are then infinite. With a single pair the scatter is unknown and the
    standard uncertainty is NaN.
    """

    value: float
    standard_uncertainty: float
    degrees_of_freedom: float
    pairs: int


def through_origin(across: ArrayLike, up: ArrayLike) -> Calibration:
    """Slope of the straight line through zero that fits pairs best by least squares.

    b = sum(x y) / sum(x^2), with u(b)^2 = s^2 / sum(x^2) and s^2 the sum of squared residuals
    over n - 1. For a law of proportion, whose line must pass through zero; the scatter is taken
    to lie in the second quantity and to be alike for all pairs. A pair with a missing number is
    left out and not counted.

    Parameters
    ----------
    across : array_like, shape (N,)
        What the law is proportional to, any unit.
    up : array_like, shape (N,)
        What was found for it, any unit.

    Returns
    -------
    Calibration
        Slope and its standard uncertainty, unit of `up` over unit of `across`. The slope is NaN
        when no pair is left or all of `across` are zero.

    Raises
    ------
    WrongShape
        If the two are not sequences of equal length.
    OutOfRange
        If any number is infinite.

    Source
    ------
    C. F. Gauss, Theoria motus (1809); JCGM 100:2008, H.3, for the uncertainty of a fitted line.

    Example
    -------
    >>> line = through_origin([1.0, 2.0, 4.0], [2.1, 3.9, 8.0])
    >>> f"{line.value:.3f} +/- {line.standard_uncertainty:.3f} from {line.pairs} pairs"
    '1.995 +/- 0.022 from 3 pairs'
    """
    x, y = same_length("across", across, "up", up)
    known = ~(np.isnan(x) | np.isnan(y))
    x, y = x[known], y[known]
    count = int(known.sum())
    squares = float(x @ x)
    if squares == 0.0:
        return Calibration(math.nan, math.nan, float(max(count - 1, 0)), count)
    slope = float(x @ y) / squares
    residuals = y - slope * x
    if count < 2:
        return Calibration(slope, math.nan, 0.0, count)
    variance = float(residuals @ residuals) / (count - 1)
    return Calibration(slope, math.sqrt(variance / squares), float(count - 1), count)


def same_length(
    first_name: str, first: ArrayLike, second_name: str, second: ArrayLike
) -> tuple[Numbers, Numbers]:
    """Two sequences of numbers, once it is certain that they belong together.

    For pairs of readings; a single pair may come as two plain numbers.

    Parameters
    ----------
    first_name : str
        Name of the first, for the error.
    first : array_like, shape (N,)
        First of each pair.
    second_name : str
        Name of the second, for the error.
    second : array_like, shape (N,)
        Second of each pair.

    Returns
    -------
    tuple of ndarray, each shape (N,)
        Both as arrays of floats; NaN where an input is NaN.

    Raises
    ------
    WrongShape
        If either is not one sequence, or their lengths differ.
    OutOfRange
        If any number is infinite.

    Source
    ------
    House rule: arrays that do not belong together are refused, never cut to fit.

    Example
    -------
    >>> same_length("iron_g_l", [1.0, 2.0], "lost_a_m2", [7.0, 14.0])
    (array([1., 2.]), array([ 7., 14.]))
    """
    one, two = np.atleast_1d(finite(first_name, first)), np.atleast_1d(finite(second_name, second))
    if one.ndim != 1 or one.shape != two.shape:
        allowed = f"one sequence as long as {first_name}, {one.shape}"
        raise WrongShape(second_name, found=two.shape, allowed=allowed)
    return one, two
