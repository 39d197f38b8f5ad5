"""A section's readings cut into rounds: one walk along the cells with the voltmeter."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Numbers = NDArray[np.float64]
Whole = NDArray[np.int64]

# A pause longer than this ends a round; a walk along a thousand cells has none.
PAUSE_MS = 90 * 60_000


@dataclass(frozen=True)
class Readings:
    """Believed readings of a section under load, in the order of time and cell."""

    at_ms: Whole
    place: Whole
    """Number of the cell less one."""
    volts: Numbers
    amps: Numbers
    """The section's current then."""

    def part(self, start: int, end: int) -> "Readings":
        """Those from one place in the order to another."""
        cut = slice(start, end)
        return Readings(self.at_ms[cut], self.place[cut], self.volts[cut], self.amps[cut])


def ordered(at_ms: Whole, place: Whole, volts: Numbers, amps: Numbers) -> Readings:
    """Readings in any order, put into that of time and cell."""
    order = np.lexsort((place, at_ms))
    return Readings(at_ms[order], place[order], volts[order], amps[order])


def round_starts(readings: Readings) -> list[int]:
    """Where each round begins: after a pause, or where a cell would come a second time."""
    at_ms, place = readings.at_ms, readings.place
    if not len(at_ms):
        return []
    pauses = np.flatnonzero(np.diff(at_ms) > PAUSE_MS) + 1
    edges = [0, *pauses.tolist(), len(at_ms)]
    starts = []
    for first, last in zip(edges, edges[1:], strict=False):
        starts.append(first)
        if len(np.unique(place[first:last])) == last - first:
            continue
        seen: set[int] = set()
        for at, cell in enumerate(place[first:last].tolist(), start=first):
            if cell in seen:
                starts.append(at)
                seen = set()
            seen.add(cell)
    return starts


def rounds_of(readings: Readings) -> Iterator[Readings]:
    """Every round, in the order of time."""
    starts = round_starts(readings)
    for start, end in zip(starts, [*starts[1:], len(readings.at_ms)], strict=False):
        yield readings.part(start, end)
