"""Records with a key and values (lots, outages, assays, finds): new, known, corrected or held."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.intake.repeats import twice_in_one_delivery
from server.intake.rows import Rows
from server.intake.verdicts import Given, RowFault, Verdicts, stored_otherwise
from server.storage.plant import SectionPlan
from server.storage.revisions import (
    Key,
    Record,
    Revision,
    add_revisions,
    revisions,
)

_THIS_DELIVERY = -1
"""Stands for the delivery that is being judged, which may have no number yet."""


@dataclass(frozen=True, slots=True)
class Found:
    """One row as a record."""

    key: Key
    values: Mapping[str, Any]
    plan: SectionPlan


class RecordTaker:
    """Takes in records one by one; what differs from kind to kind is in the sheets' own files."""

    record: Record
    """The table."""

    moment_column: str
    """The column that says where in time a row belongs."""

    def __init__(self, given: Given, section_names: list[str]) -> None:
        self._given = given
        self._names = section_names
        self._decided: dict[int, tuple[Found, Revision]] = {}
        self.begin()

    def begin(self) -> None:
        """Forget what may have changed since the last transaction."""

    def moments(self, rows: Rows) -> NDArray[np.int64]:
        """The moment of each row that says where in time it belongs."""
        return rows.array(self.moment_column)

    def judge(self, session: Session, rows: Rows) -> Verdicts:
        """Decide on every row, each in the light of those before it."""
        verdicts = Verdicts.of(len(rows))
        self._decided = {}
        plans = self._given.plans(self._names)
        found = [
            self.found(rows, place, plans[code])
            for place, code in enumerate(rows.array("section").tolist())
        ]
        if not found:
            return verdicts
        stored = revisions(session, self.record, [row.key for row in found])
        lines: dict[Key, int] = {}
        self.prepare(session, found)
        for place, row in enumerate(found):
            history = stored.setdefault(row.key, [])
            values = self._settled(session, row, history, place, verdicts, lines)
            if values is None:
                continue
            candidate = Found(row.key, values, row.plan)
            if fault := self.contradiction(candidate):
                verdicts.hold(place, fault)
                continue
            revision = Revision(
                history[-1].revision + 1 if history else 0, False, values, _THIS_DELIVERY
            )
            verdicts.revision[place] = revision.revision
            history.append(revision)
            lines[row.key] = int(rows.lines[place])
            self._decided[place] = (candidate, revision)
            self.accepted(candidate, history)
        return verdicts

    def write(self, session: Session, rows: Rows, verdicts: Verdicts, delivery_id: int) -> None:
        """Write the new rows and mark what depends on them as stale."""
        decided = [self._decided[place] for place in verdicts.new.tolist()]
        add_revisions(
            session,
            self.record,
            [
                (
                    found.key,
                    Revision(revision.revision, False, revision.values, delivery_id),
                )
                for found, revision in decided
            ],
        )
        self.mark_stale(session, [found for found, _ in decided])

    def _settled(
        self,
        session: Session,
        row: Found,
        history: Sequence[Revision],
        place: int,
        verdicts: Verdicts,
        lines: Mapping[Key, int],
    ) -> Mapping[str, Any] | None:
        """Give the values to be written, or None where the row is known or contradicts."""
        if not history:
            return row.values
        last = history[-1]
        given = self.stated(row.values)
        if not last.is_void and _agrees(given, last.values):
            verdicts.know(place)
            return None
        if self._given.is_correction and last.delivery_id != _THIS_DELIVERY:
            return {**last.values, **given}
        if any(not former.is_void and _agrees(given, former.values) for former in history):
            verdicts.know(place, "This was stored before and has been corrected since.")
            return None
        differing = [name for name, value in given.items() if last.values[name] != value]
        if not last.is_void and self.completes(differing, last.values):
            return {**last.values, **given}
        column, found = self.as_written(differing[0] if differing else next(iter(given)), given)
        stored = self.as_written(differing[0], last.values)[1] if differing else found
        if last.delivery_id == _THIS_DELIVERY:
            fault = twice_in_one_delivery(column, found, stored, lines[row.key])
        else:
            fault = stored_otherwise(
                session,
                self._given,
                column,
                found,
                "withdrawn" if last.is_void else stored,
                last.delivery_id,
            )
        verdicts.hold(place, fault)
        return None

    # What follows is told by the kind of the record.

    def found(self, rows: Rows, place: int, plan: SectionPlan) -> Found:
        """Give a row as a record."""
        raise AssertionError("every kind of record says how it is read")

    def stated(self, values: Mapping[str, Any]) -> Mapping[str, Any]:
        """Give those of a row's values that it states: all of them, unless a blank says nothing."""
        return values

    def completes(self, differing: Sequence[str], stored: Mapping[str, Any]) -> bool:
        """Tell whether a row adds to what is stored and contradicts none of it."""
        return False

    def as_written(self, column: str, values: Mapping[str, Any]) -> tuple[str, str]:
        """Give the sheet's column and the text of a stored value."""
        return column, str(values[column])

    def prepare(self, session: Session, found: Sequence[Found]) -> None:
        """Look up what the records are to be compared with."""

    def contradiction(self, row: Found) -> RowFault | None:
        """Tell what speaks against a record that can be read."""
        return None

    def accepted(self, row: Found, history: Sequence[Revision]) -> None:
        """Note a record, for those after it in the same delivery."""

    def mark_stale(self, session: Session, found: Sequence[Found]) -> None:
        """Mark what depends on the records as stale."""


def _agrees(given: Mapping[str, Any], stored: Mapping[str, Any]) -> bool:
    return all(stored[name] == value for name, value in given.items())
