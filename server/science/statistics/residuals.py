"""Residuals, CUSUM and EWMA of a whole house of cells, block by block in the processor's cache."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, not_negative
from server.science.errors import OutOfRange, WrongShape

# A single-precision number: seven digits, three more than a voltmeter shows.
Singles = NDArray[np.float32]
_Readings = NDArray[np.float32] | NDArray[np.float64]

# Tried here: so many rounds of 1,500 cells keep every buffer of a block within 1 MB of cache, and
# spread the cost of a call over enough numbers.
_BLOCK = 24


@dataclass(frozen=True)
class HouseState:
    """Sums and averages of every cell between two rounds, shape (cells,), unit of the readings."""

    sums: Singles
    averages: Singles


@dataclass(frozen=True)
class HouseCharts:
    """What a house's readings say after each round, in the unit of the readings.

    `centres` of shape (rounds, sections) is the robust centre of each section, `residuals` the
    readings less it, `sums` the CUSUM of the residuals and `averages` their EWMA, each of shape
    (rounds, cells); `state` is where to go on from.
    """

    centres: Singles
    residuals: Singles
    sums: Singles
    averages: Singles
    state: HouseState


def house_charts(
    values: ArrayLike,
    sections: ArrayLike,
    k: ArrayLike,
    weight: float,
    sense: int = -1,
    state: HouseState | None = None,
) -> HouseCharts:
    """Residuals of every cell from its section's median, their CUSUM and their EWMA.

    Cells of a section share current, temperature and electrolyte, so that the section's median of
    a round is what a healthy cell would show, whatever the load was. The three are worked out
    together, a block of rounds at a time, and in single precision: seven digits, which is three
    more than readings have, at half the memory. `cusum` and `ewma` do the same slowly and in double
    precision, and count. Causal and resumable, so that a year and a round give the same. A missing
    reading leaves its residual missing and its sum and average as they were, and no other cell is
    touched but through a median of one reading fewer.

    Parameters
    ----------
    values : array_like, shape (rounds, cells)
        Readings, any unit, one row for each round; NaN where missing.
    sections : array_like of int, shape (n + 1,)
        Bounds of n sections of neighbouring cells: section i has the columns from bound i to
        before bound i + 1. The first is 0, the last the number of cells, and they ascend.
    k : array_like, a number or shape (cells,)
        Reference value of the CUSUM, in the unit of the readings: such as half of a cell's
        standard deviation. Not negative.
    weight : float
        Weight of the newest residual in the EWMA; above 0, at most 1.
    sense : int
        -1 to gather residuals below the centre in the CUSUM, 1 for those above.
    state : HouseState, optional
        Where the former call ended; all from zero when not given.

    Returns
    -------
    HouseCharts
        Centres, residuals, sums and averages after each round. Centres are NaN where a section has
        no reading, residuals where there is none of the cell.

    Raises
    ------
    OutOfRange
        If a value is infinite or beyond single precision, k negative, or the weight, the sense or
        the bounds not as said.
    WrongShape
        If the values are not rounds by cells, or k or the state is of other cells.

    Source
    ------
    E. S. Page, Biometrika 41 (1954) 100; S. W. Roberts, Technometrics 1 (1959) 239; median by
    sorting.

    Example
    -------
    >>> volts = [[2.03, 2.04, 2.05, 2.04], [2.13, 2.14, 2.15, 2.04]]
    >>> charts = house_charts(volts, sections=[0, 4], k=0.01, weight=0.5)
    >>> [f"{residual:.3f}" for residual in charts.residuals[1]], f"{charts.sums[1, 3]:.3f}"
    (['-0.005', '0.005', '0.015', '-0.095'], '0.085')
    """
    rounds, bounds, reference = _checked(values, sections, k, weight, sense)
    cells = rounds.shape[1]
    if state is None:
        state = HouseState(np.zeros(cells, np.float32), np.zeros(cells, np.float32))
    for found in (state.sums.shape, state.averages.shape):
        if found != (cells,):
            raise WrongShape("state", found=found, allowed=f"({cells},)")
    house = _House(bounds)
    centres = np.empty((len(rounds), len(bounds) - 1), np.float32)
    residuals = np.empty(rounds.shape, np.float32)
    # Sums and averages side by side, so that one call moves both.
    both = np.empty((len(rounds), 2 * cells), np.float32)
    steps = np.empty((_BLOCK, 2 * cells), np.float32)
    share = np.float32(weight)
    offset = (-reference).astype(np.float32)
    last = np.concatenate((state.sums, state.averages))
    kept, lowest = np.ones_like(last), np.zeros_like(last)
    kept[cells:], lowest[cells:] = 1.0 - weight, -np.inf
    # What is too large for single precision becomes infinite, which the house refuses.
    with np.errstate(over="ignore", invalid="ignore"):
        for first in range(0, len(rounds), _BLOCK):
            block = slice(first, min(first + _BLOCK, len(rounds)))
            rest = residuals[block]
            has_gaps = house.less_centres(rounds[block], centres[block], rest)
            step = steps[: len(rest)]
            (np.add if sense > 0 else _opposite)(rest, offset, out=step[:, :cells])
            np.multiply(rest, share, out=step[:, cells:])
            gaps = np.isnan(rest) if has_gaps else None
            last = _moved(step, last, kept, lowest, gaps, both[block])
    # Copied, so that the state does not keep a year of charts in memory.
    end = HouseState(last[:cells].copy(), last[cells:].copy())
    return HouseCharts(centres, residuals, both[:, :cells], both[:, cells:], end)


class _House:
    """The sections of a house, and buffers that stay in the processor's cache."""

    def __init__(self, bounds: list[int]) -> None:
        self._bounds = bounds
        self._widths = np.diff(bounds)
        self._sections = np.arange(len(self._widths))
        self._widest = int(self._widths.max())
        self._are_alike = bool((self._widths == self._widest).all())
        # Sections are padded with missing readings to the widest, and sorted all at once.
        shape = (_BLOCK, len(self._widths), self._widest)
        self._ordered = np.full(shape, np.nan, np.float32)

    def less_centres(self, rounds: _Readings, centres: Singles, rest: Singles) -> bool:
        """Write medians and residuals of some rounds; answers whether any reading is missing."""
        count, cells = rest.shape
        ordered = self._ordered[:count]
        rest[...] = rounds
        if self._are_alike:
            ordered.reshape(count, cells)[...] = rest
        else:
            ordered[...] = np.nan
            for number, width in enumerate(self._widths):
                left = self._bounds[number]
                ordered[:, number, :width] = rest[:, left : left + width]
        ordered.sort(axis=-1)
        has_gaps = self._middles(ordered, centres)
        if self._are_alike:
            by_section = rest.reshape(count, len(self._widths), self._widest)
            np.subtract(by_section, centres[..., np.newaxis], out=by_section)
        else:
            np.subtract(rest, np.repeat(centres, self._widths, axis=1), out=rest)
        return has_gaps

    def _middles(self, ordered: Singles, centres: Singles) -> bool:
        """Write the medians of sorted sections; answers whether any reading is missing."""
        if self._are_alike:
            # Plain slices, which cost a tenth of picking by number.
            last = ordered[:, :, -1]
            low = ordered[:, :, (self._widest - 1) // 2]
            high = ordered[:, :, self._widest // 2]
        else:
            each, widths = self._sections, self._widths
            last = ordered[:, each, widths - 1]
            low = ordered[:, each, (widths - 1) // 2]
            high = ordered[:, each, widths // 2]
        np.add(low, high, out=centres)
        np.multiply(centres, np.float32(0.5), out=centres)
        # Sorted, missing and infinite readings are at the ends, and either spoils the sum.
        is_whole = np.isfinite(ordered[:, :, 0] + last)
        if is_whole.all():
            return False
        rows, sections = np.nonzero(~is_whole)
        counts = self._widths[sections]
        while True:
            # Few are missing as a rule, so the missing are counted from the end.
            is_missing = (counts > 0) & np.isnan(ordered[rows, sections, counts - 1])
            if not is_missing.any():
                break
            counts = counts - is_missing
        ends = ordered[rows, sections, 0], ordered[rows, sections, np.maximum(counts - 1, 0)]
        for end in ends:
            if np.isinf(end).any():
                worst = float(end[np.isinf(end)][0])
                raise OutOfRange("values", found=worst, allowed="finite, within single precision")
        low = ordered[rows, sections, np.maximum((counts - 1) // 2, 0)]
        high = ordered[rows, sections, np.minimum(counts // 2, self._widest - 1)]
        centres[rows, sections] = low / 2 + high / 2
        return True


def _opposite(rest: Singles, offset: Singles, out: Singles) -> None:
    """Write the offset less the residuals."""
    np.subtract(offset, rest, out=out)


def _checked(
    values: ArrayLike, sections: ArrayLike, k: ArrayLike, weight: float, sense: int
) -> tuple[_Readings, list[int], Numbers]:
    """Inputs as arrays, once it is certain that they belong together."""
    rounds = np.asarray(values)
    if rounds.dtype not in (np.float32, np.float64):
        rounds = rounds.astype(np.float64)
    if rounds.ndim != 2:
        raise WrongShape("values", found=rounds.shape, allowed="(rounds, cells)")
    cells = rounds.shape[1]
    bounds = np.asarray(sections, dtype=np.int64)
    if bounds.ndim != 1 or len(bounds) < 2 or bounds[0] != 0 or bounds[-1] != cells:
        raise WrongShape("sections", found=bounds.tolist(), allowed=f"bounds from 0 to {cells}")
    if (np.diff(bounds) <= 0).any():
        raise OutOfRange("sections", found=float(np.diff(bounds).min()), allowed="ascending bounds")
    reference = not_negative("k", k)
    if reference.shape not in ((), (cells,)) or np.isnan(reference).any():
        raise WrongShape(
            "k", found=reference.shape, allowed=f"({cells},) or a number, none missing"
        )
    if not 0.0 < weight <= 1.0:
        raise OutOfRange("weight", found=weight, allowed="above 0, at most 1")
    if sense not in (-1, 1):
        raise OutOfRange("sense", found=sense, allowed="-1 or 1")
    return rounds, bounds.tolist(), reference


def _moved(
    steps: Singles,
    last: Singles,
    kept: Singles,
    lowest: Singles,
    gaps: NDArray[np.bool_] | None,
    both: Singles,
) -> Singles:
    """Write sums and averages after each round of a block; answers the last."""
    # The third argument is where the answer goes; naming it costs a tenth of the call.
    if gaps is None:
        for step, row in zip(steps, both, strict=True):
            np.multiply(last, kept, row)
            np.add(row, step, row)
            last = np.maximum(row, lowest, out=row)
        return last
    cells = len(last) // 2
    np.copyto(steps[:, :cells], 0.0, where=gaps)
    np.copyto(steps[:, cells:], 0.0, where=gaps)
    for step, row, gap in zip(steps, both, gaps, strict=True):
        np.multiply(last, kept, row)
        # What is missing forgets nothing either.
        np.copyto(row[cells:], last[cells:], where=gap)
        np.add(row, step, row)
        last = np.maximum(row, lowest, out=row)
    return last
