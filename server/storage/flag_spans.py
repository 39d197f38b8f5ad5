"""Flags without their words: where, when and of what kind, for counting many of them."""

import math
from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows


@dataclass(frozen=True, slots=True)
class FlagSpan:
    """When a flag was raised and ended, of which cell, and how sure it was."""

    cell_id: int
    section_id: int
    kind: str
    tier: str
    raised_ms: int
    ended_ms: int | None
    probability: float | None


def flag_spans(session: Session, from_ms: int, to_ms: int) -> list[FlagSpan]:
    """Flags whose life touches [from_ms, to_ms), by the moment at which they were raised."""
    return [
        FlagSpan(
            int(row[0]),
            int(row[1]),
            str(row[2]),
            str(row[3]),
            int(row[4]),
            None if row[5] is None else int(row[5]),
            None if row[6] is None or math.isnan(row[6]) else float(row[6]),
        )
        for row in fetch_rows(
            session,
            "SELECT cell_id, section_id, kind, tier, raised_ms, ended_ms, probability"
            " FROM flag WHERE raised_ms < ? AND (ended_ms IS NULL OR ended_ms >= ?)"
            " ORDER BY raised_ms, cell_id, kind",
            (to_ms, from_ms),
        )
    ]
