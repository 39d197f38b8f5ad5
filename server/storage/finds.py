"""What people found at the cells, as it counts now."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows


@dataclass(frozen=True, slots=True)
class FoundThere:
    """One find: where, when, what, and what was done about it."""

    cell_id: int
    at_ms: int
    cathode: int
    """0 where no cathode is named."""
    found: str
    action: str

    @property
    def key(self) -> tuple[int, int, int]:
        """What tells it from any other find."""
        return self.cell_id, self.at_ms, self.cathode


def finds_between(session: Session, from_ms: int, to_ms: int) -> dict[int, list[FoundThere]]:
    """Finds with from_ms <= at < to_ms of every cell, by time; withdrawn ones are left out."""
    found: dict[int, list[FoundThere]] = {}
    for row in fetch_rows(
        session,
        "SELECT cell_id, at_ms, cathode, found, action FROM find f WHERE at_ms >= ?"
        " AND at_ms < ? AND is_void = 0 AND NOT EXISTS (SELECT 1 FROM find n WHERE"
        " n.cell_id = f.cell_id AND n.at_ms = f.at_ms AND n.cathode = f.cathode"
        " AND n.revision > f.revision) ORDER BY at_ms, cathode",
        (from_ms, to_ms),
    ):
        find = FoundThere(int(row[0]), int(row[1]), int(row[2]), str(row[3]), str(row[4]))
        found.setdefault(find.cell_id, []).append(find)
    return found


def find_id(session: Session, cell_id: int, at_ms: int, cathode: int) -> int | None:
    """Id of a find's newest row; None where there is no such find."""
    rows = fetch_rows(
        session,
        "SELECT id FROM find WHERE cell_id = ? AND at_ms = ? AND cathode = ?"
        " ORDER BY revision DESC LIMIT 1",
        (cell_id, at_ms, cathode),
    )
    return int(rows[0][0]) if rows else None


def pulls_between(session: Session, from_ms: int, to_ms: int) -> dict[int, list[int]]:
    """Moments at which cathodes of each cell were pulled in [from_ms, to_ms), by time."""
    found: dict[int, list[int]] = {}
    for cell_id, pulled_ms in fetch_rows(
        session,
        "SELECT cell_id, pulled_ms FROM crop WHERE section_id IN (SELECT id FROM section)"
        " AND pulled_ms >= ? AND pulled_ms < ? ORDER BY pulled_ms",
        (from_ms, to_ms),
    ):
        found.setdefault(int(cell_id), []).append(int(pulled_ms))
    return found
