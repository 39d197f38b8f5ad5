"""Readings that are not believed: listed, counted, and decided on."""

from collections.abc import Iterable

from sqlalchemy import func, select, update
from sqlalchemy.orm import Session

from server.storage.deliveries import Delivery, Suspicion
from server.storage.direct import insert_rows
from server.storage.errors import NotFound


def suspicions(
    session: Session, state: str, section_id: int | None, limit: int, before_id: int | None
) -> list[tuple[Suspicion, Delivery]]:
    """Doubted readings with the delivery that brought them, the newest first."""
    query = (
        select(Suspicion, Delivery)
        .join(Delivery, Suspicion.delivery_id == Delivery.id)
        .where(Suspicion.state == state)
        .order_by(Suspicion.id.desc())
        .limit(limit)
    )
    if section_id is not None:
        query = query.where(Suspicion.section_id == section_id)
    if before_id is not None:
        query = query.where(Suspicion.id < before_id)
    return [(doubt, delivery) for doubt, delivery in session.execute(query)]


def suspicion(session: Session, suspicion_id: int) -> tuple[Suspicion, Delivery]:
    """One doubted reading with the delivery that brought it."""
    found = session.execute(
        select(Suspicion, Delivery)
        .join(Delivery, Suspicion.delivery_id == Delivery.id)
        .where(Suspicion.id == suspicion_id)
    ).first()
    if found is None:
        raise NotFound("doubted reading", suspicion_id)
    return found[0], found[1]


def suspicion_count(session: Session) -> int:
    """How many doubted readings nobody has decided on."""
    return session.scalar(select(func.count(Suspicion.id)).where(Suspicion.state == "open")) or 0


def decide_suspicions(
    session: Session,
    readings: Iterable[tuple[int, int]],
    state: str,
    who: str,
    why: str,
    now_ms: int,
) -> None:
    """Write what became of the open doubts about readings, each given by (cell_id, at_ms)."""
    insert_rows(
        session,
        "UPDATE suspicion SET state = ?, decided_ms = ?, decided_by = ?, decided_why = ?"
        " WHERE cell_id = ? AND at_ms = ? AND state = 'open'",
        [(state, now_ms, who, why, cell_id, at_ms) for cell_id, at_ms in readings],
    )


def withdraw_suspicions_of(
    session: Session, delivery_id: int, who: str, why: str, now_ms: int
) -> None:
    """Close every open doubt about what a delivery brought."""
    session.execute(
        update(Suspicion)
        .where(Suspicion.delivery_id == delivery_id, Suspicion.state == "open")
        .values(state="withdrawn", decided_ms=now_ms, decided_by=who, decided_why=why)
    )
