"""Tabular CUSUM charts along rounds: small deviations of one sense, gathered until they tell."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, finite, not_negative
from server.science.errors import OutOfRange, WrongShape

# J. M. Lucas and R. B. Crosier, Technometrics 24 (1982) 199: half of the limit, which finds a fault
# from the start in far fewer readings and hardly shortens the run without one.
HEAD_START_SHARE = 0.5
# House value: no round yet, for a sum that was never zero and for a limit never crossed.
NEVER = -1


@dataclass(frozen=True)
class CusumState:
    """Where the sums of one sense stand between two rounds, each of shape (cells,).

    `sums` in the unit of the readings; `since_zero` the readings that a sum has been above zero;
    `zero_at` the round, counted from 0 at the first that the chart ever saw, at which it last was
    zero, or -1 if it never was; `rounds` the number of rounds seen.
    """

    sums: Numbers
    since_zero: NDArray[np.int64]
    zero_at: NDArray[np.int64]
    rounds: int


@dataclass(frozen=True)
class Cusum:
    """Sums after each round and the readings each has been above zero, shape (rounds, cells)."""

    sums: Numbers
    since_zero: NDArray[np.int64]
    state: CusumState


def cusum_start(cells: int, h: ArrayLike = 0.0, head_start_share: float = 0.0) -> CusumState:
    """A fresh state, from zero or with a head start.

    With a head start of half the limit, a chart that is started when something may be wrong, as
    after a repair or a re-build, finds it in far fewer readings; if nothing is wrong, the sum soon
    falls to zero and the head start is forgotten.

    Parameters
    ----------
    cells : int
        Number of cells; zero or more.
    h : array_like, a number or shape (cells,)
        Limit of the sums, in the unit of the readings; not negative. Needed for a head start only.
    head_start_share : float
        Share of the limit to start at; 0 or more, below 1. `HEAD_START_SHARE` is the usual one.

    Returns
    -------
    CusumState
        The state before the first round.

    Raises
    ------
    OutOfRange
        If the number of cells or a limit is negative, or the share not as said.

    Source
    ------
    J. M. Lucas and R. B. Crosier, Technometrics 24 (1982) 199.

    Example
    -------
    >>> cusum_start(2, h=5.0, head_start_share=HEAD_START_SHARE).sums
    array([2.5, 2.5])
    """
    if cells < 0:
        raise OutOfRange("cells", found=cells, allowed="zero or more")
    if not 0.0 <= head_start_share < 1.0:
        raise OutOfRange("head_start_share", found=head_start_share, allowed="0 or more, below 1")
    sums = np.zeros(cells) + head_start_share * not_negative("h", h)
    none = np.zeros(cells, dtype=np.int64)
    return CusumState(sums, none, np.full(cells, NEVER, dtype=np.int64), rounds=0)


def cusum(
    deviations: ArrayLike, k: ArrayLike, sense: int = 1, state: CusumState | None = None
) -> Cusum:
    """Sums of deviations beyond a reference value, never below zero, round by round.

    C = max(0, C + sense x deviation - k). A deviation in the sense looked for that lasts makes the
    sum grow; chance lets it fall back to zero. Causal, and resumable: called round by round with
    the former state it gives what one call gives, at a cost in proportion to the cells. A missing
    reading holds the sum and its count: it never ends evidence, and never adds to it. After a
    crossing the sum goes on; `restarted` begins anew.

    Parameters
    ----------
    deviations : array_like, shape (rounds, cells)
        Readings less their target, in any unit; NaN where missing.
    k : array_like, a number or shape (cells,)
        Reference value, same unit: half of the shift to find is best. Not negative.
    sense : int
        1 to gather deviations upward, -1 downward. A short lowers the voltage: -1.
    state : CusumState, optional
        Where the former call ended; from zero when not given.

    Returns
    -------
    Cusum
        Sums and counts after each round, and the state to go on from.

    Raises
    ------
    OutOfRange
        If a deviation is infinite, k negative or the sense neither -1 nor 1.
    WrongShape
        If the deviations are not rounds by cells, or the state or k is of other cells.

    Source
    ------
    E. S. Page, Biometrika 41 (1954) 100; counts: D. C. Montgomery, Introduction to Statistical
    Quality Control, 6th ed., section 9.1.

    Example
    -------
    >>> chart = cusum([[0.2], [1.4], [float("nan")], [2.0]], k=0.5)
    >>> chart.sums[:, 0].round(2).tolist(), chart.since_zero[:, 0].tolist()
    ([0.0, 0.9, 0.9, 2.4], [0, 1, 1, 2])
    >>> chart.state.zero_at
    array([0])
    """
    rounds = finite("deviations", deviations)
    if rounds.ndim != 2:
        raise WrongShape("deviations", found=rounds.shape, allowed="(rounds, cells)")
    if sense not in (-1, 1):
        raise OutOfRange("sense", found=sense, allowed="-1 or 1")
    cells = rounds.shape[1]
    reference = not_negative("k", k)
    if reference.shape not in ((), (cells,)):
        raise WrongShape("k", found=reference.shape, allowed=f"({cells},) or a number")
    former = cusum_start(cells) if state is None else state
    if former.sums.shape != (cells,):
        raise WrongShape("state", found=former.sums.shape, allowed=f"({cells},)")
    there = np.isfinite(rounds)
    steps = np.where(there, sense * rounds - reference, 0.0)
    sums = np.empty_like(rounds)
    counts = np.empty(rounds.shape, dtype=np.int64)
    total, count, zero_at = former.sums, former.since_zero, former.zero_at
    for number, step in enumerate(steps):
        total = np.maximum(np.add(total, step, out=sums[number]), 0.0, out=sums[number])
        is_above = total > 0.0
        count = np.multiply(count + there[number], is_above, out=counts[number])
        zero_at = np.where(is_above, zero_at, former.rounds + number)
    end = CusumState(total.copy(), count.copy(), zero_at, former.rounds + len(rounds))
    return Cusum(sums, counts, end)


def first_crossings(sums: ArrayLike, h: ArrayLike) -> NDArray[np.int64]:
    """First round in which each cell's sum is above its limit.

    Parameters
    ----------
    sums : array_like, shape (rounds, cells)
        Sums after each round, in any unit; NaN where there is none.
    h : array_like, a number or shape (cells,)
        Limit, same unit; not negative.

    Returns
    -------
    ndarray of int, shape (cells,)
        Row of the first crossing; -1 where there is none.

    Raises
    ------
    OutOfRange
        If a sum is infinite or a limit negative.
    WrongShape
        If the sums are not rounds by cells.

    Source
    ------
    Decision rule of E. S. Page, Biometrika 41 (1954) 100: a signal is a sum above the limit.

    Example
    -------
    >>> first_crossings([[1.0, 0.0], [5.3, 2.0], [6.0, 5.0]], h=5.0)
    array([ 1, -1])
    """
    numbers = finite("sums", sums)
    if numbers.ndim != 2:
        raise WrongShape("sums", found=numbers.shape, allowed="(rounds, cells)")
    crossed = numbers > not_negative("h", h)
    if len(crossed) == 0:
        return np.full(numbers.shape[1], NEVER, dtype=np.int64)
    return np.where(crossed.any(axis=0), crossed.argmax(axis=0), NEVER).astype(np.int64)


def shift_began(state: CusumState) -> NDArray[np.int64]:
    """Round with which the deviation that a sum has gathered most likely began.

    The round after the sum was last zero: the maximum-likelihood estimate of the change for the
    shift that k is tuned to. It means something only for cells whose sum is high.

    Parameters
    ----------
    state : CusumState
        Where the chart stands.

    Returns
    -------
    ndarray of int, shape (cells,)
        Round, counted from 0 at the first that the chart ever saw. For a sum that is zero now, the
        round to come.

    Source
    ------
    D. C. Montgomery, Introduction to Statistical Quality Control, 6th ed., section 9.1.2.

    Example
    -------
    >>> shift_began(cusum([[-1.0], [2.0], [2.0]], k=0.5).state)
    array([1])
    """
    return np.asarray(state.zero_at + 1)


def restarted(state: CusumState, cells: ArrayLike, sums: ArrayLike = 0.0) -> CusumState:
    """A state in which some cells begin anew, as after a pull or a repair.

    Parameters
    ----------
    state : CusumState
        Where the chart stands.
    cells : array_like of bool, shape (cells,)
        True for the cells that begin anew.
    sums : array_like, a number or shape (cells,)
        Where their sums begin, in the unit of the readings: zero, or a head start. Not negative.

    Returns
    -------
    CusumState
        The same for the other cells.

    Raises
    ------
    OutOfRange
        If a sum is negative.
    WrongShape
        If `cells` does not name every cell.

    Source
    ------
    J. M. Lucas and R. B. Crosier, Technometrics 24 (1982) 199 (restart after a signal).

    Example
    -------
    >>> restarted(cusum([[3.0, 3.0]], k=0.5).state, [True, False]).sums
    array([0. , 2.5])
    """
    anew = np.asarray(cells, dtype=bool)
    if anew.shape != state.sums.shape:
        raise WrongShape("cells", found=anew.shape, allowed=f"{state.sums.shape}")
    return CusumState(
        np.where(anew, not_negative("sums", sums), state.sums),
        np.where(anew, 0, state.since_zero),
        # The last round seen belongs to what was before.
        np.where(anew, state.rounds - 1, state.zero_at),
        state.rounds,
    )
