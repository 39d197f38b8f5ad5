"""Charge through shorts by day and hour, written and read in bulk."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from sqlalchemy import ForeignKey
from sqlalchemy.orm import Mapped, Session, mapped_column

from server.storage.base import STRICT, Base, Bytes, Real, Whole
from server.storage.direct import execute, fetch_columns, fetch_rows, insert_rows


class ShortDay(Base):
    """What the watch expects to have passed through a section's shorts over a UTC day.

    Derived from what it made of the rounds and from the charge.
    """

    __tablename__ = "short_day"
    __table_args__ = (STRICT,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    day_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    short_c: Mapped[float] = mapped_column(Real)
    """Summed over the cells, flagged or not."""
    watched_c: Mapped[float] = mapped_column(Real)
    """The cells' charge for which a round speaks."""
    variance_c2: Mapped[float] = mapped_column(Real)
    """Variance of the charge through shorts, as far as each cell's is a matter of its own."""
    hours: Mapped[bytes] = mapped_column(Bytes)
    """float64, 24 x (short_c, watched_c)."""


_DAY = (("day_ms", "i8"), ("short_c", "f8"), ("watched_c", "f8"), ("variance_c2", "f8"))


def keep_short_days(
    session: Session,
    section_id: int,
    day_from: int,
    day_to: int,
    rows: Sequence[tuple[int, float, float, float, bytes]],
) -> None:
    """Write the days in place of the former ones."""
    execute(
        session,
        "DELETE FROM short_day WHERE section_id = ? AND day_ms >= ? AND day_ms < ?",
        (section_id, day_from, day_to),
    )
    insert_rows(
        session,
        "INSERT INTO short_day (section_id, day_ms, short_c, watched_c, variance_c2, hours)"
        f" VALUES ({int(section_id)}, ?, ?, ?, ?, ?)",
        rows,
    )


def short_days(session: Session, section_id: int, day_from: int, day_to: int) -> NDArray[np.void]:
    """Whole days' short_c, watched_c and variance_c2, by day."""
    return fetch_columns(
        session,
        f"SELECT {', '.join(name for name, _ in _DAY)} FROM short_day"
        " WHERE section_id = ? AND day_ms >= ? AND day_ms < ? ORDER BY day_ms",
        (section_id, day_from, day_to),
        _DAY,
    )


def short_hours(
    session: Session, section_id: int, day_ms: int
) -> tuple[float, NDArray[np.float64]] | None:
    """Variance and 24 x 2 array of one day's charge through shorts and watched, by hour."""
    rows = fetch_rows(
        session,
        "SELECT variance_c2, hours FROM short_day WHERE section_id = ? AND day_ms = ?",
        (section_id, day_ms),
    )
    if not rows:
        return None
    return float(rows[0][0]), np.frombuffer(rows[0][1], np.float64).reshape(24, 2)
