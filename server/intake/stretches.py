"""Which stretches of time a delivery changed, marked so that only those are worked out anew."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.stale import Kind, mark

GAP_MS = 86_400_000
"""Records further apart than a day do not make everything between them stale."""


def mark_moments(
    session: Session, section_id: int, kind: Kind, moments_ms: NDArray[np.int64] | Sequence[int]
) -> None:
    """Mark the time around these moments, in as many stretches as they lie in."""
    at_ms = np.sort(np.asarray(moments_ms, np.int64))
    ends = np.append(np.flatnonzero(np.diff(at_ms) > GAP_MS), len(at_ms) - 1)
    starts = np.append(0, ends[:-1] + 1)
    for start, end in zip(starts.tolist(), ends.tolist(), strict=True):
        mark(session, section_id, kind, int(at_ms[start]), int(at_ms[end]) + 1, GAP_MS)
