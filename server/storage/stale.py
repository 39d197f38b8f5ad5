"""Which stretches of a section's time have figures that are yet to be brought up to date."""

from dataclasses import dataclass
from typing import Literal, get_args

from sqlalchemy.orm import Session

from server.storage.direct import execute, fetch_rows, insert_rows

Kind = Literal["charge", "energy", "flags", "lots", "readings"]
"""What changed: the current or what lets it pass, the weights, or the voltages.

Energy and flags follow from current and voltages together, and are marked by their upkeep.
"""

KINDS: tuple[Kind, ...] = get_args(Kind)


@dataclass(frozen=True, slots=True)
class StaleStretch:
    """A stretch of a section's time, [from_ms, to_ms), in which records of one kind changed."""

    id: int
    section_id: int
    kind: Kind
    from_ms: int
    to_ms: int


def mark(
    session: Session, section_id: int, kind: Kind, from_ms: int, to_ms: int, join_ms: int = 0
) -> None:
    """Note that records changed in [from_ms, to_ms).

    Stretches that touch, or are no more than `join_ms` apart, become one.
    """
    if to_ms <= from_ms:
        raise ValueError(f"a stretch must have a length: from {from_ms} to {to_ms}")
    touching = fetch_rows(
        session,
        "SELECT id, from_ms, to_ms FROM stale"
        " WHERE section_id = ? AND kind = ? AND from_ms <= ? AND to_ms >= ?",
        (section_id, kind, to_ms + join_ms, from_ms - join_ms),
    )
    if len(touching) == 1 and touching[0][1] <= from_ms and touching[0][2] >= to_ms:
        return
    for stale_id, _, _ in touching:
        execute(session, "DELETE FROM stale WHERE id = ?", (stale_id,))
    _insert(
        session,
        section_id,
        kind,
        min([from_ms, *(int(row[1]) for row in touching)]),
        max([to_ms, *(int(row[2]) for row in touching)]),
    )


def pending(session: Session) -> list[StaleStretch]:
    """Every stretch that is yet to be brought up to date, by section, kind and time."""
    return [
        StaleStretch(int(row[0]), int(row[1]), row[2], int(row[3]), int(row[4]))
        for row in fetch_rows(
            session,
            "SELECT id, section_id, kind, from_ms, to_ms FROM stale"
            " ORDER BY section_id, kind, from_ms",
        )
    ]


def settle(session: Session, section_id: int, kind: Kind, from_ms: int, to_ms: int) -> None:
    """Note that [from_ms, to_ms) is up to date; what lies outside of it stays pending."""
    for stale_id, start_ms, end_ms in fetch_rows(
        session,
        "SELECT id, from_ms, to_ms FROM stale"
        " WHERE section_id = ? AND kind = ? AND from_ms < ? AND to_ms > ?",
        (section_id, kind, to_ms, from_ms),
    ):
        execute(session, "DELETE FROM stale WHERE id = ?", (stale_id,))
        if start_ms < from_ms:
            _insert(session, section_id, kind, int(start_ms), from_ms)
        if end_ms > to_ms:
            _insert(session, section_id, kind, to_ms, int(end_ms))


def _insert(session: Session, section_id: int, kind: Kind, from_ms: int, to_ms: int) -> None:
    insert_rows(
        session,
        "INSERT INTO stale (section_id, kind, from_ms, to_ms) VALUES (?, ?, ?, ?)",
        [(section_id, kind, from_ms, to_ms)],
    )
