"""What the work list shows: which flags, in which order, with the last readings of their cells."""

from dataclasses import dataclass, fields
from typing import Annotated, Literal
from urllib.parse import parse_qs, urlencode

import numpy as np
from fastapi import Query
from sqlalchemy.orm import Session

from server.figures.trend_line import TrendLine, trend_line
from server.storage.people import ROLES, people
from server.storage.plant import House
from server.storage.readings_before import last_believed
from server.watch.life import DAY_MS
from server.watch.worklist import WorkItem

ON_ONE_PAGE = 40
ON_ONE_SHEET = 11
"""Items that are printed: what one sheet holds with the cautions."""

_TREND_MS = 30 * DAY_MS
_TREND_READINGS = 30

Kind = Literal["", "short", "drift high", "drift low", "suspect reading", "no reading"]


@dataclass(frozen=True)
class Shown:
    """Which flags are shown, and in which order: all of it stands in the address."""

    section: Annotated[str, Query(max_length=200)] = ""
    tier: Literal["", "act", "look"] = ""
    kind: Kind = ""
    state: Literal["", "raised", "seen", "working", "shelved", "all"] = ""
    """Nothing: everything that is not shelved."""
    order: Literal["", "walk"] = ""
    """Nothing: the costliest first."""
    start: Annotated[int, Query(ge=0, le=100_000)] = 0

    def address(self, **other: object) -> str:
        """The query of the same list, with some of it changed."""
        kept = {field.name: getattr(self, field.name) for field in fields(self)} | other
        return urlencode({name: value for name, value in kept.items() if value})

    def holds(self, item: WorkItem) -> bool:
        """Whether an item is among those that are shown."""
        flag, state = item.flag, item.life.state
        return (
            (not self.section or flag.section == self.section)
            and (not self.tier or flag.tier == self.tier)
            and (not self.kind or flag.kind == self.kind)
            and (state != "shelved" if not self.state else self.state in (state, "all"))
        )


def shown_of(query: str) -> Shown:
    """What an address showed, from a form that was sent from there; whatever is wrong is left."""
    sent = {name: values[-1] for name, values in parse_qs(query[:2000]).items()}
    names = {field.name for field in fields(Shown)} - {"start"}
    # A word that is none of those known shows an empty list; it is not worth refusing a form for.
    return Shown(**{name: value for name, value in sent.items() if name in names})  # type: ignore[arg-type]


@dataclass(frozen=True)
class Line:
    """One item with what is drawn and said beside it."""

    item: WorkItem
    trend: TrendLine | None
    number: int
    """Place on the page, from 1."""

    @property
    def anchor(self) -> str:
        """Where it stands on the page, and what its fields are named after."""
        return f"flag-{self.number}"

    @property
    def is_printed(self) -> bool:
        """Whether it is on the printed sheet."""
        return self.number <= ON_ONE_SHEET


@dataclass(frozen=True)
class Group:
    """Lines under one heading: a tier, or a section that is walked."""

    name: str
    is_walk: bool
    lines: list[Line]


@dataclass(frozen=True)
class Totals:
    """What the flags that are shown cost together."""

    flags: int
    to_act_on: int
    amps: float
    kg_per_day: float
    value_per_day: float


def totals(items: list[WorkItem]) -> Totals:
    """What these flags cost together."""
    newest = [item.newest for item in items]
    return Totals(
        flags=len(items),
        to_act_on=sum(item.flag.tier == "act" for item in items),
        amps=sum(numbers.short_amps or 0.0 for numbers in newest),
        kg_per_day=sum(numbers.lost_kg_per_day or 0.0 for numbers in newest),
        value_per_day=sum(numbers.lost_value_per_day or 0.0 for numbers in newest),
    )


def groups(
    session: Session, house: House, items: list[WorkItem], shown: Shown, now_ms: int
) -> list[Group]:
    """The items of this page under their headings, each with the line of its last readings."""
    is_walk = shown.order == "walk"
    if is_walk:
        items = sorted(items, key=lambda item: (item.flag.section, item.walk, item.rank))
    part = items[shown.start : shown.start + ON_ONE_PAGE]
    readings = _last_readings(session, house, part, now_ms)
    found: dict[str, list[Line]] = {}
    for number, item in enumerate(part, start=1):
        flag = item.flag
        at_ms, volts = readings[flag.section, flag.cell]
        line = Line(
            item,
            trend_line(at_ms, volts, flag.expected_volts),
            number,
        )
        found.setdefault(flag.section if is_walk else flag.tier, []).append(line)
    return [Group(name, is_walk, lines) for name, lines in found.items()]


def _last_readings(
    session: Session, house: House, items: list[WorkItem], now_ms: int
) -> dict[tuple[str, int], tuple[list[int], list[float]]]:
    """(moments, volts) of the last believed readings of each item's cell."""
    cells = {
        house.section(item.flag.section).cell_id(item.flag.cell): (
            item.flag.section,
            item.flag.cell,
        )
        for item in items
    }
    asked = [(cell_id, now_ms + 1) for cell_id in sorted(cells)]
    found, at_ms, microvolts = last_believed(session, asked, _TREND_MS, _TREND_READINGS)
    answer = {}
    for cell_id, name in cells.items():
        own = slice(*np.searchsorted(found, [cell_id, cell_id + 1]))
        answer[name] = (at_ms[own].tolist(), (microvolts[own] / 1e6).tolist())
    return answer


def who_can_work(session: Session, myself: str) -> list[str]:
    """Names of those to whom a cell can be given, whoever asks first."""
    names = [
        person.name
        for person in people(session)
        if person.is_active and ROLES.index(person.role) >= ROLES.index("operator")
    ]
    return [myself, *(name for name in names if name != myself)]
