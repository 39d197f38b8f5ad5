"""Readings of a round that were entered one line up or down."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.intake.explain import Suspicion, SuspicionCode, sentence

Numbers = NDArray[np.float64]
Truth = NDArray[np.bool_]

LOG_RATIO = 16.0
"""How much better (difference of log-likelihoods) a stretch must fit when it is shifted.

The likelihood ratio of a stretch to the truth exceeds e^T by chance with a probability of at
most e^-T (Markov's inequality: its mean under the truth is 1), and the run with the largest sum
begins anew at each of n cells in two directions, so a round is called falsely with at most
2 n e^-T, 5 in 100,000 for 200 cells.
"""

MOST_FROM_ONE = 10.0
"""One cell's largest contribution to the ratio, that of a reading 4.5 noises off."""

REST_LOG_RATIO = 5.0
"""What the stretch must still show without its two strongest cells. Readings are not Gaussian:
two neighbouring shorts that happen to resemble their neighbours must not be taken for a slip,
in which nearly every cell has a say. Without this, 2 in 10,000 simulated rounds with a fresh
fault in every twentieth cell were called falsely; with it, none in 40,000. The price is one
slip of ten cells in fifty."""

SHORTEST = 5
"""Cells of the shortest stretch called; shorter ones are found cell by cell, if at all."""

POOR_FIT = 2.5
"""Mean squared deviation, in noises squared and capped as above, up to which the shifted stretch
counts as fitting; honest readings give 1. A stretch that fits neither way is not a slip."""


@dataclass(frozen=True, slots=True)
class RowSlip:
    """A stretch of a round that fits better one line further on or back.

    `mask` marks the readings of the stretch. `shift` is +1 where each reading belongs to the
    next cell of the walk, -1 where it belongs to the one before. `suggested_volts` has what
    each cell of the stretch then reads, NaN where its reading was lost in the slip, and
    elsewhere the readings as they are.
    """

    mask: Truth
    shift: int
    log_ratio: float
    suggested_volts: Numbers
    _volts: Numbers
    _expected: Numbers

    def at(self, position: int) -> Suspicion:
        """Tell in words why one reading of the stretch is not believed."""
        return sentence(
            SuspicionCode.ROW_SLIP,
            volts=float(self._volts[position]),
            expected_volts=float(self._expected[position]),
            suggested_volts=float(self.suggested_volts[position]),
            direction="further down" if self.shift > 0 else "further up",
        )

    def reason(self, position: int) -> str:
        """The sentence of one reading of the stretch."""
        return self.at(position).reason


def row_slip(volts: ArrayLike, expected_volts: ArrayLike, noise_volts: ArrayLike) -> RowSlip | None:
    """Tell whether a stretch of one round was entered one line up or down.

    The common movement of the round is taken out first (its median deviation), so that a
    changed current or temperature does not matter. Each reading is then compared with its own
    cell's expectation and with its neighbour's; of all stretches, the one in which the
    neighbour's fits best in sum is found (the run with the largest sum, as Kadane's algorithm
    finds it) and called if the sum is too large for chance.

    Parameters
    ----------
    volts : array_like, shape (n,)
        Readings of one round in walking order, V; NaN where a cell was not read.
    expected_volts : array_like, shape (n,)
        What each cell was expected to read, V; NaN where it is not known.
    noise_volts : array_like, broadcast to (n,)
        Standard deviation of an honest reading about its expectation, V.

    Returns
    -------
    RowSlip or None
        None where nothing speaks for a slip. Where cells differ less than the meter's noise,
        nothing can.

    Example
    -------
    >>> levels = [2.03, 2.05, 1.99, 2.02, 2.06, 1.98, 2.04, 2.00, 2.05, 2.01]
    >>> entered = levels[:2] + levels[3:9] + [2.05, 2.01]
    >>> slip = row_slip(entered, levels, 0.008)
    >>> slip.shift, slip.mask.nonzero()[0].tolist()
    (1, [2, 3, 4, 5, 6, 7])
    """
    return row_slips(
        np.atleast_2d(np.asarray(volts, dtype=np.float64)), expected_volts, noise_volts
    ).get(0)


def row_slips(
    volts: ArrayLike, expected_volts: ArrayLike, noise_volts: ArrayLike
) -> dict[int, RowSlip]:
    """Look for slips in many rounds of one section, given as a matrix of rounds by cells.

    Gives the slips by the place of their round; see `row_slip` for how they are told.
    `expected_volts` and `noise_volts` are broadcast to the shape of `volts`.
    """
    found = np.asarray(volts, dtype=np.float64)
    if found.shape[-1] < SHORTEST:
        return {}
    expected = np.broadcast_to(np.asarray(expected_volts, dtype=np.float64), found.shape)
    noise = np.broadcast_to(np.asarray(noise_volts, dtype=np.float64), found.shape)
    deviation = found - expected
    centred = found - _median_of_rows(deviation)
    own = _misfit(centred, expected, noise)
    slips: dict[int, RowSlip] = {}
    for shift in (1, -1):
        theirs = _misfit(centred, _shifted(expected, shift), noise)
        # Half the difference of the squares is the log-likelihood ratio. A cell that was not
        # read, or of which nothing is known, speaks neither way; at the end of the walk there
        # is no neighbour that its reading could belong to.
        gain = np.nan_to_num((own - theirs) / 2)
        gain[:, -1 if shift > 0 else 0] = -1e6
        sums = np.cumsum(gain, axis=1)
        lowest_before = np.minimum.accumulate(
            np.concatenate([np.zeros((len(sums), 1)), sums[:, :-1]], axis=1), axis=1
        )
        ratios = (sums - lowest_before).max(axis=1)
        for i in np.flatnonzero(ratios >= LOG_RATIO).tolist():
            slip = _slip_in(found[i], expected[i], theirs[i], gain[i], shift)
            if slip and (i not in slips or slips[i].log_ratio < slip.log_ratio):
                slips[i] = slip
    return slips


def _slip_in(
    volts: Numbers, expected: Numbers, theirs: Numbers, gain: Numbers, shift: int
) -> RowSlip | None:
    """Find the stretch in one round that has enough in its favour, and judge it."""
    start, end, log_ratio = _best_run(gain)
    stretch = np.zeros(len(volts), dtype=bool)
    stretch[start:end] = np.isfinite(volts[start:end])
    judged = stretch & np.isfinite(theirs)
    if judged.sum() < SHORTEST or np.mean(theirs[judged]) > POOR_FIT:
        return None
    if np.sort(gain[judged])[:-2].sum() < REST_LOG_RATIO:
        return None
    suggested = volts.copy()
    suggested[stretch] = np.nan
    within = stretch & (_shifted(stretch.astype(np.float64), -shift) == 1.0)
    suggested[within] = _shifted(volts, -shift)[within]
    return RowSlip(stretch, shift, log_ratio, suggested, volts, expected)


def _median_of_rows(values: Numbers) -> Numbers:
    """Median of each row without its NaN, as a column; NaN where there are none.

    Sorting puts NaN last, and is several times quicker than `nanmedian` on short rows.
    """
    count = np.isfinite(values).sum(axis=1)
    ordered = np.sort(values, axis=1)
    rows = np.arange(len(values))
    low, high = np.maximum(count - 1, 0) // 2, count // 2
    high = np.minimum(high, values.shape[1] - 1)
    middle: Numbers = (ordered[rows, low] + ordered[rows, high]) / 2
    return middle[:, np.newaxis]


def _misfit(volts: Numbers, expected: Numbers, noise: Numbers) -> Numbers:
    """Squared deviation in noises, bounded so that no reading counts for more than a few."""
    squared: Numbers = np.minimum(((volts - expected) / noise) ** 2, 2 * MOST_FROM_ONE)
    return squared


def _shifted(values: Numbers, shift: int) -> Numbers:
    """Each cell's value of its neighbour in the walk, NaN beyond the ends."""
    moved = np.full(values.shape, np.nan)
    if shift > 0:
        moved[..., :-1] = values[..., 1:]
    else:
        moved[..., 1:] = values[..., :-1]
    return moved


def _best_run(gain: Numbers) -> tuple[int, int, float]:
    """Start, end and sum of the run with the largest sum."""
    best, best_start, best_end = 0.0, 0, 0
    total, start = 0.0, 0
    for i, value in enumerate(gain.tolist()):
        if total <= 0.0:
            total, start = 0.0, i
        total += value
        if total > best:
            best, best_start, best_end = total, start, i + 1
    return best_start, best_end, best
