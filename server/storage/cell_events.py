"""Finds at a cell and corrections of its readings."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows


@dataclass(frozen=True)
class Correction:
    """One reading that was corrected, with who, when and why."""

    at_ms: int
    former_volts: float | None
    volts: float | None
    sender: str
    corrected_ms: int
    reason: str


def finds_of_cell(
    session: Session, cell_id: int, from_ms: int, to_ms: int
) -> list[tuple[int, int, str, str]]:
    """(at_ms, cathode, found, action) of what people found at a cell."""
    return [
        (int(r[0]), int(r[1]), str(r[2]), str(r[3]))
        for r in fetch_rows(
            session,
            "SELECT at_ms, cathode, found, action FROM find f WHERE cell_id = ? AND at_ms >= ?"
            " AND at_ms < ? AND is_void = 0 AND NOT EXISTS (SELECT 1 FROM find n WHERE"
            " n.cell_id = f.cell_id AND n.at_ms = f.at_ms AND n.cathode = f.cathode"
            " AND n.revision > f.revision) ORDER BY at_ms",
            (cell_id, from_ms, to_ms),
        )
    ]


def corrections_of_cell(
    session: Session, cell_id: int, from_ms: int, to_ms: int
) -> list[Correction]:
    """Every correction of a cell's readings in a time, by reading and revision."""
    return [
        Correction(
            int(r[0]),
            None if r[1] is None else int(r[1]) / 1e6,
            None if r[2] is None else int(r[2]) / 1e6,
            str(r[3]),
            int(r[4]),
            str(r[5]),
        )
        for r in fetch_rows(
            session,
            "SELECT r.at_ms, b.microvolts, r.microvolts, d.sender, d.received_ms, d.reason"
            " FROM reading r JOIN reading b ON b.cell_id = r.cell_id AND b.at_ms = r.at_ms"
            " AND b.revision = r.revision - 1 JOIN delivery d ON d.id = r.delivery_id"
            " WHERE r.cell_id = ? AND r.at_ms >= ? AND r.at_ms < ? AND r.revision > 0"
            " ORDER BY r.at_ms, r.revision",
            (cell_id, from_ms, to_ms),
        )
    ]
