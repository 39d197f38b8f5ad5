"""EWMA charts along rounds: a forgetting mean and the limits that its age allows."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.errors import OutOfRange, WrongShape


@dataclass(frozen=True)
class EwmaState:
    """Averages between two rounds and how many readings each has taken in, shape (cells,)."""

    averages: Numbers
    readings: NDArray[np.int64]


@dataclass(frozen=True)
class Ewma:
    """Averages after each round, shape (rounds, cells), and the readings in each by then."""

    averages: Numbers
    readings: NDArray[np.int64]
    state: EwmaState


def ewma_start(cells: int, start: ArrayLike = 0.0) -> EwmaState:
    """A fresh state at the target or at another starting value.

    Parameters
    ----------
    cells : int
        Number of cells; zero or more.
    start : array_like, a number or shape (cells,)
        Average before the first reading, in the unit of the readings.

    Returns
    -------
    EwmaState
        The state before the first round.

    Raises
    ------
    OutOfRange
        If the number of cells is negative or a start infinite.
    WrongShape
        If the starts are of other cells.

    Source
    ------
    S. W. Roberts, Technometrics 1 (1959) 239.

    Example
    -------
    >>> ewma_start(2, start=2.04).averages
    array([2.04, 2.04])
    """
    if cells < 0:
        raise OutOfRange("cells", found=cells, allowed="zero or more")
    begun = finite("start", start)
    if begun.shape not in ((), (cells,)):
        raise WrongShape("start", found=begun.shape, allowed=f"({cells},) or a number")
    return EwmaState(np.zeros(cells) + begun, np.zeros(cells, dtype=np.int64))


def ewma(values: ArrayLike, weight: float, state: EwmaState | None = None) -> Ewma:
    """Exponentially weighted moving averages, round by round.

    z = weight x reading + (1 - weight) x z, from the start of the state. Small weights see small
    lasting shifts and drifts; a weight of 1 is the reading itself. Causal and resumable, at a cost
    in proportion to the cells. A missing reading holds the average: it counts readings, not time,
    and no correction is made for a gap.

    Parameters
    ----------
    values : array_like, shape (rounds, cells)
        Readings or deviations, in any unit; NaN where missing.
    weight : float
        Weight of the newest reading; above 0, at most 1.
    state : EwmaState, optional
        Where the former call ended; averages from zero when not given.

    Returns
    -------
    Ewma
        Averages and counts of readings after each round, and the state to go on from. NaN only
        where the state's own start is.

    Raises
    ------
    OutOfRange
        If a value is infinite or the weight not as said.
    WrongShape
        If the values are not rounds by cells, or the state is of other cells.

    Source
    ------
    S. W. Roberts, Technometrics 1 (1959) 239.

    Example
    -------
    >>> ewma([[52.0], [float("nan")], [47.0]], 0.3, ewma_start(1, 50.0)).averages[:, 0].round(2)
    array([50.6 , 50.6 , 49.52])
    """
    rounds = finite("values", values)
    if rounds.ndim != 2:
        raise WrongShape("values", found=rounds.shape, allowed="(rounds, cells)")
    _check_weight(weight)
    cells = rounds.shape[1]
    former = ewma_start(cells) if state is None else state
    if former.averages.shape != (cells,):
        raise WrongShape("state", found=former.averages.shape, allowed=f"({cells},)")
    there = np.isfinite(rounds)
    averages = np.empty_like(rounds)
    average = former.averages
    for number, row in enumerate(rounds):
        moved = average + weight * (row - average)
        average = averages[number] = np.where(there[number], moved, average)
    counts = former.readings + np.cumsum(there, axis=0, dtype=np.int64)
    last = counts[-1] if len(rounds) else former.readings
    return Ewma(averages, counts, EwmaState(average.copy(), last.copy()))


def ewma_half_width(
    sigma: ArrayLike, weight: float, width: float, readings: ArrayLike | None = None
) -> Numbers:
    """Distance of the limits of an EWMA chart from its target.

    Exact for each number of readings taken in: the limits open as the start is forgotten, and a
    fault from the start is found sooner. Without a number of readings, the limits of a chart that
    has run for long. For independent readings and a start at the target.

    Parameters
    ----------
    sigma : array_like, any shape
        Standard deviation of a reading, in its unit; not negative.
    weight : float
        Weight of the newest reading; above 0, at most 1.
    width : float
        Half-width in standard deviations of the average; above zero. See `ewma_width`.
    readings : array_like, shape that broadcasts with sigma, optional
        Readings taken in so far; not negative. Infinitely many when not given.

    Returns
    -------
    ndarray, broadcast shape
        Half-width of the limits, unit of the readings; zero before the first. NaN where an input
        is.

    Raises
    ------
    OutOfRange
        If sigma or a number of readings is negative, or the weight or the width not as said.

    Source
    ------
    S. W. Roberts, Technometrics 1 (1959) 239; D. C. Montgomery, Introduction to Statistical Quality
    Control, 6th ed., eqs. (9.25) and (9.26).

    Example
    -------
    >>> ewma_half_width(1.0, 0.1, 2.7, readings=[1, 29]).round(3).tolist()
    [0.27, 0.619]
    """
    scale = not_negative("sigma", sigma)
    _check_weight(weight)
    above_zero("width", width)
    half = width * scale * np.sqrt(weight / (2.0 - weight))
    if readings is None:
        return np.asarray(half)
    taken = not_negative("readings", readings)
    return np.asarray(half * np.sqrt(1.0 - (1.0 - weight) ** (2.0 * taken)))


def _check_weight(weight: float) -> None:
    """Refuse a weight that is none."""
    if not 0.0 < weight <= 1.0:
        raise OutOfRange("weight", found=weight, allowed="above 0, at most 1")
