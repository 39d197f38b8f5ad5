"""Run lengths of CUSUM charts: how many readings until a signal, true or false."""

import math

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.errors import OutOfRange
from server.science.statistics.signal_chain import SignalChain, each_shift, normal_steps

# D. Siegmund, Sequential Analysis (1985), p. 50: mean overshoot of a normal walk over a line, twice
# 0.583, by which the limit is moved outward (both ends).
SIEGMUND_OVERSHOOT = 1.166


def cusum_run_length(
    k: float, h: float, shift: ArrayLike = 0.0, head_start: float = 0.0, sides: int = 1
) -> Numbers:
    """Average run length of a tabular CUSUM from its start, by integral equation.

    Zero-state: the shift is there from the first reading. For independent normal readings whose
    mean and standard deviation are known; both weaknesses shorten the run without a fault, see
    `cusum_run_length_estimated` and `residual_cusum_run_length`. The two sides of a two-sided
    chart cannot both be on their way to a signal as long as the head start is at most h/2 + k, and
    then the rule of the inverse run lengths is exact; beyond that it is refused.

    Parameters
    ----------
    k : float
        Reference value taken off each reading, in standard deviations.
    h : float
        Limit of the sum, in standard deviations; above zero.
    shift : array_like, any shape
        True mean of the readings less the target, in standard deviations; upward is positive.
    head_start : float
        Sum at the start, in standard deviations; zero to h, one-sided, or to h/2 + k, two-sided.
    sides : int
        1 for a chart that looks upward only, 2 for one that looks both ways.

    Returns
    -------
    ndarray, shape of the shifts
        Average number of readings up to and with the signal. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If h is not above zero, the head start or the sides are not as said, or k is below zero on
        a two-sided chart.

    Source
    ------
    Integral equation: E. S. Page, Biometrika 41 (1954) 100. Quadrature: A. L. Goel and S. M. Wu,
    Technometrics 13 (1971) 221. Head start and two sides: J. M. Lucas and R. B. Crosier,
    Technometrics 24 (1982) 199.

    Example
    -------
    >>> cusum_run_length(0.5, 5.0, shift=[0.0, 1.0], sides=2).round(1).tolist()
    [465.4, 10.4]
    """
    shifts = finite("shift", shift)
    _check_cusum(k, h, head_start, sides)

    def one_sided(one: float) -> tuple[float, float]:
        chain = cusum_chain(k, h, one)
        return chain.average(0.0), chain.average(head_start)

    def averaged(one: float) -> float:
        upper, upper_ahead = one_sided(one)
        if sides == 1:
            return upper_ahead
        lower, lower_ahead = one_sided(-one)
        # From zero this is 1/L = 1/L+ + 1/L-, since all four are then two.
        return (upper_ahead * lower + lower_ahead * upper - upper * lower) / (upper + lower)

    return each_shift(shifts, averaged)


def cusum_chain(k: float, h: float, shift: float) -> SignalChain:
    """One side of a CUSUM as a chain of states from zero to its limit.

    For what the functions of this module do not offer, such as a run length from any sum.

    Parameters
    ----------
    k : float
        Reference value, in standard deviations.
    h : float
        Limit, in standard deviations; above zero.
    shift : float
        True mean of the readings less the target, in standard deviations.

    Returns
    -------
    SignalChain
        States in standard deviations, held at zero.

    Raises
    ------
    OutOfRange
        If k or the shift is not finite or h not above zero.

    Source
    ------
    E. S. Page, Biometrika 41 (1954) 100.

    Example
    -------
    >>> f"{cusum_chain(0.5, 4.0, 0.0).average(2.0):.1f}"
    '316.4'
    """
    limit = float(above_zero("h", h))
    finite("k", k)
    return SignalChain(0.0, limit, 1.0, normal_steps(shift - k, 1.0, 1.0), is_held=True)


def cusum_settled_run_length(k: float, h: float, shift: ArrayLike) -> Numbers:
    """Average run length of a one-sided CUSUM that ran well for long before the shift came.

    Steady-state: the sum is where a chart without a signal settles, mostly above zero, so the
    signal comes sooner than from zero. One-sided charts only: the two sums of a two-sided chart
    settle together, and no rule joins them.

    Parameters
    ----------
    k : float
        Reference value, in standard deviations.
    h : float
        Limit, in standard deviations; above zero.
    shift : array_like, any shape
        True mean of the readings after the change less the target, in standard deviations.

    Returns
    -------
    ndarray, shape of the shifts
        Average number of readings from the first shifted one to the signal. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If h is not above zero, or k or a shift is infinite.

    Source
    ------
    Conditional steady state: R. B. Crosier, Technometrics 28 (1986) 187.

    Example
    -------
    >>> cusum_settled_run_length(0.5, 5.0, [0.0, 1.0]).round(2).tolist()
    [924.91, 9.65]
    """
    shifts = finite("shift", shift)
    settled = cusum_chain(k, h, 0.0).settled
    return each_shift(shifts, lambda one: float(settled @ cusum_chain(k, h, one).averages))


