"""What is newest in the books, so that whoever looks at them can tell that something changed."""

from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows

News = tuple[int | None, ...]
"""The newest of each kind of thing; two that differ mean that something has changed."""

_NEWEST = (
    "SELECT (SELECT MAX(id) FROM delivery), (SELECT MAX(id) FROM flag_act),"
    " (SELECT MAX(id) FROM stale), (SELECT COUNT(*) FROM stale),"
    " (SELECT COUNT(*) FROM held_row WHERE state = 'held'),"
    " (SELECT COUNT(*) FROM suspicion WHERE state = 'open'),"
    # Of each section by itself: that is one step down an index, whatever there is below.
    " (SELECT SUM((SELECT MAX(started_ms) FROM watched_round w WHERE w.section_id = s.id))"
    " FROM section s),"
    " (SELECT SUM((SELECT MAX(raised_ms) FROM flag f WHERE f.section_id = s.id)) FROM section s)"
)


def newest(session: Session) -> News:
    """What is newest of deliveries, acts, rounds and flags, and what waits or lags behind."""
    (row,) = fetch_rows(session, _NEWEST)
    return tuple(None if value is None else int(value) for value in row)
