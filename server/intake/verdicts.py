"""What is to become of each row that could be read: new, known already, or held."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from datetime import datetime
from enum import IntEnum
from typing import Protocol
from zoneinfo import ZoneInfo

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.intake.rows import Rows
from server.storage.delivery_rows import Doubt, deliveries_with_ids
from server.storage.plant import House, SectionPlan


class Outcome(IntEnum):
    """What becomes of a row."""

    NEW = 0
    DUPLICATE = 1
    HELD = 2


@dataclass(frozen=True, slots=True)
class RowFault:
    """Why a row that can be read is held all the same."""

    column: str
    found: str
    expected: str
    reason: str


@dataclass(slots=True)
class Verdicts:
    """The outcome of each row, in the order of the rows."""

    outcome: NDArray[np.uint8]
    revision: NDArray[np.int64]
    """The revision under which a new row goes in: 0, or more where it corrects another."""
    faults: dict[int, RowFault] = field(default_factory=dict)
    """By place of the row."""
    notes: dict[int, str] = field(default_factory=dict)
    """What else is to be said of a row, such as why it is known already."""
    doubts: dict[int, Doubt] = field(default_factory=dict)
    """Readings that go in and are not believed."""

    @classmethod
    def of(cls, rows: int) -> "Verdicts":
        """All rows new, until something speaks against it."""
        return cls(np.zeros(rows, np.uint8), np.zeros(rows, np.int64))

    def hold(self, place: int, fault: RowFault) -> None:
        """Hold a row."""
        self.outcome[place] = Outcome.HELD
        self.faults[place] = fault

    def know(self, place: int, note: str = "") -> None:
        """Leave a row out, since the books have it."""
        self.outcome[place] = Outcome.DUPLICATE
        if note:
            self.notes[place] = note

    @property
    def new(self) -> NDArray[np.int64]:
        """Places of the rows that go in."""
        return np.flatnonzero(self.outcome == Outcome.NEW)


@dataclass(frozen=True, slots=True)
class Given:
    """What is known about a delivery before its rows are read."""

    house: House
    now_ms: int
    max_hold_ms: int
    reason: str = ""
    sender: str = ""

    @property
    def is_correction(self) -> bool:
        """Whether rows may take the place of what is stored."""
        return bool(self.reason)

    @property
    def zone(self) -> ZoneInfo:
        """The tankhouse's time zone."""
        return ZoneInfo(self.house.time_zone)

    def written(self, at_ms: int) -> str:
        """A moment in local time, as a sentence has it."""
        return datetime.fromtimestamp(at_ms / 1000, self.zone).strftime("%Y-%m-%d %H:%M")

    def plans(self, names: Sequence[str]) -> list[SectionPlan]:
        """The sections of these names."""
        return [self.house.section(name) for name in names]


class Taker(Protocol):
    """Takes in the rows of one kind of sheet."""

    def begin(self) -> None:
        """Forget what may have changed since the last transaction."""

    def judge(self, session: Session, rows: Rows) -> Verdicts:
        """Decide on every row; writes nothing."""

    def write(self, session: Session, rows: Rows, verdicts: Verdicts, delivery_id: int) -> None:
        """Write the new rows and mark what depends on them as stale."""

    def moments(self, rows: Rows) -> NDArray[np.int64]:
        """The moment of each row that says where in time it belongs."""


def stored_otherwise(
    session: Session, given: Given, column: str, found: str, stored: str, delivery_id: int
) -> RowFault:
    """Say that another value is stored under the same key, which one, who brought it and when."""
    source, sender, received_ms, reason = deliveries_with_ids(session, [delivery_id])[delivery_id]
    why = f" ({reason})" if reason else ""
    return RowFault(
        column=column,
        found=found,
        expected=stored,
        reason=(
            f"{column} is stored here as {stored}, brought by {sender} with {source} on"
            f" {given.written(received_ms)}{why}; found {found}. To change it, send it as a"
            " correction with a reason."
        ),
    )