def cusum_signal_probability(
    k: float, h: float, readings: ArrayLike, shift: float = 0.0, head_start: float = 0.0
) -> Numbers:
    """Probability that a one-sided CUSUM has signalled by a number of readings.

    The average run length hides how skewed run lengths are: of charts without a fault, more than
    one in three signals before half of the average.

    Parameters
    ----------
    k : float
        Reference value, in standard deviations.
    h : float
        Limit, in standard deviations; above zero.
    readings : array_like of int, any shape
        Numbers of readings, 0 to 1,000,000.
    shift : float
        True mean of the readings less the target, in standard deviations.
    head_start : float
        Sum at the start, in standard deviations; from zero to h.

    Returns
    -------
    ndarray, shape of the readings
        Probabilities, as shares.

    Raises
    ------
    OutOfRange
        If h, the head start or a number of readings is not as said.

    Source
    ------
    K.-H. Waldmann, Technometrics 28 (1986) 61.

    Example
    -------
    >>> cusum_signal_probability(0.5, 3.0, [9, 82, 345]).round(3).tolist()
    [0.054, 0.5, 0.95]
    """
    counts = not_negative("readings", readings)
    if counts.size and (np.isnan(counts).any() or (counts > 1e6).any() or (counts % 1).any()):
        raise OutOfRange("readings", found=float(counts.max()), allowed="whole, 0 to 1,000,000")
    _check_cusum(k, h, head_start, sides=1)
    most = int(counts.max()) if counts.size else 0
    silent = cusum_chain(k, h, shift).survival(head_start, most)
    return np.asarray(1.0 - silent[counts.astype(int)])


def cusum_run_length_quantile(
    k: float, h: float, share: float = 0.5, shift: float = 0.0, head_start: float = 0.0
) -> int:
    """Number of readings by which a share of one-sided CUSUM charts has signalled.

    With the share one half, the median run length: about 0.7 of the average without a fault.

    Parameters
    ----------
    k : float
        Reference value, in standard deviations.
    h : float
        Limit, in standard deviations; above zero.
    share : float
        Share of the charts; above 0 and below 1.
    shift : float
        True mean of the readings less the target, in standard deviations.
    head_start : float
        Sum at the start, in standard deviations; from zero to h.

    Returns
    -------
    int
        The least number of readings by which at least this share has signalled.

    Raises
    ------
    OutOfRange
        If h, the head start or the share is not as said.

    Source
    ------
    K.-H. Waldmann, Technometrics 28 (1986) 61.

    Example
    -------
    >>> cusum_run_length_quantile(0.5, 3.0)
    82
    """
    if not 0.0 < share < 1.0:
        raise OutOfRange("share", found=share, allowed="above 0 and below 1")
    _check_cusum(k, h, head_start, sides=1)
    return cusum_chain(k, h, shift).quantile(head_start, share)


def cusum_run_length_deviation(
    k: float, h: float, shift: ArrayLike = 0.0, head_start: float = 0.0
) -> Numbers:
    """Standard deviation of the run length of a one-sided CUSUM.

    Without a fault it is nearly the average itself, as of any rare event.

    Parameters
    ----------
    k : float
        Reference value, in standard deviations.
    h : float
        Limit, in standard deviations; above zero.
    shift : array_like, any shape
        True mean of the readings less the target, in standard deviations.
    head_start : float
        Sum at the start, in standard deviations; from zero to h.

    Returns
    -------
    ndarray, shape of the shifts
        Standard deviation, in readings. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If h or the head start is not as said.

    Source
    ------
    D. Brook and D. A. Evans, Biometrika 59 (1972) 539 (moments from the same system).

    Example
    -------
    >>> f"{cusum_run_length_deviation(0.5, 3.0):.1f}"
    '114.5'
    """
    shifts = finite("shift", shift)
    _check_cusum(k, h, head_start, sides=1)
    return each_shift(shifts, lambda one: cusum_chain(k, h, one).deviation(head_start))


def siegmund_run_length(k: float, h: float, shift: ArrayLike = 0.0, sides: int = 1) -> Numbers:
    """Average run length of a CUSUM by Siegmund's formula, from zero.

    A line of arithmetic in place of an integral equation, within some per cent of it for limits of
    3 and more and shifts that are not large.

    Parameters
    ----------
    k : float
        Reference value, in standard deviations.
    h : float
        Limit, in standard deviations; above zero.
    shift : array_like, any shape
        True mean of the readings less the target, in standard deviations.
    sides : int
        1 for a chart that looks upward only, 2 for one that looks both ways.

    Returns
    -------
    ndarray, shape of the shifts
        Approximate average run length, in readings. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If h is not above zero, the sides are not 1 or 2, or k is below zero on a two-sided chart.

    Source
    ------
    D. Siegmund, Sequential Analysis: Tests and Confidence Intervals (1985), as in D. C. Montgomery,
    Introduction to Statistical Quality Control, eq. (9.6) of the 6th edition.

    Example
    -------
    >>> f"{siegmund_run_length(0.5, 5.0, sides=2):.3f}"
    '469.111'
    """
    shifts = finite("shift", shift)
    _check_cusum(k, h, 0.0, sides)
    moved = h + SIEGMUND_OVERSHOOT

    def one_sided(drift: float) -> float:
        if abs(drift) * moved < 1e-5:
            # The formula is 0/0 here; its limit, with the next term of the series.
            return moved**2 * (1.0 - 2.0 * drift * moved / 3.0)
        return (math.exp(-2.0 * drift * moved) + 2.0 * drift * moved - 1.0) / (2.0 * drift**2)

    def averaged(one: float) -> float:
        upper = one_sided(one - k)
        return upper if sides == 1 else 1.0 / (1.0 / upper + 1.0 / one_sided(-one - k))

    return each_shift(shifts, averaged)


def _check_cusum(k: float, h: float, head_start: float, sides: int) -> None:
    """Refuse charts that cannot be, and two-sided ones for which the rule does not hold."""
    finite("k", k)
    above_zero("h", h)
    if sides not in (1, 2):
        raise OutOfRange("sides", found=sides, allowed="1 or 2")
    if sides == 2 and k < 0.0:
        raise OutOfRange("k", found=k, allowed="zero or more on a two-sided chart")
    most = h if sides == 1 else h / 2.0 + k
    if not 0.0 <= head_start <= min(most, h):
        raise OutOfRange("head_start", found=head_start, allowed=f"from 0 to {min(most, h):g}")
