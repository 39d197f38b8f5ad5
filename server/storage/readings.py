"""Raw readings, one narrow row each, clustered by cell and time; the only way to them.

A row is never changed or deleted. Revision 0 is what was entered; a correction, a confirmation of
a doubted reading or its withdrawal is a row with the next revision, whose delivery says who, when
and why. The effective series is the highest revision of each moment.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Mapped, Session, mapped_column

from server.storage.base import CLUSTERED, Base, Small, Whole
from server.storage.direct import fetch_each, fetch_rows, insert_rows, marks

_UNKNOWN_UV = -(2**62)
_DOUBTS = 256
"""Suspect codes are below this: voltage and doubt travel as one number."""

_WITHDRAWN_UV = -(2**50)
_TOLD = f"COALESCE(microvolts, {_WITHDRAWN_UV}) * {_DOUBTS} + suspect"
_SELECTED = (("at_ms", "i8"), ("told", "i8"))


class Reading(Base):
    """One voltage of one cell at one moment.

    No foreign keys: they would cost a fifth of the time in which millions of rows are written.
    The intake looks cells and deliveries up, and `ampledger check` looks for orphans.
    """

    __tablename__ = "reading"
    __table_args__ = (CLUSTERED,)

    cell_id: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    at_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    revision: Mapped[int] = mapped_column(Small, primary_key=True, autoincrement=False)
    microvolts: Mapped[int | None] = mapped_column(Whole)
    """None where the reading is withdrawn."""
    suspect: Mapped[int] = mapped_column(Small)
    """0 where it is believed, else the code of the doubt."""
    delivery_id: Mapped[int] = mapped_column(Whole)


@dataclass(frozen=True)
class Series:
    """Readings as arrays of one length, by cell and time."""

    cell_id: NDArray[np.int64]
    at_ms: NDArray[np.int64]
    microvolts: NDArray[np.int64]
    suspect: NDArray[np.int64]

    def __len__(self) -> int:
        return len(self.at_ms)

    @property
    def volts(self) -> NDArray[np.float64]:
        """The voltages, V."""
        return self.microvolts / 1e6

    def where(self, keep: NDArray[np.bool_]) -> "Series":
        """The readings for which `keep` is true."""
        return Series(
            self.cell_id[keep], self.at_ms[keep], self.microvolts[keep], self.suspect[keep]
        )

    def within(self, from_ms: int, to_ms: int) -> "Series":
        """The readings with from_ms <= at < to_ms."""
        return self.where((self.at_ms >= from_ms) & (self.at_ms < to_ms))

    def believed(self) -> "Series":
        """The readings that count in the figures."""
        return self.where(self.suspect == 0)


def _effective(
    cell_id: NDArray[np.int64], at_ms: NDArray[np.int64], told: NDArray[np.int64]
) -> Series:
    """Of each cell and moment the highest revision, unless it withdraws the reading."""
    microvolts = told >> 8
    keep = microvolts != _WITHDRAWN_UV
    keep[:-1] &= (cell_id[1:] != cell_id[:-1]) | (at_ms[1:] != at_ms[:-1])
    series = Series(cell_id, at_ms, microvolts, told & (_DOUBTS - 1))
    return series if keep.all() else series.where(keep)


def between(
    session: Session,
    cell_ids: Sequence[int],
    from_ms: int,
    to_ms: int,
    known_ms: int | None = None,
) -> Series:
    """The effective readings of cells with from_ms <= at < to_ms, by cell and time.

    `known_ms` asks for what was known at an earlier moment: later deliveries are left out.
    """
    known: str = ""
    moment: tuple[int, ...] = ()
    if known_ms is not None:
        known = " AND delivery_id IN (SELECT id FROM delivery WHERE received_ms <= ?)"
        moment = (known_ms,)
    ids = sorted(set(cell_ids))
    found = fetch_each(
        session,
        f"SELECT at_ms, {_TOLD} FROM reading WHERE cell_id = ? AND at_ms >= ? AND at_ms < ?{known}"
        " ORDER BY at_ms, revision",
        [(cell_id, from_ms, to_ms, *moment) for cell_id in ids],
        _SELECTED,
    )
    rows = np.concatenate(found) if found else np.empty(0, list(_SELECTED))
    return _effective(
        np.repeat(np.array(ids, np.int64), [len(own) for own in found]),
        np.ascontiguousarray(rows["at_ms"]),
        np.ascontiguousarray(rows["told"]),
    )


def cells_recorded(
    session: Session, cell_ids: Sequence[int], from_ms: int, to_ms: int
) -> NDArray[np.int64]:
    """Which of the cells have any row in [from_ms, to_ms), withdrawn ones too."""
    rows = fetch_rows(
        session,
        f"SELECT DISTINCT cell_id FROM reading WHERE cell_id IN ({marks(len(cell_ids))})"
        " AND at_ms >= ? AND at_ms < ? ORDER BY cell_id",
        (*cell_ids, from_ms, to_ms),
    )
    return np.array([row[0] for row in rows], np.int64)


def history(session: Session, cell_id: int, at_ms: int) -> list[tuple[int, int | None, int, int]]:
    """Every revision of one reading: (revision, microvolts, suspect, delivery_id), oldest first."""
    return [
        (int(row[0]), row[1], int(row[2]), int(row[3]))
        for row in fetch_rows(
            session,
            "SELECT revision, microvolts, suspect, delivery_id FROM reading"
            " WHERE cell_id = ? AND at_ms = ? ORDER BY revision",
            (cell_id, at_ms),
        )
    ]


def last_of_each(session: Session, cell_ids: Sequence[int]) -> dict[int, int]:
    """Moment of the newest reading of each cell, believed or not; one seek a cell."""
    if not cell_ids:
        return {}
    return {
        int(cell_id): int(newest)
        for cell_id, newest in fetch_rows(
            session,
            "SELECT c.id, (SELECT MAX(r.at_ms) FROM reading r WHERE r.cell_id = c.id)"
            f" FROM cell c WHERE c.id IN ({marks(len(cell_ids))})",
            tuple(cell_ids),
        )
        if newest is not None
    }


def newest_believed(session: Session, cell_id: int) -> tuple[int, int] | None:
    """(at_ms, microvolts) of the newest effective, believed reading of a cell."""
    before_ms = 2**62
    while True:
        rows = fetch_rows(
            session,
            "SELECT at_ms, revision, microvolts, suspect FROM reading"
            " WHERE cell_id = ? AND at_ms < ? ORDER BY at_ms DESC, revision DESC LIMIT 8",
            (cell_id, before_ms),
        )
        seen = before_ms
        for at_ms, _, microvolts, suspect in rows:
            if at_ms != seen and microvolts is not None and not suspect:
                return int(at_ms), int(microvolts)
            seen = at_ms
        if len(rows) < 8:
            return None
        # The block may end between two revisions of one moment: that moment has been judged.
        before_ms = seen


def span_ms(session: Session, cell_ids: Sequence[int]) -> tuple[int, int] | None:
    """First and last moment at which any of the cells was read."""
    if not cell_ids:
        return None
    firsts, lasts = [], []
    for cell_id in cell_ids:
        first, last = fetch_rows(
            session,
            "SELECT (SELECT MIN(at_ms) FROM reading WHERE cell_id = ?),"
            " (SELECT MAX(at_ms) FROM reading WHERE cell_id = ?)",
            (cell_id, cell_id),
        )[0]
        if first is not None:
            firsts.append(int(first))
            lasts.append(int(last))
    return (min(firsts), max(lasts)) if firsts else None


def stored_with(
    session: Session, cell_id: NDArray[np.int64], at_ms: NDArray[np.int64]
) -> NDArray[np.int64]:
    """For each (cell, moment) the row of `keys_between`, or -1: what is stored under that key.

    Answers an array (n, 3): highest revision, its microvolts (a great negative number where the
    reading is withdrawn) and its suspect code; revision -1 where nothing is stored.
    """
    answer = np.full((len(at_ms), 3), -1, np.int64)
    if not len(at_ms):
        return answer
    order = np.lexsort((at_ms, cell_id))
    cells, starts = np.unique(cell_id[order], return_index=True)
    ends = np.append(starts[1:], len(order))
    for cell, start, end in zip(cells.tolist(), starts, ends, strict=True):
        places = order[start:end]
        moments = at_ms[places]
        rows = fetch_rows(
            session,
            "SELECT at_ms, revision, COALESCE(microvolts, "
            f"{_UNKNOWN_UV}), suspect FROM reading"
            " WHERE cell_id = ? AND at_ms BETWEEN ? AND ? ORDER BY at_ms, revision",
            (cell, int(moments[0]), int(moments[-1])),
        )
        if rows:
            held = {row[0]: row[1:] for row in rows}
            for place, moment in zip(places, moments.tolist(), strict=True):
                if moment in held:
                    answer[place] = held[moment]
    return answer


def store(
    session: Session,
    cell_id: NDArray[np.int64],
    at_ms: NDArray[np.int64],
    revision: NDArray[np.int64],
    microvolts: NDArray[np.int64],
    suspect: NDArray[np.int64],
    delivery_id: int,
) -> None:
    """Write readings whose keys are new, in the order in which they will lie."""
    order = np.lexsort((revision, at_ms, cell_id))
    insert_rows(
        session,
        "INSERT INTO reading (cell_id, at_ms, revision, microvolts, suspect, delivery_id)"
        f" VALUES (?, ?, ?, ?, ?, {int(delivery_id)})",
        zip(
            cell_id[order].tolist(),
            at_ms[order].tolist(),
            revision[order].tolist(),
            microvolts[order].tolist(),
            suspect[order].tolist(),
            strict=True,
        ),
    )


def withdraw(session: Session, cell_id: int, at_ms: int, revision: int, delivery_id: int) -> None:
    """Write that a reading is withdrawn."""
    insert_rows(
        session,
        "INSERT INTO reading (cell_id, at_ms, revision, microvolts, suspect, delivery_id)"
        " VALUES (?, ?, ?, NULL, 0, ?)",
        [(cell_id, at_ms, revision, delivery_id)],
    )
