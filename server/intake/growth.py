"""When the cathodes of each cell grew, to tell whether two lots claim the same ones."""

from bisect import bisect_right, insort
from collections.abc import Iterable
from dataclasses import dataclass, field

_LONG_AGO_MS = -(2**62)


@dataclass(frozen=True, slots=True, order=True)
class Growth:
    """Cathodes that one lot pulled from one cell."""

    pulled_ms: int
    lot: str
    started_ms: int | None = field(compare=False)
    """None: hung when the former ones were pulled."""
    cathodes: int = field(compare=False)


@dataclass(frozen=True, slots=True)
class Overlap:
    """Lots that leave no room for another one."""

    cell: int
    lot: str
    started_ms: int
    pulled_ms: int
    cathodes: int
    """Cathodes that are taken at that time."""


class Hanging:
    """What grew in the cells of one section."""

    def __init__(self) -> None:
        self._cells: dict[int, list[Growth]] = {}
        self._of_lot: dict[str, tuple[tuple[int, ...], Growth]] = {}

    def add(self, cells: Iterable[int], growth: Growth) -> None:
        """Note a lot; a former version of it no longer counts."""
        self.drop(growth.lot)
        numbers = tuple(cells)
        self._of_lot[growth.lot] = (numbers, growth)
        for number in numbers:
            insort(self._cells.setdefault(number, []), growth)

    def drop(self, lot: str) -> None:
        """Forget a lot."""
        if lot not in self._of_lot:
            return
        numbers, growth = self._of_lot.pop(lot)
        for number in numbers:
            self._cells[number].remove(growth)

    def overlap(self, cells: Iterable[int], growth: Growth, most: int) -> Overlap | None:
        """The first cell in which more than `most` cathodes would grow at one time."""
        for number in cells:
            others = [other for other in self._cells.get(number, []) if other.lot != growth.lot]
            if found := _overlap_in_cell(number, others, growth, most):
                return found
        return None


def _overlap_in_cell(
    number: int, others: list[Growth], growth: Growth, most: int
) -> Overlap | None:
    started_ms = _started(growth, others)
    meeting: list[tuple[int, Growth]] = []
    for other in others[bisect_right(others, started_ms, key=lambda other: other.pulled_ms) :]:
        other_started_ms = _started(other, [*others, growth])
        if other_started_ms < growth.pulled_ms:
            meeting.append((other_started_ms, other))
    # Where most grow at one time is at the start of one of them.
    for moment_ms in (started_ms, *(start_ms for start_ms, _ in meeting)):
        there = [
            (start_ms, other)
            for start_ms, other in meeting
            if start_ms <= moment_ms < other.pulled_ms
        ]
        taken = sum(other.cathodes for _, other in there)
        if started_ms <= moment_ms and taken + growth.cathodes > most:
            start_ms, other = there[0]
            return Overlap(number, other.lot, start_ms, other.pulled_ms, taken)
    return None


def _started(growth: Growth, others: list[Growth]) -> int:
    """When the cathodes were hung: as stated, else when the former ones were pulled."""
    if growth.started_ms is not None:
        return growth.started_ms
    return max(
        (other.pulled_ms for other in others if other.pulled_ms < growth.pulled_ms),
        default=_LONG_AGO_MS,
    )
