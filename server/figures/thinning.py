"""Fewer points for the same picture: no extreme is lost and every gap stays a gap."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

Moments = NDArray[np.int64]
Numbers = NDArray[np.float64]


def with_gaps(at_ms: ArrayLike, values: ArrayLike, gap_ms: int) -> tuple[Moments, Numbers]:
    """The series with a missing value put between any two moments further apart than a gap.

    Parameters
    ----------
    at_ms : array_like of int, shape (n,)
        Moments, ascending, ms.
    values : array_like, shape (n,)
        What was found then, any unit.
    gap_ms : int
        Longest distance over which a line may be drawn, ms.

    Returns
    -------
    tuple of ndarray
        Moments and values; a NaN stands one millisecond after the last moment before each gap.

    Raises
    ------
    ValueError
        If the two differ in length.

    Example
    -------
    >>> with_gaps([0, 10, 100], [1.0, 2.0, 3.0], gap_ms=50)[1].tolist()
    [1.0, 2.0, nan, 3.0]
    """
    moments, numbers = _series(at_ms, values)
    before = np.flatnonzero(np.diff(moments) > gap_ms)
    return (
        np.insert(moments, before + 1, moments[before] + 1),
        np.insert(numbers, before + 1, np.nan),
    )


def thinned(at_ms: ArrayLike, values: ArrayLike, buckets: int) -> tuple[Moments, Numbers]:
    """The series with the least and the greatest value of each of equal stretches of time.

    First and last point stay. A missing value stays in each stretch that has one, so that the
    line is broken there; where a gap is at least as long as a stretch, the points on both of its
    sides stay too, so that it is neither narrower nor wider than it was. A series that is already
    short enough is returned as it is.

    Parameters
    ----------
    at_ms : array_like of int, shape (n,)
        Moments, ascending, ms.
    values : array_like, shape (n,)
        What was found then, any unit; NaN where nothing was.
    buckets : int
        How many stretches; one per two pixels of width is enough for a line.

    Returns
    -------
    tuple of ndarray
        Moments and values of the points kept, at most seven per stretch and in practice two.

    Raises
    ------
    ValueError
        If the two differ in length, or there is no stretch.

    Example
    -------
    >>> at_ms, values = thinned(range(1000), [0.0] * 500 + [9.0] + [0.0] * 499, buckets=10)
    >>> len(values) <= 40, float(max(values))
    (True, 9.0)
    """
    moments, numbers = _series(at_ms, values)
    kept = points_kept(moments, numbers, buckets)
    return moments[kept], numbers[kept]


def points_kept(at_ms: ArrayLike, values: ArrayLike, buckets: int) -> NDArray[np.intp]:
    """Which points `thinned` keeps, as ascending indices, for series that must stay in step."""
    moments, numbers = _series(at_ms, values)
    if buckets < 1:
        raise ValueError("a series is thinned to one stretch of time or more")
    if moments.size <= 2 * buckets:
        return np.arange(moments.size)
    bucket = _bucket_of(moments, buckets)
    starts = np.flatnonzero(np.diff(bucket, prepend=-1))
    missing = np.isnan(numbers)
    keep = np.zeros(moments.size, dtype=bool)
    keep[[0, -1]] = True
    keep[_first_equal(np.where(missing, np.inf, numbers), starts, np.minimum)] = True
    keep[_first_equal(np.where(missing, -np.inf, numbers), starts, np.maximum)] = True
    if missing.any():
        keep |= _edges_of_gaps(moments, missing, bucket, buckets)
    return np.flatnonzero(keep)


def _series(at_ms: ArrayLike, values: ArrayLike) -> tuple[Moments, Numbers]:
    moments, numbers = np.asarray(at_ms, np.int64), np.asarray(values, np.float64)
    if moments.shape != numbers.shape or moments.ndim != 1:
        raise ValueError("moments and values are two lists of one length")
    return moments, numbers


def _bucket_of(moments: Moments, buckets: int) -> NDArray[np.int64]:
    """Number of the stretch of time in which each moment lies."""
    span_ms = max(int(moments[-1] - moments[0]), 1)
    number: NDArray[np.int64] = (moments - moments[0]) * buckets // span_ms
    return np.minimum(number, buckets - 1)


def _first_equal(numbers: Numbers, starts: NDArray[np.intp], extreme: np.ufunc) -> NDArray[np.intp]:
    """Index of the first point in each stretch that equals the stretch's extreme."""
    lengths = np.diff(np.append(starts, numbers.size))
    hits = np.flatnonzero(numbers == np.repeat(extreme.reduceat(numbers, starts), lengths))
    stretch = np.searchsorted(starts, hits, side="right")
    return hits[np.flatnonzero(np.diff(stretch, prepend=0))]


def _edges_of_gaps(
    moments: Moments, missing: NDArray[np.bool_], bucket: NDArray[np.int64], buckets: int
) -> NDArray[np.bool_]:
    """Which points hold the gaps open: one missing value a stretch, and both sides of long gaps."""
    keep = np.zeros(moments.size, dtype=bool)
    first = np.flatnonzero(missing & ~np.concatenate(([False], missing[:-1])))
    last = np.flatnonzero(missing & ~np.concatenate((missing[1:], [False])))
    keep[first[np.flatnonzero(np.diff(bucket[first], prepend=-1))]] = True
    left, right = np.maximum(first - 1, 0), np.minimum(last + 1, moments.size - 1)
    is_long = (moments[right] - moments[left]) * buckets >= moments[-1] - moments[0]
    keep[left[is_long]] = keep[first[is_long]] = keep[right[is_long]] = True
    return keep
