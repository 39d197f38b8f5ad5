"""What people did about flags: rows that are only ever added.

A flag is worked out of the readings and rebuilt from them, so an act does not point to its row: it
names the cell, the kind and the moment at which the flag was raised, and so outlives a rebuild.
"""

from dataclasses import dataclass

from sqlalchemy import ForeignKey, Index
from sqlalchemy.orm import Mapped, Session, mapped_column

from server.storage.base import STRICT, Base, Whole, Words
from server.storage.direct import fetch_rows

ACTS = ("seen", "working", "shelved", "unshelved", "closed")
"""Every act that there is."""

FlagKey = tuple[int, str, int]
"""A flag by its cell, its kind and the moment at which it was raised."""


class FlagAct(Base):
    """One act of one person on one flag."""

    __tablename__ = "flag_act"
    __table_args__ = (Index("ix_flag_act_raised_ms", "raised_ms", "cell_id"), STRICT)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    cell_id: Mapped[int] = mapped_column(Whole, ForeignKey("cell.id"))
    kind: Mapped[str] = mapped_column(Words)
    raised_ms: Mapped[int] = mapped_column(Whole)
    at_ms: Mapped[int] = mapped_column(Whole)
    who: Mapped[str] = mapped_column(Words)
    act: Mapped[str] = mapped_column(Words)
    """seen, working, shelved, unshelved or closed."""
    until_ms: Mapped[int | None] = mapped_column(Whole)
    """Until when it is shelved."""
    reason: Mapped[str] = mapped_column(Words)
    assigned_to: Mapped[str | None] = mapped_column(Words)
    """Who works on it."""
    find_id: Mapped[int | None] = mapped_column(Whole, ForeignKey("find.id"))
    """The find that closed it, as it was first recorded."""


@dataclass(frozen=True, slots=True)
class ActDone:
    """An act as it is read: the key of its flag, and the key of the find it points to."""

    flag: FlagKey
    at_ms: int
    who: str
    act: str
    until_ms: int | None = None
    reason: str = ""
    assigned_to: str | None = None
    find: tuple[int, int, int] | None = None
    """(cell, moment, cathode)."""


def add_act(session: Session, act: FlagAct) -> None:
    """Write an act down."""
    session.add(act)
    session.flush()


def acts_on_flags(session: Session, from_ms: int, to_ms: int) -> dict[FlagKey, list[ActDone]]:
    """Acts on flags that were raised in [from_ms, to_ms), in the order in which they were done."""
    found: dict[FlagKey, list[ActDone]] = {}
    for row in fetch_rows(
        session,
        "SELECT a.cell_id, a.kind, a.raised_ms, a.at_ms, a.who, a.act, a.until_ms, a.reason,"
        " a.assigned_to, f.cell_id, f.at_ms, f.cathode"
        " FROM flag_act a LEFT JOIN find f ON f.id = a.find_id"
        " WHERE a.raised_ms >= ? AND a.raised_ms < ? ORDER BY a.at_ms, a.id",
        (from_ms, to_ms),
    ):
        key = (int(row[0]), str(row[1]), int(row[2]))
        found.setdefault(key, []).append(
            ActDone(
                key,
                int(row[3]),
                str(row[4]),
                str(row[5]),
                None if row[6] is None else int(row[6]),
                str(row[7]),
                None if row[8] is None else str(row[8]),
                None if row[9] is None else (int(row[9]), int(row[10]), int(row[11])),
            )
        )
    return found


def acts_without_flag(session: Session) -> list[tuple[FlagKey, int]]:
    """Flags that people acted on and that a rebuild no longer raises, with how many acts."""
    return [
        ((int(row[0]), str(row[1]), int(row[2])), int(row[3]))
        for row in fetch_rows(
            session,
            "SELECT a.cell_id, a.kind, a.raised_ms, COUNT(*) FROM flag_act a"
            " WHERE NOT EXISTS (SELECT 1 FROM flag f WHERE f.cell_id = a.cell_id"
            " AND f.kind = a.kind AND f.raised_ms = a.raised_ms)"
            " GROUP BY a.cell_id, a.kind, a.raised_ms ORDER BY a.raised_ms, a.cell_id, a.kind",
        )
    ]
