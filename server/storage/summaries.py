"""Summaries of readings and days of energy, written and read in bulk."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.direct import execute, fetch_columns, fetch_rows, insert_rows

_UNKNOWN_J = -1e300


@dataclass(frozen=True)
class SummaryRow:
    """What the readings of one period were, over all cells and packed by cell."""

    start_ms: int
    end_ms: int
    name: str
    """The shift's; empty for an hour or a day."""
    cells_read: int
    readings: int
    sum_uv: int
    cells: bytes


def keep_summaries(
    session: Session,
    section_id: int,
    level: str,
    from_ms: int,
    to_ms: int,
    rows: Sequence[SummaryRow],
) -> None:
    """Write the summaries of one level in place of those that start in [from_ms, to_ms)."""
    execute(
        session,
        "DELETE FROM summary WHERE section_id = ? AND level = ? AND start_ms >= ? AND start_ms < ?",
        (section_id, level, from_ms, to_ms),
    )
    insert_rows(
        session,
        "INSERT INTO summary (section_id, level, start_ms, end_ms, name, cells_read, readings,"
        " sum_uv, cells) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)",
        [
            (
                section_id,
                level,
                row.start_ms,
                row.end_ms,
                row.name,
                row.cells_read,
                row.readings,
                row.sum_uv,
                row.cells,
            )
            for row in rows
        ],
    )


def summaries_between(
    session: Session, section_id: int, level: str, from_ms: int, to_ms: int
) -> list[tuple[int, int, str, int, int, int]]:
    """(start, end, name, cells_read, readings, sum_uv) of the periods that start in a time."""
    return [
        (int(r[0]), int(r[1]), str(r[2]), int(r[3]), int(r[4]), int(r[5]))
        for r in fetch_rows(
            session,
            "SELECT start_ms, end_ms, name, cells_read, readings, sum_uv FROM summary"
            " WHERE section_id = ? AND level = ? AND start_ms >= ? AND start_ms < ?"
            " ORDER BY start_ms",
            (section_id, level, from_ms, to_ms),
        )
    ]


def keep_energy_days(
    session: Session,
    section_id: int,
    day_from: int,
    day_to: int,
    rows: Sequence[tuple[int, float, float, float, float | None, bytes, bytes]],
) -> None:
    """Write the days' charge and energy in place of the former ones."""
    execute(
        session,
        "DELETE FROM energy_day WHERE section_id = ? AND day_ms >= ? AND day_ms < ?",
        (section_id, day_from, day_to),
    )
    insert_rows(
        session,
        "INSERT INTO energy_day (section_id, day_ms, charge_c, cell_charge_c, measured_charge_c,"
        f" energy_j, hours, cells) VALUES ({int(section_id)}, ?, ?, ?, ?, ?, ?, ?)",
        rows,
    )


def energy_days(session: Session, section_id: int, day_from: int, day_to: int) -> NDArray[np.void]:
    """Whole days' cell_charge_c, measured_charge_c and energy_j (NaN where unknown), by day."""
    days = fetch_columns(
        session,
        "SELECT day_ms, charge_c, cell_charge_c, measured_charge_c,"
        f" COALESCE(energy_j, {_UNKNOWN_J}) FROM energy_day"
        " WHERE section_id = ? AND day_ms >= ? AND day_ms < ? ORDER BY day_ms",
        (section_id, day_from, day_to),
        (
            ("day_ms", "i8"),
            ("charge_c", "f8"),
            ("cell_charge_c", "f8"),
            ("measured_charge_c", "f8"),
            ("energy_j", "f8"),
        ),
    )
    days["energy_j"][days["energy_j"] == _UNKNOWN_J] = np.nan
    return days


def energy_hours(
    session: Session, section_id: int, day_from: int, day_to: int
) -> list[tuple[int, NDArray[np.float64]]]:
    """(day, 24 x 4 array) of each day's charge, cells' charge, read charge and energy by hour."""
    return [
        (int(day), np.frombuffer(hours, np.float64).reshape(24, 4))
        for day, hours in fetch_rows(
            session,
            "SELECT day_ms, hours FROM energy_day WHERE section_id = ? AND day_ms >= ?"
            " AND day_ms < ? ORDER BY day_ms",
            (section_id, day_from, day_to),
        )
    ]


def energy_cells(
    session: Session, section_id: int, day_from: int, day_to: int
) -> list[tuple[int, NDArray[np.float64]]]:
    """(day, cells x 2 array) of each day's charge and energy by cell, up to the last in service."""
    return [
        (int(day), np.frombuffer(cells, np.float64).reshape(-1, 2))
        for day, cells in fetch_rows(
            session,
            "SELECT day_ms, cells FROM energy_day WHERE section_id = ? AND day_ms >= ?"
            " AND day_ms < ? ORDER BY day_ms",
            (section_id, day_from, day_to),
        )
    ]
