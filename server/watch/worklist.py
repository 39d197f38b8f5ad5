"""Open flags, those to act on first, the costliest first, with their place on the walk."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.plant import House
from server.storage.walk import walking_order
from server.watch.flags import FlagResult, flags_between

_TIERS = ("act", "look")


@dataclass(frozen=True)
class WorkItem:
    """One open flag on the list."""

    flag: FlagResult
    rank: int
    walk: int
    """Place on the walk through its section, from 1."""


def worklist(session: Session, house: House, at_ms: int) -> list[WorkItem]:
    """Flags that were open at a moment, in the order in which to see to them."""
    flags = [
        flag
        for flag in flags_between(session, house, at_ms, at_ms + 1)
        if flag.ended_ms is None or flag.ended_ms > at_ms
    ]
    flags.sort(
        key=lambda f: (_TIERS.index(f.tier), -(f.lost_value_per_day or 0.0), f.raised_ms, f.cell)
    )
    return [
        WorkItem(flag, rank, walk_place(house, flag)) for rank, flag in enumerate(flags, start=1)
    ]


def walk_place(house: House, flag: FlagResult) -> int:
    """Where on the walk through its section a flag's cell comes."""
    return walking_order(house.section(flag.section).terms_at(flag.raised_ms)).index(flag.cell) + 1
