"""Why stored readings are not believed, looked up by cell and moment."""

from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows


def reasons_between(
    session: Session, section_id: int, from_ms: int, to_ms: int
) -> dict[tuple[int, int], str]:
    """Reason by (cell, moment) for the readings of a section in [from_ms, to_ms)."""
    return {
        (int(cell_id), int(at_ms)): str(reason)
        for cell_id, at_ms, reason in fetch_rows(
            session,
            "SELECT cell_id, at_ms, reason FROM suspicion WHERE section_id = ? AND at_ms >= ?"
            " AND at_ms < ? ORDER BY id",
            (section_id, from_ms, to_ms),
        )
    }
