"""Deliveries being written: their counts, the rows they hold, their doubts, the senders' ids."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from sqlalchemy import update
from sqlalchemy.orm import Session

from server.storage.deliveries import Delivery
from server.storage.direct import fetch_rows, insert_rows, marks
from server.storage.errors import NotFound

_AT_ONCE = 500
"""Values asked for with one statement."""


@dataclass(frozen=True, slots=True)
class Held:
    """A row to be held, as the intake found it."""

    line: int
    column: str
    found: str
    expected: str
    reason: str
    fields: str
    raw: str


@dataclass(frozen=True, slots=True)
class Doubt:
    """A stored reading that is not believed, and why."""

    line: int
    section_id: int
    cell_id: int
    at_ms: int
    revision: int
    code: str
    reason: str
    found: str
    expected: str
    suggested: str | None


def add_delivery(session: Session, delivery: Delivery) -> int:
    """Write a new delivery; answers its id."""
    session.add(delivery)
    session.flush()
    delivery_id = delivery.id
    session.expunge(delivery)
    return delivery_id


def delivery_with_id(session: Session, delivery_id: int) -> Delivery:
    """The delivery of this number."""
    delivery = session.get(Delivery, delivery_id)
    if delivery is None:
        raise NotFound("delivery", delivery_id)
    return delivery


def keep_counts(session: Session, delivery_id: int, counts: Mapping[str, int]) -> None:
    """Write how many rows a delivery has brought so far, and what became of them."""
    session.execute(update(Delivery).where(Delivery.id == delivery_id).values(**counts))


def hold_rows(session: Session, delivery_id: int, sheet: str, rows: Iterable[Held]) -> None:
    """Keep rows word for word until somebody mends or drops them."""
    insert_rows(
        session,
        "INSERT INTO held_row (delivery_id, sheet, line, column_name, found, expected, reason,"
        " fields, raw, state) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, 'held')",
        [
            (
                delivery_id,
                sheet,
                row.line,
                row.column,
                row.found,
                row.expected,
                row.reason,
                row.fields,
                row.raw,
            )
            for row in rows
        ],
    )


def held_before(
    session: Session, sheet: str, raws: Sequence[str]
) -> dict[tuple[str, str], tuple[int, str, str | None, str | None]]:
    """Rows with the same words that were held before, by (raw, fields).

    Of each the (id, state, decided_by, decided_why); where one was held more than once, the
    last.
    """
    found = {}
    wanted = list(dict.fromkeys(raws))
    for start in range(0, len(wanted), _AT_ONCE):
        some = wanted[start : start + _AT_ONCE]
        for raw, fields, held_id, state, by, why in fetch_rows(
            session,
            "SELECT raw, fields, id, state, decided_by, decided_why FROM held_row"
            f" WHERE sheet = ? AND raw IN ({marks(len(some))}) ORDER BY id",
            (sheet, *some),
        ):
            found[(str(raw), str(fields))] = (int(held_id), str(state), by, why)
    return found


def keep_doubts(session: Session, delivery_id: int, doubts: Iterable[Doubt]) -> None:
    """Write why readings are not believed."""
    insert_rows(
        session,
        "INSERT INTO suspicion (delivery_id, line, section_id, cell_id, at_ms, revision, code,"
        " reason, found, expected, suggested, state)"
        " VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, 'open')",
        [
            (
                delivery_id,
                doubt.line,
                doubt.section_id,
                doubt.cell_id,
                doubt.at_ms,
                doubt.revision,
                doubt.code,
                doubt.reason,
                doubt.found,
                doubt.expected,
                doubt.suggested,
            )
            for doubt in doubts
        ],
    )


def ids_sent_before(session: Session, ids: Sequence[str]) -> set[str]:
    """Those of the senders' ids that have been taken in already."""
    known: set[str] = set()
    for start in range(0, len(ids), _AT_ONCE):
        some = ids[start : start + _AT_ONCE]
        known.update(
            str(row[0])
            for row in fetch_rows(
                session, f"SELECT id FROM sent_id WHERE id IN ({marks(len(some))})", tuple(some)
            )
        )
    return known


def keep_sent_ids(session: Session, delivery_id: int, ids: Iterable[str]) -> None:
    """Note the senders' ids of what was taken in."""
    insert_rows(
        session,
        "INSERT INTO sent_id (id, delivery_id) VALUES (?, ?)",
        [(sent_id, delivery_id) for sent_id in ids],
    )


def deliveries_with_ids(
    session: Session, ids: Iterable[int]
) -> dict[int, tuple[str, str, int, str]]:
    """(source, sender, received_ms, reason) of deliveries, by id."""
    wanted = list(dict.fromkeys(ids))
    found = {}
    for start in range(0, len(wanted), _AT_ONCE):
        some = wanted[start : start + _AT_ONCE]
        for row in fetch_rows(
            session,
            "SELECT id, source, sender, received_ms, reason FROM delivery"
            f" WHERE id IN ({marks(len(some))})",
            tuple(some),
        ):
            found[int(row[0])] = (str(row[1]), str(row[2]), int(row[3]), str(row[4]))
    return found
