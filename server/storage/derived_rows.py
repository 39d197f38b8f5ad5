"""Rows as they lie, for whoever examines the books."""

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.direct import fetch_columns, fetch_rows


def charge_days(session: Session, section_id: int) -> NDArray[np.void]:
    """Every day of a section's charge, by day."""
    return fetch_columns(
        session,
        "SELECT day_ms, total_c, before_c, estimated_c, estimated_before_c FROM charge_day"
        " WHERE section_id = ? ORDER BY day_ms",
        (section_id,),
        (
            ("day_ms", "i8"),
            ("total_c", "f8"),
            ("before_c", "f8"),
            ("estimated_c", "f8"),
            ("estimated_before_c", "f8"),
        ),
    )


def charge_knots(session: Session, section_id: int) -> NDArray[np.void]:
    """Every step of a section's current, by time."""
    return fetch_columns(
        session,
        "SELECT at_ms, amps, since_day_c FROM charge_knot WHERE section_id = ? ORDER BY at_ms",
        (section_id,),
        (("at_ms", "i8"), ("amps", "f8"), ("since_day_c", "f8")),
    )


def last_summaries(
    session: Session, section_id: int, level: str, count: int
) -> list[tuple[int, int, int, int]]:
    """The last summaries of a level: (start_ms, end_ms, readings, sum_uv), newest first."""
    return [
        (int(row[0]), int(row[1]), int(row[2]), int(row[3]))
        for row in fetch_rows(
            session,
            "SELECT start_ms, end_ms, readings, sum_uv FROM summary"
            " WHERE section_id = ? AND level = ? ORDER BY start_ms DESC LIMIT ?",
            (section_id, level, count),
        )
    ]


def orphaned_readings(session: Session) -> dict[str, int]:
    """Readings whose cell or delivery is not in the books: how many ids, by what is missing."""
    deliveries = fetch_rows(
        session,
        "SELECT COUNT(*) FROM (SELECT DISTINCT delivery_id FROM reading) r"
        " WHERE NOT EXISTS (SELECT 1 FROM delivery d WHERE d.id = r.delivery_id)",
    )[0][0]
    # The readings of a cell lie together, so that each cell takes one step and not a scan.
    cells = fetch_rows(
        session,
        "WITH RECURSIVE step (cell_id) AS (SELECT MIN(cell_id) FROM reading UNION ALL"
        " SELECT (SELECT MIN(r.cell_id) FROM reading r WHERE r.cell_id > step.cell_id)"
        " FROM step WHERE step.cell_id IS NOT NULL)"
        " SELECT COUNT(*) FROM step WHERE cell_id IS NOT NULL"
        " AND NOT EXISTS (SELECT 1 FROM cell c WHERE c.id = step.cell_id)",
    )[0][0]
    return {"cell": int(cells), "delivery": int(deliveries)}
