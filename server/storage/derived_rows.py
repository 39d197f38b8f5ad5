"""Derived rows as they lie, for whoever examines the books."""

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
