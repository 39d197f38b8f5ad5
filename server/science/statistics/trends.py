"""Trends of a few wild readings: a robust slope, whether it is real, and when it meets a limit."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, finite
from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.spread import median

# House rule: differences held in memory at once, so that a house of long series fits.
PAIRS_AT_ONCE = 4_000_000


@dataclass(frozen=True)
class Line:
    """A robust straight line for each series: slope, its interval, and where it starts.

    `slope`, `low` and `high` are in units of the values per unit of time, `intercept` is the
    line at time zero. NaN where fewer than two moments have a value.
    """

    slope: Numbers
    low: Numbers
    high: Numbers
    intercept: Numbers


@dataclass(frozen=True)
class MannKendall:
    """The test of Mann and Kendall for each series.

    `s` counts the pairs that rise less those that fall, `variance` is its variance without a
    trend, `z` the score with the correction for continuity and `p_value` the two-sided chance of
    one as large. NaN where fewer than two values are there, or where a correction for correlation
    leaves no variance; where all are equal, no trend is certain: z is 0 and the chance 1.
    """

    s: Numbers
    variance: Numbers
    z: Numbers
    p_value: Numbers


@dataclass(frozen=True)
class Reach:
    """How long until a limit is reached: expected, at the earliest and at the latest.

    In the unit of time of the slopes; infinite where the line does not go there.
    """

    expected: Numbers
    earliest: Numbers
    latest: Numbers


def theil_sen(at: ArrayLike, values: ArrayLike, level: float = 0.95) -> Line:
    """Median of the slopes between all pairs of readings, with its interval.

    Up to 29 % of the readings may be anything without spoiling it. The intercept makes the middle
    residual zero. The interval follows from the distribution of Kendall's S with ties. Missing
    values are left out.

    Parameters
    ----------
    at : array_like, shape (n,)
        Moments of the readings, any unit of time; not necessarily in order.
    values : array_like, shape (..., n)
        Readings of one series or of many, any unit; NaN where missing.
    level : float
        Confidence of the interval, as a share; above 0 and below 1.

    Returns
    -------
    Line
        Arrays of shape (...); NaN where fewer than two moments have a value.

    Raises
    ------
    OutOfRange
        If a number is infinite or the level outside its range.
    WrongShape
        If moments and readings differ in number, or a moment is missing.

    Source
    ------
    P. K. Sen, J. Am. Stat. Assoc. 63 (1968) 1379, DOI 10.1080/01621459.1968.10480934;
    `scipy.stats.theilslopes` works it out.

    Example
    -------
    A cell that gains 2 mV a day, read with one blunder.

    >>> line = theil_sen([0, 1, 2, 3, 4], [2.000, 2.002, 1.500, 2.006, 2.008])
    >>> f"{line.slope:.4f} {line.intercept:.3f}"
    '0.0020 2.000'
    """
    if not 0.0 < level < 1.0:
        raise OutOfRange("level", found=level, allowed="above 0 and below 1")
    moments, numbers = _series(at, values)
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import stats

    rows = numbers.reshape(-1, moments.size)
    lines = np.full((4, rows.shape[0]), np.nan)
    for place, row in enumerate(rows):
        there = np.isfinite(row)
        if np.unique(moments[there]).size > 1:
            fit = stats.theilslopes(row[there], moments[there], alpha=level, method="joint")
            lines[:, place] = fit.slope, fit.low_slope, fit.high_slope, fit.intercept
    slope, low, high, intercept = lines.reshape(4, *numbers.shape[:-1])
    return Line(slope=slope, low=low, high=high, intercept=intercept)


def theil_sen_slopes(at: ArrayLike, values: ArrayLike) -> Numbers:
    """Median of the slopes between all pairs of readings, of many series at once.

    The slope of `theil_sen` alone, for a whole house of cells: all pairs of many series are
    worked out together, so that a thousand short series take no longer than a few.

    Parameters
    ----------
    at : array_like, shape (n,)
        Moments of the readings, any unit of time; not necessarily in order.
    values : array_like, shape (..., n)
        Readings of one series or of many, any unit; NaN where missing.

    Returns
    -------
    ndarray, shape (...)
        Slopes, in units of the values per unit of time; NaN where fewer than two moments have a
        value.

    Raises
    ------
    OutOfRange
        If a number is infinite.
    WrongShape
        If moments and readings differ in number, or a moment is missing.

    Source
    ------
    P. K. Sen, J. Am. Stat. Assoc. 63 (1968) 1379, DOI 10.1080/01621459.1968.10480934.

    Example
    -------
    >>> theil_sen_slopes([0, 1, 3], [[1.0, 2.0, 4.0], [5.0, float("nan"), 2.0]]).tolist()
    [1.0, -1.0]
    """
    moments, numbers = _series(at, values)
    one, other = np.triu_indices(moments.size, 1)
    apart = moments[other] - moments[one]
    one, other, apart = one[apart != 0.0], other[apart != 0.0], apart[apart != 0.0]
    rows = numbers.reshape(-1, moments.size)
    slopes = np.full(rows.shape[0], np.nan)
    together = max(PAIRS_AT_ONCE // max(one.size, 1), 1)
    for start in range(0, rows.shape[0], together):
        part = rows[start : start + together]
        slopes[start : start + together] = median((part[:, other] - part[:, one]) / apart)
    return slopes.reshape(numbers.shape[:-1])


def mann_kendall(
    values: ArrayLike, remembering: bool = False, lags: int | None = None, level: float = 0.95
) -> MannKendall:
    """Whether readings in their order rise or fall more often than chance would have it.

    Asks nothing of their distribution and nothing of the shape of the trend. For independent
    readings; where each remembers the one before, the plain test finds trends that are none.
    `remembering` then widens the variance by the correlation of the ranks, freed from the trend,
    at those lags at which it is more than chance. Missing values are left out, and the others
    count as neighbours. From about ten readings on; below, the chance is rough.

    Parameters
    ----------
    values : array_like, shape (..., n)
        Readings in the order of time, one series or many, any unit; NaN where missing.
    remembering : bool
        Correct the variance for correlation between readings.
    lags : int, optional
        How many lags to look at in that correction; all of them where not given. 0 or more.
    level : float
        Confidence with which a correlation must be more than chance to be counted.

    Returns
    -------
    MannKendall
        Arrays of shape (...); NaN where fewer than two values are there.

    Raises
    ------
    OutOfRange
        If a number is infinite, the lags negative or the level outside its range.
    WrongShape
        If the values are a single number.

    Source
    ------
    H. B. Mann, Econometrica 13 (1945) 245; ties and continuity: R. O. Gilbert, Statistical Methods
    for Environmental Pollution Monitoring, 1987, ch. 16; correlation: K. H. Hamed and A. R. Rao,
    J. Hydrol. 204 (1998) 182, DOI 10.1016/S0022-1694(97)00125-X.

    Example
    -------
    >>> test = mann_kendall([10, 10, 10, 5, 10, 20, 18, 17, 15, 24, 15])
    >>> f"{test.s:.0f} {test.variance:.2f} {test.z:.3f} {test.p_value:.3f}"
    '22 155.33 1.685 0.092'
    """
    if not 0.0 < level < 1.0:
        raise OutOfRange("level", found=level, allowed="above 0 and below 1")
    if lags is not None and lags < 0:
        raise OutOfRange("lags", found=lags, allowed="0 or more")
    numbers = finite("values", values)
    if numbers.ndim == 0:
        raise WrongShape("values", found="a single number", allowed="readings in their order")
    count = np.isfinite(numbers).sum(axis=-1)
    s, variance = _score(numbers), _variance(numbers, count)
    if remembering:
        variance = variance * _memory(numbers, lags, level)
    s, variance = np.where(count > 1, s, np.nan), np.where(count > 1, variance, np.nan)
    with np.errstate(divide="ignore", invalid="ignore"):
        z = (s - np.sign(s)) / np.sqrt(variance)
    z = np.where(s == 0.0, 0.0, z)
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import special

    return MannKendall(s=s, variance=variance, z=z, p_value=np.asarray(2.0 * special.ndtr(-abs(z))))


def time_to_limit(
    now: ArrayLike, limit: ArrayLike, slope: ArrayLike, low: ArrayLike, high: ArrayLike
) -> Reach:
    """How long a trend takes from where it is to a limit, with the interval of its slope.

    A straight line drawn on: for planning a visit, not for believing. The present value counts as
    exact, the doubt is that of the slope.

    Parameters
    ----------
    now : array_like
        Where the line is now, such as intercept + slope x now; any unit.
    limit : array_like, broadcast
        The limit, same unit.
    slope : array_like, broadcast
        Slope, in that unit per unit of time.
    low : array_like, broadcast
        Lower end of its interval.
    high : array_like, broadcast
        Upper end of its interval.

    Returns
    -------
    Reach
        Arrays of broadcast shape; infinite where the slope leads away or nowhere, zero at the
        limit, NaN where an input is.

    Raises
    ------
    OutOfRange
        If a number is infinite, or the lower end above the upper.

    Source
    ------
    The straight line through the present value.

    Example
    -------
    2.05 V now, 10 mV a month (8 to 15), change at 2.20 V.

    >>> reach = time_to_limit(2.05, 2.20, 0.010, 0.008, 0.015)
    >>> f"{reach.expected:.0f} {reach.earliest:.0f} {reach.latest:.2f}"
    '15 10 18.75'
    """
    away = finite("limit", limit) - finite("now", now)
    least, most = finite("low", low), finite("high", high)
    if (least > most).any():
        raise OutOfRange("low", found=float(np.nanmax(least)), allowed="no more than high")
    ends = np.stack(np.broadcast_arrays(_time(away, least), _time(away, most)))
    return Reach(
        expected=_time(away, finite("slope", slope)),
        earliest=ends.min(axis=0),
        latest=ends.max(axis=0),
    )


def _time(away: Numbers, slope: Numbers) -> Numbers:
    """Time to go a distance at a slope; infinite where it leads elsewhere."""
    with np.errstate(divide="ignore", invalid="ignore"):
        time = away / slope
    elsewhere = (away != 0.0) & ((slope == 0.0) | (np.sign(slope) != np.sign(away)))
    time = np.where(elsewhere, math.inf, np.where(away == 0.0, 0.0, time))
    return np.asarray(np.where(np.isnan(away) | np.isnan(slope), math.nan, time))


def _series(at: ArrayLike, values: ArrayLike) -> tuple[Numbers, Numbers]:
    """Moments and readings, once it is certain that they fit together."""
    moments, numbers = finite("at", at), finite("values", values)
    if moments.ndim != 1 or np.isnan(moments).any():
        raise WrongShape("at", found=moments.shape, allowed="one moment per reading, none missing")
    if numbers.ndim == 0 or numbers.shape[-1] != moments.size:
        raise WrongShape("values", found=numbers.shape, allowed=f"(..., {moments.size})")
    return moments, numbers


def _score(numbers: Numbers) -> Numbers:
    """Pairs that rise less pairs that fall, per series; the later readings one after another."""
    total = np.zeros(numbers.shape[:-1])
    for place in range(1, numbers.shape[-1]):
        rises = np.sign(numbers[..., place : place + 1] - numbers[..., :place])
        total += np.nansum(rises, axis=-1)
    return total


def _variance(numbers: Numbers, count: ArrayLike) -> Numbers:
    """Variance of the score of independent readings, with ties."""
    n = np.asarray(count, dtype=np.float64)
    ordered = np.sort(numbers, axis=-1)
    # Missing values stand last and differ from each other: they are no ties.
    place = np.broadcast_to(np.arange(ordered.shape[-1]), ordered.shape)
    begins = np.ones(ordered.shape, dtype=bool)
    begins[..., 1:] = ordered[..., 1:] != ordered[..., :-1]
    rank = place - np.maximum.accumulate(np.where(begins, place, 0), axis=-1)
    # t (t - 1)(2 t + 5) of a tie of t values, as a sum over their places 0 to t - 1 in it.
    ties = (6.0 * rank**2 + 12.0 * rank).sum(axis=-1)
    return np.asarray((n * (n - 1.0) * (2.0 * n + 5.0) - ties) / 18.0)


def _memory(numbers: Numbers, lags: int | None, level: float) -> Numbers:
    """Factor by which correlation between readings widens the variance, per series."""
    from scipy import special, stats

    bound = float(special.ndtri(0.5 + level / 2.0))
    rows = numbers.reshape(-1, numbers.shape[-1])
    factors = np.ones(rows.shape[0])
    for place, row in enumerate(rows):
        there = row[np.isfinite(row)]
        n = there.size
        if n < 4:
            continue
        order = np.arange(n, dtype=np.float64)
        free = there - float(theil_sen_slopes(order, there)) * order
        spread = float(np.ptp(free))
        # A straight line leaves nothing but rounding errors, which remember nothing.
        if spread <= 1e-9 * float(np.ptp(there)):
            continue
        # The slope is that of one pair, so two residuals are equal but for rounding: let them be.
        ranks = stats.rankdata(np.round((free - free[0]) / spread, 9))
        away = ranks - ranks.mean()
        products = np.correlate(away, away, mode="full")[n - 1 :]
        lag = np.arange(1, n if lags is None else min(lags + 1, n))
        related = products[lag] / products[0]
        related = np.where(np.abs(related) > bound / math.sqrt(n), related, 0.0)
        weights = (n - lag) * (n - lag - 1.0) * (n - lag - 2.0)
        factors[place] = 1.0 + 2.0 / (n * (n - 1.0) * (n - 2.0)) * float(weights @ related)
    return factors.reshape(numbers.shape[:-1])
