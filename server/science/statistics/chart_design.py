"""Limits of charts for a wanted rate of false flags, and the reference value for a wanted shift."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero
from server.science.errors import OutOfRange
from server.science.statistics.ewma_run_length import ewma_run_length
from server.science.statistics.run_length import cusum_run_length

# Tried here: the integral equation holds nine digits up to such run lengths.
LONGEST_RUN = 1e8
# Tried here: a limit so small that the sum signals on any reading beyond the reference value.
_LEAST = 1e-9


@dataclass(frozen=True)
class CusumDesign:
    """A CUSUM in standard deviations: reference value, limit, and its average run lengths.

    `in_control` is the run without a fault, `out_of_control` with a shift of 2 k, for which it is
    made, both in readings and from zero.
    """

    k: float
    h: float
    in_control: float
    out_of_control: float


def false_flags_per_thousand(run_length: ArrayLike) -> Numbers:
    """False flags among a thousand readings of a chart that starts anew after each.

    Parameters
    ----------
    run_length : array_like, any shape
        Average run length without a fault, in readings; above zero.

    Returns
    -------
    ndarray, same shape
        False flags per 1,000 readings of one cell, in the long run. NaN where the input is.

    Raises
    ------
    OutOfRange
        If a run length is not above zero.

    Source
    ------
    Elementary renewal theorem.

    Example
    -------
    >>> false_flags_per_thousand(500.0)
    array(2.)
    """
    return np.asarray(1000.0 / above_zero("run_length", run_length))


def run_length_for(false_per_thousand: ArrayLike) -> Numbers:
    """Average run length without a fault that gives a stated number of false flags.

    Parameters
    ----------
    false_per_thousand : array_like, any shape
        False flags per 1,000 readings of one cell, in the long run; above zero.

    Returns
    -------
    ndarray, same shape
        Average run length, in readings. NaN where the input is.

    Raises
    ------
    OutOfRange
        If a number of flags is not above zero.

    Source
    ------
    Elementary renewal theorem.

    Example
    -------
    >>> run_length_for(2.0)
    array(500.)
    """
    return np.asarray(1000.0 / above_zero("false_per_thousand", false_per_thousand))


def reference_for(shift: ArrayLike) -> Numbers:
    """Reference value of the CUSUM that finds a shift soonest at its rate of false flags.

    Half of the shift: then the sum is the logarithm of the likelihood ratio, up to a factor.

    Parameters
    ----------
    shift : array_like, any shape
        Shift to find, in standard deviations or in the unit of the readings; above zero.

    Returns
    -------
    ndarray, same shape
        k, same unit. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If a shift is not above zero.

    Source
    ------
    G. V. Moustakides, Annals of Statistics 14 (1986) 1379.

    Example
    -------
    >>> reference_for(1.0)
    array(0.5)
    """
    return np.asarray(above_zero("shift", shift) / 2.0)


def cusum_limit(
    run_length: float, k: float, sides: int = 1, head_start_share: float = 0.0
) -> float:
    """Limit of a CUSUM for a wanted average run length without a fault.

    By root finding on the integral equation, to a relative error of 1e-6 of the run length. Known
    mean and standard deviation, independent normal readings, from zero or from a head start.

    Parameters
    ----------
    run_length : float
        Wanted average number of readings until a false signal; up to 1e8, and longer than that
        of a limit of zero.
    k : float
        Reference value, in standard deviations; not negative.
    sides : int
        1 for a chart that looks one way only, 2 for both ways.
    head_start_share : float
        Share of the limit that the sum starts at; 0 to 0.5.

    Returns
    -------
    float
        h, in standard deviations.

    Raises
    ------
    OutOfRange
        If the run length cannot be reached, or k, the sides or the share are not as said.

    Source
    ------
    Inverse of `cusum_run_length`.

    Example
    -------
    Two false flags per thousand readings of a cell, looking downward only:

    >>> f"{cusum_limit(500.0, k=0.5):.3f}"
    '4.389'
    """
    if not k >= 0.0:
        raise OutOfRange("k", found=k, allowed="zero or more")
    if not 0.0 <= head_start_share <= 0.5:
        raise OutOfRange("head_start_share", found=head_start_share, allowed="from 0 to 0.5")
    return _inverse(
        lambda h: float(cusum_run_length(k, h, 0.0, head_start_share * h, sides)),
        run_length,
        first_high=2.0,
    )


def ewma_width(
    run_length: float, weight: float, sides: int = 2, opening_limits: bool = False
) -> float:
    """Half-width of the limits of an EWMA for a wanted average run length without a fault.

    By root finding on the integral equation, to a relative error of 1e-6 of the run length.

    Parameters
    ----------
    run_length : float
        Wanted average number of readings until a false signal; up to 1e8.
    weight : float
        Weight of the newest reading; above 0, at most 1.
    sides : int
        2 for limits on both sides, 1 for one side only.
    opening_limits : bool
        Whether the limits follow the exact standard deviation of the average at each reading.

    Returns
    -------
    float
        Half-width, in standard deviations of the settled average.

    Raises
    ------
    OutOfRange
        If the run length cannot be reached, or the weight or the sides are not as said.

    Source
    ------
    Inverse of `ewma_run_length`; S. V. Crowder, J. Quality Technology 21 (1989) 155.

    Example
    -------
    >>> f"{ewma_width(500.0, weight=0.1):.3f}"
    '2.814'
    """
    return _inverse(
        lambda width: float(
            ewma_run_length(weight, width, sides=sides, opening_limits=opening_limits)
        ),
        run_length,
        first_high=3.0,
    )


def cusum_for_shift(run_length: float, shift: float, sides: int = 1) -> CusumDesign:
    """The CUSUM that finds a shift soonest at a wanted run length without a fault.

    Parameters
    ----------
    run_length : float
        Wanted average number of readings until a false signal; up to 1e8.
    shift : float
        Shift to find, in standard deviations; above zero.
    sides : int
        1 for a chart that looks one way only, 2 for both ways.

    Returns
    -------
    CusumDesign
        k, h and both run lengths.

    Raises
    ------
    OutOfRange
        If the run length cannot be reached, or the shift or the sides are not as said.

    Source
    ------
    G. V. Moustakides, Annals of Statistics 14 (1986) 1379, with `cusum_limit`.

    Example
    -------
    >>> design = cusum_for_shift(500.0, shift=1.0)
    >>> f"k {design.k:.2f}, h {design.h:.2f}, found after {design.out_of_control:.1f}"
    'k 0.50, h 4.39, found after 9.2'
    """
    k = float(reference_for(shift))
    h = cusum_limit(run_length, k, sides)
    at_fault = float(cusum_run_length(k, h, shift, sides=sides))
    return CusumDesign(k, h, float(cusum_run_length(k, h, sides=sides)), at_fault)


def cusum_for_run_lengths(in_control: float, out_of_control: float, sides: int = 1) -> CusumDesign:
    """The CUSUM with two wanted run lengths: without a fault, and with the shift of 2 k.

    It answers which shift can be found within so many readings at a given rate of false flags.

    Parameters
    ----------
    in_control : float
        Wanted average number of readings until a false signal; up to 1e8.
    out_of_control : float
        Wanted average number of readings until a true one; above 1.5, well below the other.
    sides : int
        1 for a chart that looks one way only, 2 for both ways.

    Returns
    -------
    CusumDesign
        k, h and both run lengths.

    Raises
    ------
    OutOfRange
        If no chart with k from 0.02 to 2.5 has these run lengths, or the sides are not 1 or 2.

    Source
    ------
    W. D. Ewan and K. W. Kemp, Biometrika 47 (1960) 363; K. W. Kemp, Applied Statistics 11 (1962)
    16.

    Example
    -------
    >>> design = cusum_for_run_lengths(1000.0, 7.0)
    >>> f"{design.k:.2f} {design.h:.2f}"
    '0.64 4.08'
    """
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import optimize

    def missed(k: float) -> float:
        h = cusum_limit(in_control, k, sides)
        return float(np.log(cusum_run_length(k, h, 2.0 * k, sides=sides) / out_of_control))

    low, high = 0.02, 2.5
    while high > 2.0 * low and not _is_reached(in_control, high, sides):
        high *= 0.8
    if not missed(low) > 0.0 > missed(high):
        raise OutOfRange("out_of_control", found=out_of_control, allowed="what k 0.02 to 2.5 gives")
    k = float(optimize.brentq(missed, low, high, xtol=1e-9))
    return cusum_for_shift(in_control, 2.0 * k, sides)


def _is_reached(run_length: float, k: float, sides: int) -> bool:
    """Whether a limit above zero is needed for the run length with this reference value."""
    return float(cusum_run_length(k, _LEAST, sides=sides)) < run_length


def _inverse(run_length_of: Callable[[float], float], wanted: float, first_high: float) -> float:
    """The limit at which a run length that grows with it is the wanted one."""
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import optimize

    shortest = run_length_of(_LEAST)
    if not shortest < wanted <= LONGEST_RUN:
        allowed = f"above {shortest:.4g}, at most {LONGEST_RUN:g}"
        raise OutOfRange("run_length", found=wanted, allowed=allowed)

    def missed(limit: float) -> float:
        return float(np.log(run_length_of(limit) / wanted))

    low, high = _LEAST, first_high
    while missed(high) < 0.0:
        low, high = high, high * 1.5
    return float(optimize.brentq(missed, low, high, xtol=1e-9, rtol=1e-9))
