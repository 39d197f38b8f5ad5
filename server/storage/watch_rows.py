"""What the watch made of each round of a section, and what it remembers between them."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from sqlalchemy import ForeignKey
from sqlalchemy.orm import Mapped, Session, mapped_column

from server.storage.base import STRICT, Base, Bytes, Real, Whole
from server.storage.direct import execute, fetch_rows, insert_rows

OF_A_CELL = np.dtype(
    [
        ("at_ms", "<i8"),
        ("expected_v", "<f4"),
        ("short_amps", "<f4"),
        ("u_short_amps", "<f4"),
        ("deviation_v", "<f2"),
        ("band_v", "<f2"),
        ("probability", "<f2"),
    ]
)
"""One cell in a round: when it was read (0: it was not), what a healthy one would have read, the
expected short current (none included), the standard uncertainty of the short current if there is
one, how far the reading lay above what was expected, the standard uncertainty of that, and the
probability of a short."""


class WatchedRound(Base):
    """One round of a section as the watch saw it; derived from the readings."""

    __tablename__ = "watched_round"
    __table_args__ = (STRICT,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    started_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    ended_ms: Mapped[int] = mapped_column(Whole)
    amps: Mapped[float] = mapped_column(Real)
    """The section's current, the median over the readings."""
    cells: Mapped[bytes] = mapped_column(Bytes)
    """`OF_A_CELL`, by cell number."""


class WatchState(Base):
    """What the watch remembered before the first round that began on or after a day's start."""

    __tablename__ = "watch_state"
    __table_args__ = (STRICT,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    day_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    last_ms: Mapped[int] = mapped_column(Whole)
    """When the last round before ended."""
    state: Mapped[bytes] = mapped_column(Bytes)


def rounds_between(
    session: Session, section_id: int, from_ms: int, to_ms: int
) -> list[tuple[int, int, float, NDArray[np.void]]]:
    """Rounds that began in [from_ms, to_ms): began, ended, current, cells by number."""
    rows = fetch_rows(
        session,
        "SELECT started_ms, ended_ms, amps, cells FROM watched_round"
        " WHERE section_id = ? AND started_ms >= ? AND started_ms < ? ORDER BY started_ms",
        (section_id, from_ms, to_ms),
    )
    return [
        (int(started), int(ended), float(amps), np.frombuffer(cells, OF_A_CELL))
        for started, ended, amps, cells in rows
    ]


def has_rounds(session: Session, section_id: int, from_ms: int, to_ms: int) -> bool:
    """Whether any round began in [from_ms, to_ms)."""
    rows = fetch_rows(
        session,
        "SELECT 1 FROM watched_round WHERE section_id = ? AND started_ms >= ?"
        " AND started_ms < ? LIMIT 1",
        (section_id, from_ms, to_ms),
    )
    return bool(rows)


def rounds_of_cell(
    session: Session, section_id: int, place: int, from_ms: int, to_ms: int
) -> NDArray[np.void]:
    """What the rounds that began in [from_ms, to_ms) said of one cell, `place` from 0; by time."""
    size = OF_A_CELL.itemsize
    rows = fetch_rows(
        session,
        f"SELECT substr(cells, {int(place) * size + 1}, {size}) FROM watched_round"
        " WHERE section_id = ? AND started_ms >= ? AND started_ms < ? ORDER BY started_ms",
        (section_id, from_ms, to_ms),
    )
    said = np.frombuffer(b"".join(row[0] for row in rows), OF_A_CELL)
    return said[said["at_ms"] > 0]


def last_round(
    session: Session, section_id: int, until_ms: int
) -> tuple[int, int, float, NDArray[np.void]] | None:
    """The last round that ended by a moment."""
    rows = fetch_rows(
        session,
        "SELECT started_ms, ended_ms, amps, cells FROM watched_round"
        " WHERE section_id = ? AND started_ms <= ? ORDER BY started_ms DESC LIMIT 2",
        (section_id, until_ms),
    )
    for started, ended, amps, cells in rows:
        if ended <= until_ms:
            return int(started), int(ended), float(amps), np.frombuffer(cells, OF_A_CELL)
    return None


def replace_rounds(
    session: Session,
    section_id: int,
    from_ms: int,
    to_ms: int,
    rows: Sequence[tuple[int, int, float, bytes]],
) -> None:
    """Write the rounds that began in [from_ms, to_ms) anew."""
    execute(
        session,
        "DELETE FROM watched_round WHERE section_id = ? AND started_ms >= ? AND started_ms < ?",
        (section_id, from_ms, to_ms),
    )
    insert_rows(
        session,
        "INSERT INTO watched_round (section_id, started_ms, ended_ms, amps, cells)"
        " VALUES (?, ?, ?, ?, ?)",
        [(section_id, *row) for row in rows],
    )


def state_before(
    session: Session, section_id: int, before_ms: int
) -> tuple[int, int, bytes] | None:
    """What was last remembered of rounds that all ended before a moment: day, last end, state."""
    rows = fetch_rows(
        session,
        "SELECT day_ms, last_ms, state FROM watch_state WHERE section_id = ? AND day_ms <= ?"
        " AND last_ms < ? ORDER BY day_ms DESC LIMIT 1",
        (section_id, before_ms, before_ms),
    )
    return (int(rows[0][0]), int(rows[0][1]), bytes(rows[0][2])) if rows else None


def forget_states(session: Session, section_id: int, after_ms: int) -> None:
    """Drop what was remembered at days that start after a moment."""
    execute(
        session,
        "DELETE FROM watch_state WHERE section_id = ? AND day_ms > ?",
        (section_id, after_ms),
    )


def keep_states(session: Session, section_id: int, rows: Sequence[tuple[int, int, bytes]]) -> None:
    """Write what is remembered: day, last end, state."""
    insert_rows(
        session,
        "INSERT INTO watch_state (section_id, day_ms, last_ms, state) VALUES (?, ?, ?, ?)",
        [(section_id, *row) for row in rows],
    )


def thin_states(session: Session, section_id: int, every_ms: int, recent_ms: int) -> None:
    """Of the days that start before a moment, leave those at whole multiples of a length."""
    execute(
        session,
        "DELETE FROM watch_state WHERE section_id = ? AND day_ms < ? AND day_ms % ? <> 0",
        (section_id, recent_ms, every_ms),
    )
