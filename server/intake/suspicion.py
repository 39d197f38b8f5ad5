"""Readings that are not believed: listed, confirmed, corrected, or withdrawn."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.intake.corrections import replace_reading
from server.science.units import microvolts_from_volts, volts_from_microvolts
from server.storage import suspicions as stored
from server.storage.deliveries import Delivery, Suspicion
from server.storage.errors import Conflict
from server.storage.plant import House
from server.storage.readings import history
from server.storage.turns import take_turn


@dataclass(frozen=True, slots=True)
class SuspectResult:
    """A reading that was not believed, and what has become of the doubt."""

    id: int
    delivery_id: int
    source: str
    line: int
    section: str
    cell: int
    at_ms: int
    volts: float | None
    """As it was entered."""
    code: str
    reason: str
    found: str
    expected: str
    suggested_volts: float | None
    state: str
    decided_ms: int | None
    decided_by: str | None
    decided_why: str | None


def suspect_readings(
    session: Session,
    house: House,
    state: str = "open",
    section: str | None = None,
    limit: int = 100,
    before_id: int | None = None,
) -> list[SuspectResult]:
    """Readings that are not believed (or were decided on), the newest first."""
    section_id = None if section is None else house.section(section).id
    found = stored.suspicions(session, state, section_id, limit, before_id)
    return [_result(session, house, doubt, delivery) for doubt, delivery in found]


def suspect_reading(session: Session, house: House, suspicion_id: int) -> SuspectResult:
    """One reading that was not believed."""
    doubt, delivery = stored.suspicion(session, suspicion_id)
    return _result(session, house, doubt, delivery)


def suspect_count(session: Session) -> int:
    """How many readings are not believed and wait for somebody."""
    return stored.suspicion_count(session)


def confirm(
    session: Session, house: House, suspicion_id: int, who: str, why: str, now_ms: int
) -> None:
    """Let a reading count as it was entered.

    Raises
    ------
    Conflict
        When it has been decided on already; the same holds for the others here.
    """
    doubt = _open(session, house, suspicion_id)
    assert doubt.volts is not None
    replace_reading(
        session,
        house,
        doubt.section,
        doubt.cell,
        doubt.at_ms,
        microvolts_from_volts(doubt.volts),
        "confirmed",
        who,
        why or "confirmed",
        now_ms,
    )


def correct(
    session: Session,
    house: House,
    suspicion_id: int,
    volts: float,
    who: str,
    why: str,
    now_ms: int,
) -> None:
    """Put another voltage in the place of a doubted one; the former is kept."""
    doubt = _open(session, house, suspicion_id)
    replace_reading(
        session,
        house,
        doubt.section,
        doubt.cell,
        doubt.at_ms,
        microvolts_from_volts(volts),
        "corrected",
        who,
        why,
        now_ms,
    )


def withdraw(
    session: Session, house: House, suspicion_id: int, who: str, why: str, now_ms: int
) -> None:
    """Leave a reading out for good."""
    doubt = _open(session, house, suspicion_id)
    replace_reading(
        session, house, doubt.section, doubt.cell, doubt.at_ms, None, "withdrawn", who, why, now_ms
    )


def _open(session: Session, house: House, suspicion_id: int) -> SuspectResult:
    take_turn(session)
    doubt = suspect_reading(session, house, suspicion_id)
    if doubt.state != "open":
        raise Conflict(f"this reading was {doubt.state} by {doubt.decided_by} already")
    return doubt


def _result(session: Session, house: House, doubt: Suspicion, delivery: Delivery) -> SuspectResult:
    plan = house.section_of_id(doubt.section_id)
    revisions = {row[0]: row[1] for row in history(session, doubt.cell_id, doubt.at_ms)}
    microvolts = revisions.get(doubt.revision)
    return SuspectResult(
        id=doubt.id,
        delivery_id=doubt.delivery_id,
        source=delivery.source,
        line=doubt.line,
        section=plan.name,
        cell=plan.number_of(doubt.cell_id),
        at_ms=doubt.at_ms,
        volts=None if microvolts is None else volts_from_microvolts(microvolts),
        code=doubt.code,
        reason=doubt.reason,
        found=doubt.found,
        expected=doubt.expected,
        suggested_volts=None if doubt.suggested is None else float(doubt.suggested),
        state=doubt.state,
        decided_ms=doubt.decided_ms,
        decided_by=doubt.decided_by,
        decided_why=doubt.decided_why,
    )
