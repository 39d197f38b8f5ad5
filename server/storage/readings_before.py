"""The last believed readings of cells before a moment: what a new reading is held against."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows

_LAST = (
    "SELECT at_ms, microvolts, suspect FROM reading"
    " WHERE cell_id = ? AND at_ms < ? AND at_ms >= ?"
    " ORDER BY at_ms DESC, revision DESC LIMIT ?"
)
_TO_SPARE = 3
"""Rows asked for beyond the wanted ones, for doubted readings and former revisions among them."""


def last_believed(
    session: Session, cells: Sequence[tuple[int, int]], reach_ms: int, count: int
) -> tuple[NDArray[np.int64], NDArray[np.int64], NDArray[np.int64]]:
    """The last readings that count of each (cell_id, before_ms), at most `count` of each.

    Answers (cell_id, at_ms, microvolts) by cell in the order asked for and by time. Readings
    older than `reach_ms` before the moment are left out. Of many doubted readings in a row
    fewer than `count` believed ones may be found.
    """
    found: list[tuple[int, int, int]] = []
    for cell_id, before_ms in cells:
        rows = fetch_rows(
            session, _LAST, (cell_id, before_ms, before_ms - reach_ms, count + _TO_SPARE)
        )
        kept: list[tuple[int, int, int]] = []
        seen_ms = before_ms
        for at_ms, microvolts, suspect in rows:
            # Of each moment only the highest revision counts, and it comes first.
            if at_ms != seen_ms and microvolts is not None and not suspect:
                kept.append((cell_id, at_ms, microvolts))
            seen_ms = at_ms
        found.extend(reversed(kept[:count]))
    table = np.array(found, np.int64).reshape(-1, 3)
    return (
        np.ascontiguousarray(table[:, 0]),
        np.ascontiguousarray(table[:, 1]),
        np.ascontiguousarray(table[:, 2]),
    )
