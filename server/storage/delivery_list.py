"""Deliveries looked back at: what came in, the newest first."""

from collections.abc import Sequence

from sqlalchemy import func, select
from sqlalchemy.orm import Session

from server.storage.deliveries import Delivery, HeldRow, Suspicion
from server.storage.errors import NotFound


def deliveries(session: Session, limit: int, before_id: int | None = None) -> list[Delivery]:
    """Deliveries, the newest first, from the one before `before_id` on."""
    query = select(Delivery).order_by(Delivery.id.desc()).limit(limit)
    if before_id is not None:
        query = query.where(Delivery.id < before_id)
    return list(session.scalars(query))


def deliveries_with(session: Session, ids: Sequence[int]) -> list[Delivery]:
    """The deliveries with these ids, in the order in which they came; others are left out."""
    return list(session.scalars(select(Delivery).where(Delivery.id.in_(ids)).order_by(Delivery.id)))


def delivery(session: Session, delivery_id: int) -> Delivery:
    """One delivery."""
    found = session.get(Delivery, delivery_id)
    if found is None:
        raise NotFound("delivery", delivery_id)
    return found


def still_held(session: Session, delivery_ids: Sequence[int]) -> dict[int, int]:
    """How many rows of each of these deliveries nobody has mended or dropped yet."""
    return _waiting(session, HeldRow, "held", delivery_ids)


def still_doubted(session: Session, delivery_ids: Sequence[int]) -> dict[int, int]:
    """How many readings of each of these deliveries nobody has decided on yet."""
    return _waiting(session, Suspicion, "open", delivery_ids)


def _waiting(
    session: Session,
    table: type[HeldRow] | type[Suspicion],
    state: str,
    delivery_ids: Sequence[int],
) -> dict[int, int]:
    query = (
        select(table.delivery_id, func.count(table.id))
        .where(table.state == state, table.delivery_id.in_(delivery_ids))
        .group_by(table.delivery_id)
    )
    return {int(delivery_id): int(count) for delivery_id, count in session.execute(query)}
