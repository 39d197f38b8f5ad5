"""The newest reading of each cell that counts."""

from collections.abc import Sequence

from sqlalchemy.orm import Session

from server.storage.direct import execute, fetch_rows, insert_rows, marks
from server.storage.readings import newest_believed


def keep_latest(session: Session, cell_ids: Sequence[int]) -> None:
    """Look up anew the newest believed reading of these cells."""
    rows = []
    for cell_id in cell_ids:
        newest = newest_believed(session, cell_id)
        if newest is not None:
            rows.append((cell_id, *newest))
    execute(
        session,
        f"DELETE FROM latest_reading WHERE cell_id IN ({marks(len(cell_ids))})",
        tuple(cell_ids),
    )
    insert_rows(
        session, "INSERT INTO latest_reading (cell_id, at_ms, microvolts) VALUES (?, ?, ?)", rows
    )


def latest(session: Session, cell_ids: Sequence[int]) -> dict[int, tuple[int, float]]:
    """(at_ms, volts) of the newest believed reading of each of these cells that has one."""
    if not cell_ids:
        return {}
    return {
        int(row[0]): (int(row[1]), int(row[2]) / 1e6)
        for row in fetch_rows(
            session,
            "SELECT cell_id, at_ms, microvolts FROM latest_reading WHERE cell_id IN"
            f" ({marks(len(cell_ids))})",
            tuple(cell_ids),
        )
    }
