"""Samples of current, counters, outages and the steps that were worked out of them."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.direct import execute, fetch_columns, fetch_rows, insert_rows, marks

_FAR_MS = 2**53
_DAY_MS = 86_400_000
_PREFIX = (
    "SELECT k.at_ms, k.amps, k.basis, d.before_c + k.since_day_c AS charge_c,"
    " d.estimated_before_c + k.estimated_since_day_c AS estimated_c"
    " FROM charge_knot k JOIN charge_day d ON d.section_id = k.section_id"
    " AND d.day_ms = k.at_ms - k.at_ms % 86400000 "
)


def _effective(
    session: Session, table: str, value: str, section_id: int, from_ms: int, to_ms: int
) -> tuple[NDArray[np.int64], NDArray[np.float64]]:
    rows = fetch_columns(
        session,
        f"SELECT at_ms, COALESCE({value}, 1e300) FROM {table}"
        " WHERE section_id = ? AND at_ms >= ? AND at_ms < ? ORDER BY at_ms, revision",
        (section_id, from_ms, to_ms),
        (("at_ms", "i8"), ("value", "f8")),
    )
    at_ms, values = np.ascontiguousarray(rows["at_ms"]), np.ascontiguousarray(rows["value"])
    keep = np.append(at_ms[1:] != at_ms[:-1], True)[: len(at_ms)] & (values < 1e300)
    return at_ms[keep], values[keep]


def samples_between(
    session: Session, section_id: int, from_ms: int, to_ms: int
) -> tuple[NDArray[np.int64], NDArray[np.float64]]:
    """Effective samples of current, (at_ms, amps), with from_ms <= at < to_ms."""
    return _effective(session, "current_sample", "amps", section_id, from_ms, to_ms)


def counters_between(
    session: Session, section_id: int, from_ms: int, to_ms: int
) -> tuple[NDArray[np.int64], NDArray[np.float64]]:
    """Effective readings of the ampere-hour counter, (at_ms, coulombs)."""
    return _effective(session, "counter_sample", "counter_c", section_id, from_ms, to_ms)


def _beside(
    session: Session, table: str, value: str, section_id: int, from_ms: int, to_ms: int
) -> tuple[int, int]:
    """Nearest moments before and after a stretch that hold an effective value.

    Where there is none, the stretch's own end.
    """
    sides = []
    for comparison, order, fallback in (("<", "DESC", from_ms), (">=", "ASC", to_ms)):
        edge_ms = from_ms if comparison == "<" else to_ms
        rows = fetch_rows(
            session,
            f"SELECT s.at_ms FROM {table} s WHERE s.section_id = ? AND s.at_ms {comparison} ?"
            f" AND s.{value} IS NOT NULL AND NOT EXISTS (SELECT 1 FROM {table} n WHERE"
            " n.section_id = s.section_id AND n.at_ms = s.at_ms AND n.revision > s.revision)"
            f" ORDER BY s.at_ms {order} LIMIT 1",
            (section_id, edge_ms),
        )
        sides.append(int(rows[0][0]) if rows else fallback)
    return sides[0], sides[1]


def samples_beside(session: Session, section_id: int, from_ms: int, to_ms: int) -> tuple[int, int]:
    """Moments of the last sample before a stretch and the first one after it."""
    return _beside(session, "current_sample", "amps", section_id, from_ms, to_ms)


def newest_sample(session: Session, section_id: int, before_ms: int) -> tuple[int, float] | None:
    """(at_ms, amps) of the newest effective sample of current before a moment."""
    at_ms, _ = samples_beside(session, section_id, before_ms, before_ms)
    moments, amps = samples_between(session, section_id, at_ms, at_ms + 1)
    return (int(moments[0]), float(amps[0])) if len(moments) else None


def counters_beside(session: Session, section_id: int, from_ms: int, to_ms: int) -> tuple[int, int]:
    """Moments of the last counter reading before a stretch and the first one after it."""
    return _beside(session, "counter_sample", "counter_c", section_id, from_ms, to_ms)


def effective_outages(
    session: Session, section_id: int, from_ms: int, to_ms: int
) -> list[tuple[str, int, int | None, str]]:
    """Outages that touch a time: (cells, from_ms, to_ms or None while it lasts, state)."""
    rows = fetch_rows(
        session,
        "SELECT cells, from_ms, to_ms, state FROM outage o WHERE section_id = ? AND from_ms < ?"
        " AND (to_ms IS NULL OR to_ms > ?) AND is_void = 0 AND NOT EXISTS (SELECT 1 FROM outage n"
        " WHERE n.section_id = o.section_id AND n.cells = o.cells AND n.from_ms = o.from_ms"
        " AND n.revision > o.revision) ORDER BY from_ms, cells",
        (section_id, to_ms, from_ms),
    )
    return [(str(r[0]), int(r[1]), None if r[2] is None else int(r[2]), str(r[3])) for r in rows]


def off_times(session: Session, section_id: int, from_ms: int, to_ms: int) -> list[tuple[int, int]]:
    """Times in which the whole section carried no current."""
    return [
        (start, _FAR_MS if end is None else end)
        for cells, start, end, _ in effective_outages(session, section_id, from_ms, to_ms)
        if cells == ""
    ]


def bypasses_of(
    session: Session, cell_ids: Sequence[int], from_ms: int, to_ms: int
) -> list[tuple[int, int, int]]:
    """Times in which cells were bypassed, (cell_id, from_ms, to_ms), that touch a time."""
    if not cell_ids:
        return []
    rows = fetch_rows(
        session,
        f"SELECT cell_id, from_ms, to_ms FROM bypassed_cell WHERE cell_id IN"
        f" ({marks(len(cell_ids))}) AND from_ms < ? AND to_ms > ? ORDER BY cell_id, from_ms",
        (*cell_ids, to_ms, from_ms),
    )
    return [(int(r[0]), int(r[1]), int(r[2])) for r in rows]


def keep_bypasses(
    session: Session, cell_ids: Sequence[int], bypasses: Sequence[tuple[int, int, int]]
) -> None:
    """Write anew when these cells were bypassed."""
    execute(
        session,
        f"DELETE FROM bypassed_cell WHERE cell_id IN ({marks(len(cell_ids))})",
        tuple(cell_ids),
    )
    insert_rows(
        session,
        "INSERT INTO bypassed_cell (cell_id, from_ms, to_ms) VALUES (?, ?, ?)",
        bypasses,
    )


def knots_between(
    session: Session, section_id: int, from_ms: int, to_ms: int
) -> tuple[NDArray[np.void], NDArray[np.void]]:
    """The step that holds at `from_ms` and those up to `to_ms`, and the days they lie in.

    Steps: at_ms, amps, basis, since_day_c, estimated_since_day_c. Days: day_ms, before_c,
    estimated_before_c.
    """
    first = fetch_rows(
        session,
        "SELECT MAX(at_ms) FROM charge_knot WHERE section_id = ? AND at_ms <= ?",
        (section_id, from_ms),
    )[0][0]
    start_ms = from_ms if first is None else int(first)
    knots = fetch_columns(
        session,
        "SELECT at_ms, amps, basis, since_day_c, estimated_since_day_c FROM charge_knot"
        " WHERE section_id = ? AND at_ms >= ? AND at_ms < ? ORDER BY at_ms",
        (section_id, start_ms, to_ms),
        (
            ("at_ms", "i8"),
            ("amps", "f8"),
            ("basis", "i8"),
            ("since_day_c", "f8"),
            ("estimated_since_day_c", "f8"),
        ),
    )
    days = fetch_columns(
        session,
        "SELECT day_ms, before_c, estimated_before_c FROM charge_day"
        " WHERE section_id = ? AND day_ms >= ? AND day_ms < ? ORDER BY day_ms",
        (section_id, start_ms - _DAY_MS, to_ms),
        (("day_ms", "i8"), ("before_c", "f8"), ("estimated_before_c", "f8")),
    )
    return knots, days


def prefix_rows(
    session: Session, section_id: int, at_ms: int
) -> tuple[int, float, int, float, float] | None:
    """(at_ms, amps, basis, charge, estimated charge) of the step that holds at a moment."""
    rows = fetch_rows(
        session,
        f"{_PREFIX} WHERE k.section_id = ? AND k.at_ms <= ? ORDER BY k.at_ms DESC LIMIT 1",
        (section_id, at_ms),
    )
    if not rows:
        return None
    at, amps, basis, charge_c, estimated_c = rows[0]
    return int(at), float(amps), int(basis), float(charge_c), float(estimated_c)


def keep_knots(
    session: Session,
    section_id: int,
    from_ms: int,
    to_ms: int,
    rows: Sequence[tuple[int, float, int, float, float]],
) -> None:
    """Write the steps of these days in place of the former ones."""
    execute(
        session,
        "DELETE FROM charge_knot WHERE section_id = ? AND at_ms >= ? AND at_ms < ?",
        (section_id, from_ms, to_ms),
    )
    insert_rows(
        session,
        "INSERT INTO charge_knot (section_id, at_ms, amps, basis, since_day_c,"
        f" estimated_since_day_c) VALUES ({int(section_id)}, ?, ?, ?, ?, ?)",
        rows,
    )


def later_day_totals(
    session: Session, section_id: int, day_from: int, day_to: int
) -> tuple[float, float, list[tuple[int, float, float]]]:
    """Running charge at the start of a stretch of days, and the totals of the days after it."""
    former = fetch_rows(
        session,
        "SELECT before_c + total_c, estimated_before_c + estimated_c FROM charge_day"
        " WHERE section_id = ? AND day_ms < ? ORDER BY day_ms DESC LIMIT 1",
        (section_id, day_from),
    )
    later = fetch_rows(
        session,
        "SELECT day_ms, total_c, estimated_c FROM charge_day"
        " WHERE section_id = ? AND day_ms >= ? ORDER BY day_ms",
        (section_id, day_to),
    )
    before_c, estimated_c = former[0] if former else (0.0, 0.0)
    return float(before_c), float(estimated_c), [(int(d), float(t), float(e)) for d, t, e in later]


def keep_charge_days(
    session: Session,
    section_id: int,
    day_from: int,
    rows: Sequence[tuple[int, float, float, float, float]],
) -> None:
    """Write every day's charge from one day on."""
    execute(
        session,
        "DELETE FROM charge_day WHERE section_id = ? AND day_ms >= ?",
        (section_id, day_from),
    )
    insert_rows(
        session,
        "INSERT INTO charge_day (section_id, day_ms, total_c, estimated_c, before_c,"
        f" estimated_before_c) VALUES ({int(section_id)}, ?, ?, ?, ?, ?)",
        rows,
    )
