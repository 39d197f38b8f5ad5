"""Time-weighted means of an uneven record, and how much of the time they rest on."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Moments, Numbers, finite
from server.science.errors import OutOfRange, WrongShape


@dataclass(frozen=True)
class Means:
    """Means over a row of half-open intervals, with the share of each that readings cover.

    `mean` has the unit of the readings and is NaN where nothing covers the interval; `coverage`
    runs from 0 to 1; `covered_ms` is the same in milliseconds. A mean with low coverage is still
    the mean of what was seen, and no more: the reader decides whether that is enough.
    """

    mean: Numbers
    coverage: Numbers
    covered_ms: Moments


def hold_means(at_ms: ArrayLike, values: ArrayLike, edges_ms: ArrayLike, max_hold_ms: int) -> Means:
    """Time-weighted means of readings that each hold until the next.

    For quantities that step and stay, such as a rectifier's set current. A reading holds for
    `max_hold_ms` at most, the last one too; time beyond that is not covered. A missing reading
    (NaN) ends the hold of the one before it and covers nothing itself.

    Parameters
    ----------
    at_ms : array_like of int, shape (n,)
        Moments of the readings, ms; strictly ascending.
    values : array_like, shape (n,)
        Readings, any unit; NaN where missing.
    edges_ms : array_like of int, shape (m + 1,)
        Bounds of m intervals that follow one another, each [start, end), ms; strictly ascending.
    max_hold_ms : int
        The longest time a reading is believed, ms; above zero.

    Returns
    -------
    Means
        Arrays of shape (m,); the mean is NaN where no reading covers any of the interval.

    Raises
    ------
    OutOfRange
        If moments do not ascend, a value is infinite or `max_hold_ms` is not above zero.
    WrongShape
        If moments and readings differ in number, or there are fewer than two bounds.

    Source
    ------
    Definition of the mean of a step function over time.

    Example
    -------
    20 kA for the first quarter of an hour, 24 kA for the rest.

    >>> hour = 3_600_000
    >>> hold_means([0, hour // 4], [20e3, 24e3], [0, hour], max_hold_ms=hour).mean.tolist()
    [23000.0]
    """
    moments, numbers, edges = _record(at_ms, values, edges_ms)
    if max_hold_ms <= 0:
        raise OutOfRange("max_hold_ms", found=max_hold_ms, allowed="above zero")
    ends = moments + np.int64(max_hold_ms)
    ends[:-1] = np.minimum(ends[:-1], moments[1:])
    return _means(moments, ends, numbers, np.zeros_like(numbers), edges)


def linear_means(
    at_ms: ArrayLike, values: ArrayLike, edges_ms: ArrayLike, max_gap_ms: int
) -> Means:
    """Time-weighted means of readings joined by straight lines.

    For quantities that drift, such as a temperature or a referred cell voltage. Two readings
    further apart than `max_gap_ms`, or with a missing one between them, are not joined; before
    the first and after the last reading nothing is covered.

    Parameters
    ----------
    at_ms : array_like of int, shape (n,)
        Moments of the readings, ms; strictly ascending.
    values : array_like, shape (n,)
        Readings, any unit; NaN where missing.
    edges_ms : array_like of int, shape (m + 1,)
        Bounds of m intervals that follow one another, each [start, end), ms; strictly ascending.
    max_gap_ms : int
        The longest gap that a line may bridge, ms; above zero.

    Returns
    -------
    Means
        Arrays of shape (m,); the mean is NaN where no line covers any of the interval.

    Raises
    ------
    OutOfRange
        If moments do not ascend, a value is infinite or `max_gap_ms` is not above zero.
    WrongShape
        If moments and readings differ in number, or there are fewer than two bounds.

    Source
    ------
    Trapezoidal rule, cut exactly at the bounds of the intervals.

    Example
    -------
    From 60 to 64 degC within the hour: 61 over the first half, 63 over the second.

    >>> hour = 3_600_000
    >>> linear_means([0, hour], [60.0, 64.0], [0, hour // 2, hour], max_gap_ms=hour).mean.tolist()
    [61.0, 63.0]
    """
    moments, numbers, edges = _record(at_ms, values, edges_ms)
    if max_gap_ms <= 0:
        raise OutOfRange("max_gap_ms", found=max_gap_ms, allowed="above zero")
    gaps = np.diff(moments)
    rises = np.diff(numbers)
    joined = np.where(gaps <= max_gap_ms, numbers[:-1], np.nan)
    # A line needs both its ends: where the later reading is missing the slope is, too.
    slopes = rises / gaps
    return _means(moments[:-1], moments[1:], joined, slopes, edges)


def _record(
    at_ms: ArrayLike, values: ArrayLike, edges_ms: ArrayLike
) -> tuple[Moments, Numbers, Moments]:
    """The record and the bounds as arrays, once it is certain that they fit together."""
    moments = _ascending("at_ms", at_ms)
    edges = _ascending("edges_ms", edges_ms)
    numbers = finite("values", values)
    if numbers.shape != moments.shape:
        raise WrongShape("values", found=numbers.shape, allowed=f"{moments.shape}, as the moments")
    if edges.size < 2:
        raise WrongShape("edges_ms", found=edges.shape, allowed="two bounds or more")
    return moments, numbers, edges


def _ascending(quantity: str, moments_ms: ArrayLike) -> Moments:
    """Moments as whole milliseconds, strictly ascending."""
    moments = np.asarray(moments_ms, dtype=np.int64)
    if moments.ndim != 1:
        raise WrongShape(quantity, found=moments.shape, allowed="one dimension")
    steps = np.diff(moments)
    if (steps <= 0).any():
        after = int(moments[1:][steps <= 0][0])
        raise OutOfRange(quantity, found=after, allowed="strictly ascending moments")
    return moments


def _means(
    starts: Moments,
    ends: Moments,
    values: Numbers,
    slopes: Numbers,
    edges: Moments,
) -> Means:
    """Means of stretches that do not overlap, each a value at its start and a slope per ms."""
    sure = np.isfinite(values) & np.isfinite(slopes)
    starts, ends, values, slopes = starts[sure], ends[sure], values[sure], slopes[sure]
    lasts = ends - starts
    wholes = values * lasts + slopes * lasts.astype(np.float64) ** 2 / 2.0
    sums = np.concatenate(([0.0], np.cumsum(wholes)))
    times = np.concatenate((np.zeros(1, np.int64), np.cumsum(lasts)))
    before = np.searchsorted(starts, edges, side="right") - 1
    reached = _reach(edges, starts, lasts, before)
    held = np.maximum(before, 0)
    part = np.zeros(edges.shape)
    covered = np.zeros(edges.shape, np.int64)
    if starts.size:
        within = reached.astype(np.float64)
        part = sums[held] + values[held] * within + slopes[held] * within**2 / 2.0
        covered = times[held] + reached
        part, covered = np.where(before < 0, 0.0, part), np.where(before < 0, 0, covered)
    covered_ms = np.diff(covered)
    mean = np.diff(part) / np.where(covered_ms > 0, covered_ms, np.nan)
    return Means(mean=mean, coverage=covered_ms / np.diff(edges), covered_ms=covered_ms)


def _reach(edges: Moments, starts: Moments, lasts: Moments, before: NDArray[np.intp]) -> Moments:
    """How far into the stretch that began before it each bound lies, ms."""
    if not starts.size:
        return np.zeros(edges.shape, np.int64)
    held = np.maximum(before, 0)
    return np.asarray(np.clip(edges - starts[held], 0, lasts[held]))
