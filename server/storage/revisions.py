"""Lots, outages, assays and finds with every revision, looked up by their keys."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from sqlalchemy import insert, select, tuple_
from sqlalchemy.orm import Session

from server.storage.records import ElectrolyteSample, Find, Lot, Outage

Record = type[Lot] | type[Outage] | type[ElectrolyteSample] | type[Find]
Key = tuple[Any, ...]

KEYS: dict[Record, tuple[str, ...]] = {
    Lot: ("section_id", "name"),
    Outage: ("section_id", "cells", "from_ms"),
    ElectrolyteSample: ("section_id", "stream", "at_ms"),
    Find: ("cell_id", "at_ms", "cathode"),
}
"""What tells one record of a kind from another."""

_NOT_VALUES = {"id", "revision", "is_void", "delivery_id"}
_AT_ONCE = 100


@dataclass(frozen=True, slots=True)
class Revision:
    """One revision of a record."""

    revision: int
    is_void: bool
    values: Mapping[str, Any]
    """Everything but the key, by column."""
    delivery_id: int


def value_columns(record: Record) -> tuple[str, ...]:
    """Names of the columns that hold what a record says of its key."""
    return tuple(
        column.name
        for column in record.__table__.columns
        if column.name not in _NOT_VALUES and column.name not in KEYS[record]
    )


def revisions(session: Session, record: Record, keys: Iterable[Key]) -> dict[Key, list[Revision]]:
    """Every revision of the records with these keys, oldest first."""
    wanted = list(dict.fromkeys(keys))
    key_columns = [record.__table__.c[name] for name in KEYS[record]]
    values = value_columns(record)
    found: dict[Key, list[Revision]] = {}
    for start in range(0, len(wanted), _AT_ONCE):
        query = (
            select(record.__table__)
            .where(tuple_(*key_columns).in_(wanted[start : start + _AT_ONCE]))
            .order_by(record.__table__.c.revision)
        )
        for row in session.execute(query).mappings():
            key = tuple(row[name] for name in KEYS[record])
            found.setdefault(key, []).append(
                Revision(
                    row["revision"],
                    bool(row["is_void"]),
                    {name: row[name] for name in values},
                    row["delivery_id"],
                )
            )
    return found


def brought_by(session: Session, record: Record, delivery_id: int) -> list[Key]:
    """Keys of the records that a delivery brought or changed."""
    columns = [record.__table__.c[name] for name in KEYS[record]]
    query = select(*columns).where(record.__table__.c.delivery_id == delivery_id).distinct()
    return [tuple(row) for row in session.execute(query)]


def add_revisions(session: Session, record: Record, rows: Sequence[tuple[Key, Revision]]) -> None:
    """Write revisions whose keys and numbers are new."""
    if not rows:
        return
    session.execute(
        insert(record),
        [
            {
                **dict(zip(KEYS[record], key, strict=True)),
                **revision.values,
                "revision": revision.revision,
                "is_void": int(revision.is_void),
                "delivery_id": revision.delivery_id,
            }
            for key, revision in rows
        ],
    )
