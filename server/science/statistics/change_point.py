"""Likelihood ratios for a change of level: with an unknown size, and with a stated prior."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, above_zero, finite
from server.science.errors import OutOfRange, WrongShape


@dataclass(frozen=True)
class GlrState:
    """The latest readings of each cell, newest last, shape (window, cells); NaN for none yet."""

    latest: Numbers


@dataclass(frozen=True)
class Glr:
    """What the likelihood ratio says after each round, shape (rounds, cells), and how to go on.

    `evidence` is the logarithm of the greatest likelihood ratio, `shift` the size of the change
    that has it, in standard deviations and never against the sense looked for, `readings` the
    number of readings since it; with no evidence both are 0.
    """

    evidence: Numbers
    shift: Numbers
    readings: NDArray[np.int64]
    state: GlrState


def glr(deviations: ArrayLike, window: int, sense: int = -1, state: GlrState | None = None) -> Glr:
    """Generalised likelihood ratio for a lasting shift of unknown size in one sense.

    For every start within the window the best shift is the mean since; the evidence is n mean^2/2
    of the best start, and zero where the mean points the other way: a short only ever lowers a
    voltage. It serves where nobody can say how large the fault will be: nearly as quick as the
    CUSUM tuned to the very shift, for all shifts, and it gives size and start at once. The price is
    memory and work in proportion to the window, and that no shift older than it is seen whole. A
    missing reading changes nothing: the window counts readings, not rounds.

    Parameters
    ----------
    deviations : array_like, shape (rounds, cells)
        Readings less their target, in standard deviations; NaN where missing.
    window : int
        Number of latest readings that are kept; 1 or more.
    sense : int
        -1 to look for a fall, 1 for a rise.
    state : GlrState, optional
        Where the former call ended; a fresh start when not given.

    Returns
    -------
    Glr
        Evidence, shift and readings since it, after each round, and the state to go on from.

    Raises
    ------
    OutOfRange
        If a deviation is infinite, the window below 1 or the sense neither -1 nor 1.
    WrongShape
        If the deviations are not rounds by cells, or the state is of other cells or another window.

    Source
    ------
    D. Siegmund and E. S. Venkatraman, Annals of Statistics 23 (1995) 255; window: T. L. Lai,
    J. R. Stat. Soc. B 57 (1995) 613.

    Example
    -------
    >>> found = glr([[0.5], [-2.0], [-2.2], [-1.8]], window=50)
    >>> found.evidence[-1].round(2), found.shift[-1], found.readings[-1]
    (array([6.]), array([-2.]), array([3]))
    """
    rounds = _rounds("deviations", deviations)
    _check_sense(sense)
    if window < 1:
        raise OutOfRange("window", found=window, allowed="1 or more")
    cells = rounds.shape[1]
    latest = np.full((window, cells), np.nan) if state is None else state.latest
    if latest.shape != (window, cells):
        raise WrongShape("state", found=latest.shape, allowed=f"({window}, {cells})")
    evidence, shift = np.zeros_like(rounds), np.zeros_like(rounds)
    readings = np.zeros(rounds.shape, dtype=np.int64)
    counts = np.arange(1, window + 1)[:, np.newaxis]
    columns = np.arange(cells)
    for number, row in enumerate(rounds):
        there = np.isfinite(row)
        latest = np.where(there, np.concatenate((latest[1:], row[np.newaxis])), latest)
        # Newest first; where the window is not full yet, the sums end in NaN and count for nothing.
        sums = sense * np.cumsum(latest[::-1], axis=0)
        ratios = np.where(sums > 0.0, sums, 0.0) ** 2 / (2.0 * counts)
        best = ratios.argmax(axis=0)
        evidence[number] = ratios[best, columns]
        readings[number] = np.where(evidence[number] > 0.0, best + 1, 0)
        means = sense * sums[best, columns] / (best + 1)
        shift[number] = np.where(evidence[number] > 0.0, means, 0.0)
    return Glr(evidence, shift, readings, GlrState(latest))


def glr_run_length(evidence: ArrayLike, window: int) -> Numbers:
    """Approximate average number of readings until a one-sided GLR reaches an evidence by chance.

    For independent normal readings. Asymptotic: by simulation a fourth too long at an evidence of 3
    and within a tenth from 4 on. There is no integral equation for it, because the statistic needs
    the whole window.

    Parameters
    ----------
    evidence : array_like, any shape
        Logarithm of the likelihood ratio at which it signals; above zero.
    window : int
        Number of latest readings that are kept; 2 or more.

    Returns
    -------
    ndarray, same shape
        Average run length without a change, in readings. NaN where the evidence is.

    Raises
    ------
    OutOfRange
        If an evidence is not above zero or the window below 2.

    Source
    ------
    D. Siegmund and E. S. Venkatraman, Annals of Statistics 23 (1995) 255 (two-sided, from memory),
    doubled for one side, with nu(x) taken as exp(-0.583 x).

    Example
    -------
    >>> glr_run_length([4.0, 6.0], window=300).round(0).tolist()
    [159.0, 894.0]
    """
    logs = above_zero("evidence", evidence)
    if window < 2:
        raise OutOfRange("window", found=window, allowed="2 or more")
    roots = np.sqrt(2.0 * logs)
    twice = 2.0 * 0.583

    def beyond(x: Numbers) -> Numbers:
        """The integral of x nu(x)^2 from x upward."""
        return np.asarray(np.exp(-twice * x) * (x / twice + 1.0 / twice**2))

    # A start n readings back is seen at x = root / sqrt(n), for n from 1 to the window.
    overshoot = beyond(roots / math.sqrt(window)) - beyond(roots)
    return np.asarray(2.0 * math.sqrt(2.0 * math.pi) * np.exp(logs) / (roots * overshoot))


def shiryaev_roberts(
    deviations: ArrayLike, shift: float, sense: int = -1, start: ArrayLike = 0.0
) -> Numbers:
    """Shiryaev-Roberts evidence for a shift of stated size that came at an unknown time.

    R = (1 + R) x likelihood ratio of the newest reading: the sum of the likelihood ratios of all
    starts so far, where the CUSUM takes the greatest. It serves where a change may be long past
    when it matters, such as a drift found late: it is the quickest on the average over a change
    that comes after many false alarms, and a false alarm comes, on the average, after slightly more
    readings than the threshold itself says. Kept as a logarithm, so that it cannot overflow. A
    missing reading leaves it as it is.

    Parameters
    ----------
    deviations : array_like, shape (rounds, cells)
        Readings less their target, in standard deviations; NaN where missing.
    shift : float
        Size of the shift to look for, in standard deviations; above zero.
    sense : int
        -1 to look for a fall, 1 for a rise.
    start : array_like, shape (cells,) or a number
        R before the first round: zero afresh, or exp of the last row of the former call.

    Returns
    -------
    ndarray, shape (rounds, cells)
        Natural logarithm of R after each round; -infinity where R is zero still.

    Raises
    ------
    OutOfRange
        If a deviation is infinite, the shift not above zero, the start negative or infinite, or
        the sense neither -1 nor 1.
    WrongShape
        If the deviations are not rounds by cells, or the start is of other cells.

    Source
    ------
    A. N. Shiryaev, Theory Probab. Appl. 8 (1963) 22; S. W. Roberts, Technometrics 8 (1966) 411.

    Example
    -------
    >>> shiryaev_roberts([[0.0], [-2.0], [-2.0]], shift=1.0)[-1].round(2)
    array([3.6])
    """
    rounds = _rounds("deviations", deviations)
    ratios = _log_ratios(rounds, shift, sense)
    begun = finite("start", start)
    if (begun < 0.0).any():
        raise OutOfRange("start", found=float(np.nanmin(begun)), allowed="zero or more")
    with np.errstate(divide="ignore"):
        log_sum = np.log(_per_cell("start", begun, rounds.shape[1]))
    found = np.empty_like(rounds)
    for number, ratio in enumerate(ratios):
        log_sum = np.where(np.isnan(ratio), log_sum, np.logaddexp(0.0, log_sum) + ratio)
        found[number] = log_sum
    return found


def shiryaev_posterior(
    deviations: ArrayLike,
    shift: float,
    hazard: float,
    sense: int = -1,
    start: ArrayLike = 0.0,
) -> Numbers:
    """Probability that the shift has come, after each round, with a stated prior hazard.

    Shiryaev's Bayesian form: before each round a cell that was well may have shifted with the
    probability `hazard`, whether it is read or not; each reading then speaks by its likelihood
    ratio. It serves where people want a probability and know how often cells fail. It is as right
    as the hazard and the stated size of the shift are: state both beside the figure. Flagging at a
    probability p makes at most the share 1 - p of the flags false, if they are right.

    Parameters
    ----------
    deviations : array_like, shape (rounds, cells)
        Readings less their target, in standard deviations; NaN where missing.
    shift : float
        Size of the shift, in standard deviations; above zero.
    hazard : float
        Probability that a well cell shifts between two rounds; above 0 and below 1.
    sense : int
        -1 to look for a fall, 1 for a rise.
    start : array_like, shape (cells,) or a number
        Probability before the first round; 0 afresh, or the last row of the former call.

    Returns
    -------
    ndarray, shape (rounds, cells)
        Probability after each round, as a share.

    Raises
    ------
    OutOfRange
        If a deviation is infinite, or the shift, the hazard, the sense or the start not as said.
    WrongShape
        If the deviations are not rounds by cells, or the start is of other cells.

    Source
    ------
    A. N. Shiryaev, Theory Probab. Appl. 8 (1963) 22.

    Example
    -------
    >>> shiryaev_posterior([[0.0], [-3.0], [-3.0]], shift=2.0, hazard=0.01)[:, 0].round(3).tolist()
    [0.001, 0.385, 0.972]
    """
    rounds = _rounds("deviations", deviations)
    ratios = _log_ratios(rounds, shift, sense)
    if not 0.0 < hazard < 1.0:
        raise OutOfRange("hazard", found=hazard, allowed="above 0 and below 1")
    begun = finite("start", start)
    if (begun < 0.0).any() or (begun > 1.0).any():
        worst = float(begun[(begun < 0.0) | (begun > 1.0)].flat[0])
        raise OutOfRange("start", found=worst, allowed="from 0 to 1")
    shifted = _per_cell("start", begun, rounds.shape[1])
    found = np.empty_like(rounds)
    for number, ratio in enumerate(ratios):
        before = shifted + (1.0 - shifted) * hazard
        # The odds as a logarithm: a ratio beyond a float's range still gives 0 or 1.
        with np.errstate(divide="ignore"):
            odds = np.log(before) - np.log1p(-before) + np.where(np.isnan(ratio), 0.0, ratio)
        shifted = 1.0 / (1.0 + np.exp(-np.clip(odds, -700.0, 700.0)))
        found[number] = shifted
    return found


def _rounds(quantity: str, values: ArrayLike) -> Numbers:
    """Values as a matrix of rounds by cells."""
    numbers = finite(quantity, values)
    if numbers.ndim != 2:
        raise WrongShape(quantity, found=numbers.shape, allowed="(rounds, cells)")
    return numbers


def _per_cell(quantity: str, values: Numbers, cells: int) -> Numbers:
    """One number for each cell, from such or from a single one."""
    if values.shape not in ((), (cells,)):
        raise WrongShape(quantity, found=values.shape, allowed=f"({cells},) or a number")
    return np.asarray(np.broadcast_to(values, (cells,)), dtype=np.float64)


def _check_sense(sense: int) -> None:
    """Refuse a sense that is neither down nor up."""
    if sense not in (-1, 1):
        raise OutOfRange("sense", found=sense, allowed="-1 or 1")


def _log_ratios(rounds: Numbers, shift: float, sense: int) -> Numbers:
    """Logarithm of the likelihood ratio of each reading, shifted over not shifted."""
    _check_sense(sense)
    size = float(above_zero("shift", shift))
    return np.asarray(size * (sense * rounds) - size**2 / 2.0)
