"""Open flags, those to act on first, the costliest first, with their place on the walk."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.plant import House
from server.storage.walk import walking_order
from server.watch.flags import FlagResult, flags_between
from server.watch.life import FlagLife
from server.watch.lives import lives
from server.watch.newest import Newest, newest_numbers

_TIERS = ("act", "look")


@dataclass(frozen=True)
class WorkItem:
    """One open flag on the list."""

    flag: FlagResult
    life: FlagLife
    rank: int
    walk: int
    """Place on the walk through its section, from 1; 0 for a cell that is there no more."""
    newest: Newest
    """How the cell stands by now; the flag keeps the numbers it was raised by."""


def worklist(session: Session, house: House, at_ms: int) -> list[WorkItem]:
    """Flags that were open at a moment, in the order in which to see to them.

    Left out are those that a find or a person has closed, until they come back.
    """
    flags = [
        flag
        for flag in flags_between(session, house, at_ms, at_ms + 1)
        if flag.ended_ms is None or flag.ended_ms > at_ms
    ]
    listed = [
        (flag, life)
        for flag, life in zip(flags, lives(session, house, flags, at_ms), strict=True)
        if life.state != "ended"
    ]
    newest = newest_numbers(session, house, [flag for flag, _ in listed], at_ms)
    told = sorted(
        ((flag, life, by_now) for (flag, life), by_now in zip(listed, newest, strict=True)),
        key=lambda item: _order(item[0], item[2]),
    )
    places = {
        name: {cell: place for place, cell in enumerate(_walk(house, name, at_ms), start=1)}
        for name in {flag.section for flag, _ in listed}
    }
    return [
        WorkItem(flag, life, rank, places[flag.section].get(flag.cell, 0), by_now)
        for rank, (flag, life, by_now) in enumerate(told, start=1)
    ]


def _order(flag: FlagResult, newest: Newest) -> tuple[int, float, int, int]:
    return _TIERS.index(flag.tier), -(newest.lost_value_per_day or 0.0), flag.raised_ms, flag.cell


def _walk(house: House, section_name: str, at_ms: int) -> tuple[int, ...]:
    return walking_order(house.section(section_name).terms_at(at_ms))
