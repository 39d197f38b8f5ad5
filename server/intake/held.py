"""Rows that are held: listed, mended, or dropped."""

import json
from collections.abc import Mapping
from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.intake.results import RecordResult
from server.intake.sitting import IntakeSettings
from server.intake.take_in import mend_record
from server.storage import held_rows as stored
from server.storage.deliveries import Delivery, HeldRow
from server.storage.errors import Conflict
from server.storage.plant import House
from server.storage.turns import take_turn


@dataclass(frozen=True, slots=True)
class HeldResult:
    """A row that was held, and what has become of it."""

    id: int
    delivery_id: int
    sheet: str
    source: str
    sender: str
    received_ms: int
    line: int
    column: str
    found: str
    expected: str
    reason: str
    fields: Mapping[str, str]
    """Text by column, with a decimal point in numbers."""
    raw: str
    state: str
    decided_ms: int | None
    decided_by: str | None
    decided_why: str | None


def held_rows(
    session: Session,
    sheet: str | None = None,
    state: str = "held",
    limit: int = 100,
    before_id: int | None = None,
    delivery_id: int | None = None,
) -> list[HeldResult]:
    """Rows that are held (or were mended, or dropped), the newest first.

    Those of one delivery come in the order of its lines.
    """
    found = stored.held_rows(session, sheet, state, limit, before_id, delivery_id)
    return [_result(row, delivery) for row, delivery in found]


def held_row(session: Session, held_id: int) -> HeldResult:
    """One row that was held."""
    row, delivery = stored.held_row(session, held_id)
    return _result(row, delivery)


def held_counts(session: Session) -> dict[str, int]:
    """How many rows are held, by sheet."""
    return stored.held_counts(session)


def mend(
    session: Session,
    house: House,
    held_id: int,
    fields: Mapping[str, str],
    who: str,
    now_ms: int,
    settings: IntakeSettings,
    reason: str = "",
) -> RecordResult:
    """Take a held row in with these fields; it stays held where they are wrong as well.

    With a `reason` it corrects what is stored under the same key.

    Raises
    ------
    Conflict
        When the row has been mended or dropped already.
    """
    take_turn(session)
    row = _undecided(session, held_id)
    delivery = Delivery(
        sheet=row.sheet,
        source=f"{row.source}, line {row.line}, mended",
        sender=who,
        received_ms=now_ms,
        reason=reason.strip(),
    )
    answer = mend_record(session, house, fields, delivery, settings)
    if answer.status != "held":
        stored.decide_held(session, held_id, "mended", who, reason.strip(), now_ms)
    return answer


def drop(session: Session, held_id: int, who: str, why: str, now_ms: int) -> None:
    """Decide that a held row is not to be taken in.

    Raises
    ------
    Conflict
        When no reason is given, or the row has been mended or dropped already.
    """
    if not why.strip():
        raise Conflict("a row is dropped with a reason")
    _undecided(session, held_id)
    stored.decide_held(session, held_id, "dropped", who, why.strip(), now_ms)


def _undecided(session: Session, held_id: int) -> HeldResult:
    row = held_row(session, held_id)
    if row.state != "held":
        raise Conflict(f"this row was {row.state} by {row.decided_by} already")
    return row


def _result(row: HeldRow, delivery: Delivery) -> HeldResult:
    return HeldResult(
        id=row.id,
        delivery_id=row.delivery_id,
        sheet=row.sheet,
        source=delivery.source,
        sender=delivery.sender,
        received_ms=delivery.received_ms,
        line=row.line,
        column=row.column,
        found=row.found,
        expected=row.expected,
        reason=row.reason,
        fields=json.loads(row.fields),
        raw=row.raw,
        state=row.state,
        decided_ms=row.decided_ms,
        decided_by=row.decided_by,
        decided_why=row.decided_why,
    )
