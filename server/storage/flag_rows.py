"""Flags as rows: read, and written in place of those of a stretch of time."""

from collections.abc import Sequence

from sqlalchemy import or_, select
from sqlalchemy.orm import Session

from server.storage.direct import execute, insert_rows
from server.storage.flags import Flag

_COLUMNS = (
    "cell_id",
    "kind",
    "raised_ms",
    "section_id",
    "tier",
    "ended_ms",
    "raised_by_ms",
    "volts",
    "expected_volts",
    "deviation_v",
    "short_amps",
    "u_short_amps",
    "lost_kg_per_day",
    "lost_value_per_day",
    "evidence",
    "probability",
)


def flags_touching(
    session: Session,
    from_ms: int,
    to_ms: int,
    section_id: int | None = None,
    open_only: bool = False,
    tier: str | None = None,
) -> list[Flag]:
    """Flags whose life touches [from_ms, to_ms), by section, moment and cell."""
    query = select(Flag).where(Flag.raised_ms < to_ms)
    query = query.where(or_(Flag.ended_ms.is_(None), Flag.ended_ms >= from_ms))
    if section_id is not None:
        query = query.where(Flag.section_id == section_id)
    if open_only:
        query = query.where(Flag.ended_ms.is_(None))
    if tier is not None:
        query = query.where(Flag.tier == tier)
    return list(
        session.scalars(query.order_by(Flag.section_id, Flag.raised_ms, Flag.cell_id, Flag.kind))
    )


def replace_flags(
    session: Session, section_id: int, from_ms: int, to_ms: int, flags: Sequence[Flag]
) -> None:
    """Write the flags of a section that were raised in [from_ms, to_ms) anew."""
    execute(
        session,
        "DELETE FROM flag WHERE section_id = ? AND raised_ms >= ? AND raised_ms < ?",
        (section_id, from_ms, to_ms),
    )
    insert_rows(
        session,
        f"INSERT INTO flag ({', '.join(_COLUMNS)}) VALUES ({', '.join('?' * len(_COLUMNS))})",
        [tuple(getattr(flag, name) for name in _COLUMNS) for flag in flags],
    )


def retier_flag(session: Session, cell_id: int, kind: str, raised_ms: int, tier: str) -> None:
    """Write whether a flag says to look or to act."""
    execute(
        session,
        "UPDATE flag SET tier = ? WHERE cell_id = ? AND kind = ? AND raised_ms = ?",
        (tier, cell_id, kind, raised_ms),
    )


def end_flag(
    session: Session, cell_id: int, kind: str, raised_ms: int, ended_ms: int | None
) -> None:
    """Write when a flag ended; None while it is open."""
    execute(
        session,
        "UPDATE flag SET ended_ms = ? WHERE cell_id = ? AND kind = ? AND raised_ms = ?",
        (ended_ms, cell_id, kind, raised_ms),
    )
