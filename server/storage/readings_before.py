"""The last believed readings of cells before a moment: what a new reading is held against."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.direct import fetch_columns

_AT_ONCE = 250
"""Cells asked for with one statement."""

_TO_SPARE = 3
"""Rows asked for beyond the wanted ones, for doubted readings and former revisions among them."""

_NOT_BELIEVED_UV = -(2**62)

# Of each cell the last moments are looked up by the table's own order, one cell after another.
_LAST = (
    "WITH asked (cell_id, before_ms) AS (VALUES {asked})"
    " SELECT r.cell_id, r.at_ms, r.revision,"
    f" CASE WHEN r.suspect = 0 THEN COALESCE(r.microvolts, {_NOT_BELIEVED_UV})"
    f" ELSE {_NOT_BELIEVED_UV} END"
    " FROM asked a JOIN reading r ON r.cell_id = a.cell_id AND r.at_ms IN ("
    " SELECT q.at_ms FROM reading q WHERE q.cell_id = a.cell_id AND q.at_ms < a.before_ms"
    " AND q.at_ms >= a.before_ms - ? ORDER BY q.at_ms DESC LIMIT ?)"
)


def last_believed(
    session: Session, cells: Sequence[tuple[int, int]], reach_ms: int, count: int
) -> tuple[NDArray[np.int64], NDArray[np.int64], NDArray[np.int64]]:
    """The last readings that count of each (cell_id, before_ms), at most `count` of each.

    Answers (cell_id, at_ms, microvolts) by cell and time. Readings older than `reach_ms`
    before the moment are left out. Of many doubted readings in a row fewer than `count`
    believed ones may be found.
    """
    parts = []
    for start in range(0, len(cells), _AT_ONCE):
        some = cells[start : start + _AT_ONCE]
        # Cast, so that PostgreSQL takes them for what they are.
        asked = ", ".join(["(CAST(? AS BIGINT), CAST(? AS BIGINT))"] * len(some))
        parts.append(
            fetch_columns(
                session,
                _LAST.format(asked=asked),
                [*(value for pair in some for value in pair), reach_ms, count + _TO_SPARE],
                (("cell_id", "i8"), ("at_ms", "i8"), ("revision", "i8"), ("microvolts", "i8")),
            )
        )
    rows = np.concatenate(parts) if parts else np.empty(0, [("cell_id", "i8")])
    if not len(rows):
        nothing = np.empty(0, np.int64)
        return nothing, nothing, nothing
    rows = rows[np.lexsort((rows["revision"], rows["at_ms"], rows["cell_id"]))]
    # Of each moment only the highest revision counts.
    is_last = np.ones(len(rows), bool)
    is_last[:-1] = (np.diff(rows["cell_id"]) != 0) | (np.diff(rows["at_ms"]) != 0)
    rows = rows[is_last & (rows["microvolts"] != _NOT_BELIEVED_UV)]
    cell_id = np.ascontiguousarray(rows["cell_id"])
    # Counted from the end of each cell's readings.
    ends = np.searchsorted(cell_id, cell_id, side="right")
    rows = rows[ends - np.arange(len(rows)) <= count]
    return (
        np.ascontiguousarray(rows["cell_id"]),
        np.ascontiguousarray(rows["at_ms"]),
        np.ascontiguousarray(rows["microvolts"]),
    )
