"""What the watch expected of a cell and of a section, round by round."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.plant import SectionPlan
from server.storage.watch_rows import rounds_between, rounds_of_cell

Numbers = NDArray[np.float64]

_LONGEST_ROUND_MS = 12 * 3_600_000


@dataclass(frozen=True)
class Expected:
    """What a healthy cell would have read at given moments; NaN where the watch says nothing."""

    expected_v: Numbers
    band_v: Numbers
    """Standard uncertainty of that, the scatter of a reading included."""
    probability: Numbers
    """Of a short."""


def expected_at(
    session: Session, section: SectionPlan, cell: int, at_ms: NDArray[np.int64]
) -> Expected:
    """What the watch made of a cell's readings at these ascending moments."""
    shape = at_ms.shape
    values = Expected(*(np.full(shape, np.nan) for _ in range(3)))
    if not len(at_ms):
        return values
    first_ms, last_ms = int(at_ms[0]) - _LONGEST_ROUND_MS, int(at_ms[-1]) + 1
    said = rounds_of_cell(session, section.id, cell - 1, first_ms, last_ms)
    place = np.searchsorted(at_ms, said["at_ms"])
    known = (place < len(at_ms)) & (at_ms[np.minimum(place, len(at_ms) - 1)] == said["at_ms"])
    place, said = place[known], said[known]
    values.expected_v[place] = said["expected_v"]
    values.band_v[place] = said["band_v"]
    values.probability[place] = said["probability"]
    return values


@dataclass(frozen=True)
class Carpet:
    """Cells by rounds: how far each reading was from what was expected; NaN where none was."""

    started_ms: NDArray[np.int64]
    """When each column begins."""
    ended_ms: NDArray[np.int64]
    deviation_v: NDArray[np.float32]
    """Cells by columns."""
    times_band: NDArray[np.float32]
    """The same over the band of what was expected."""


def carpet(
    session: Session, section: SectionPlan, from_ms: int, to_ms: int, columns: int
) -> Carpet:
    """The rounds that began in [from_ms, to_ms) in at most so many columns.

    Where there are more rounds, neighbours share a column, which shows of each cell the reading
    that was furthest off.
    """
    rounds = rounds_between(session, section.id, from_ms, to_ms)
    cells = max((len(said) for _, _, _, said in rounds), default=0)
    deviation = np.full((len(rounds), cells), np.nan, np.float32)
    band = np.ones((len(rounds), cells), np.float32)
    for nth, (_, _, _, said) in enumerate(rounds):
        is_read = said["at_ms"] > 0
        deviation[nth, : len(said)][is_read] = said["deviation_v"][is_read]
        band[nth, : len(said)][is_read] = np.maximum(said["band_v"][is_read], 1e-6)
    times = deviation / band
    started = np.array([one[0] for one in rounds], np.int64)
    ended = np.array([one[1] for one in rounds], np.int64)
    if len(rounds) > columns:
        firsts = np.arange(columns) * len(rounds) // columns
        chosen = _furthest(times, firsts)
        deviation = np.take_along_axis(deviation, chosen, axis=0)
        times = np.take_along_axis(times, chosen, axis=0)
        started, ended = started[firsts], ended[np.append(firsts[1:], len(rounds)) - 1]
    return Carpet(started, ended, deviation.T, times.T)


def _furthest(times: NDArray[np.float32], firsts: NDArray[np.int64]) -> NDArray[np.int64]:
    """Of each cell, the row furthest from 0 in each run of rows that begins at `firsts`."""
    size = np.where(np.isnan(times), -1.0, np.abs(times))
    ends = np.append(firsts[1:], len(times))
    return np.stack(
        [
            start + np.argmax(size[start:end], axis=0)
            for start, end in zip(firsts.tolist(), ends.tolist(), strict=True)
        ]
    )
