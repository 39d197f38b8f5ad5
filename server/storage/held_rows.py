"""Rows that are held: listed, counted, and decided on."""

from sqlalchemy import func, select, update
from sqlalchemy.orm import Session

from server.storage.deliveries import Delivery, HeldRow
from server.storage.errors import NotFound


def held_rows(
    session: Session,
    sheet: str | None,
    state: str,
    limit: int,
    before_id: int | None,
    delivery_id: int | None = None,
) -> list[tuple[HeldRow, Delivery]]:
    """Held rows with the delivery that brought them, the newest first.

    Those of one delivery come in the order of its lines.
    """
    query = (
        select(HeldRow, Delivery)
        .join(Delivery, HeldRow.delivery_id == Delivery.id)
        .where(HeldRow.state == state)
        .limit(limit)
    )
    if delivery_id is None:
        query = query.order_by(HeldRow.id.desc())
    else:
        query = query.where(HeldRow.delivery_id == delivery_id).order_by(HeldRow.id)
    if sheet is not None:
        query = query.where(HeldRow.sheet == sheet)
    if before_id is not None:
        query = query.where(HeldRow.id < before_id)
    return [(row, delivery) for row, delivery in session.execute(query)]


def held_row(session: Session, held_id: int) -> tuple[HeldRow, Delivery]:
    """One held row with the delivery that brought it."""
    found = session.execute(
        select(HeldRow, Delivery)
        .join(Delivery, HeldRow.delivery_id == Delivery.id)
        .where(HeldRow.id == held_id)
    ).first()
    if found is None:
        raise NotFound("held row", held_id)
    return found[0], found[1]


def held_counts(session: Session) -> dict[str, int]:
    """How many rows are held, by sheet."""
    query = (
        select(HeldRow.sheet, func.count(HeldRow.id))
        .where(HeldRow.state == "held")
        .group_by(HeldRow.sheet)
        .order_by(HeldRow.sheet)
    )
    return {sheet: int(count) for sheet, count in session.execute(query)}


def decide_held(
    session: Session, held_id: int, state: str, who: str, why: str, now_ms: int
) -> None:
    """Write what became of a held row."""
    session.execute(
        update(HeldRow)
        .where(HeldRow.id == held_id)
        .values(state=state, decided_ms=now_ms, decided_by=who, decided_why=why)
    )


def drop_held_of(session: Session, delivery_id: int, who: str, why: str, now_ms: int) -> None:
    """Drop every row that a delivery holds."""
    session.execute(
        update(HeldRow)
        .where(HeldRow.delivery_id == delivery_id, HeldRow.state == "held")
        .values(state="dropped", decided_ms=now_ms, decided_by=who, decided_why=why)
    )
