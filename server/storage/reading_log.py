"""The readings of a cell with every revision: who brought it, when and why."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows


@dataclass(frozen=True)
class LoggedReading:
    """One revision of one reading."""

    at_ms: int
    revision: int
    volts: float | None
    """None where this revision withdraws the reading."""
    is_doubted: bool
    source: str
    sender: str
    received_ms: int
    reason: str
    doubt_id: int | None
    """The open doubt about this revision, for whoever decides on it."""
    doubt: str


def reading_log(
    session: Session,
    cell_id: int,
    from_ms: int,
    to_ms: int,
    limit: int,
    known_ms: int | None = None,
) -> list[LoggedReading]:
    """At most `limit` revisions of the readings in [from_ms, to_ms), newest reading first.

    `known_ms` leaves out what came later.
    """
    known = "" if known_ms is None else " AND d.received_ms <= ?"
    rows = fetch_rows(
        session,
        "SELECT r.at_ms, r.revision, r.microvolts, r.suspect, d.source, d.sender, d.received_ms,"
        " d.reason, s.id, s.reason FROM reading r JOIN delivery d ON d.id = r.delivery_id"
        " LEFT JOIN suspicion s ON s.cell_id = r.cell_id AND s.at_ms = r.at_ms"
        " AND s.revision = r.revision AND s.state = 'open'"
        f" WHERE r.cell_id = ? AND r.at_ms >= ? AND r.at_ms < ?{known}"
        " ORDER BY r.at_ms DESC, r.revision DESC LIMIT ?",
        (cell_id, from_ms, to_ms, *(() if known_ms is None else (known_ms,)), limit),
    )
    return [
        LoggedReading(
            at_ms=int(row[0]),
            revision=int(row[1]),
            volts=None if row[2] is None else int(row[2]) / 1e6,
            is_doubted=bool(row[3]),
            source=str(row[4]),
            sender=str(row[5]),
            received_ms=int(row[6]),
            reason=str(row[7]),
            doubt_id=None if row[8] is None else int(row[8]),
            doubt=str(row[9] or ""),
        )
        for row in rows
    ]
