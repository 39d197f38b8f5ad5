"""Lots as they count, and the crops and figures that are worked out of them."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.direct import execute, fetch_columns, fetch_each, fetch_rows, insert_rows, marks

_CROP = (
    ("cell_id", "i8"),
    ("pulled_ms", "i8"),
    ("lot_id", "i8"),
    ("started_ms", "i8"),
    ("cathodes", "i8"),
    ("share", "f8"),
    ("charge_c", "f8"),
    ("estimated_c", "f8"),
    ("metal_kg", "f8"),
    ("is_shared", "i8"),
)
_CROP_COLUMNS = ", ".join(name for name, _ in _CROP)


@dataclass(frozen=True)
class LotRow:
    """A lot as it counts: its highest revision."""

    id: int
    name: str
    cells: str
    weighed_ms: int
    pulled_ms: int
    started_ms: int | None
    cathodes_per_cell: int | None
    net_kg: float
    starter_kg: float


_LOT = (
    "SELECT id, name, cells, weighed_ms, pulled_ms, started_ms, cathodes_per_cell, net_kg,"
    " starter_kg FROM lot l WHERE {where} AND is_void = 0 AND NOT EXISTS"
    " (SELECT 1 FROM lot n WHERE n.section_id = l.section_id AND n.name = l.name"
    " AND n.revision > l.revision) ORDER BY pulled_ms, id"
)


def effective_lots(session: Session, section_id: int, from_ms: int, to_ms: int) -> list[LotRow]:
    """Lots pulled in [from_ms, to_ms) as they count, by the time they were pulled."""
    return [
        LotRow(*row)
        for row in fetch_rows(
            session,
            _LOT.format(where="section_id = ? AND pulled_ms >= ? AND pulled_ms < ?"),
            (section_id, from_ms, to_ms),
        )
    ]


def lots_with_ids(session: Session, lot_ids: Sequence[int]) -> list[LotRow]:
    """These lots, by the time they were pulled."""
    if not lot_ids:
        return []
    where = f"id IN ({marks(len(lot_ids))})"
    return [LotRow(*row) for row in fetch_rows(session, _LOT.format(where=where), tuple(lot_ids))]


def crops_pulled(session: Session, section_id: int, from_ms: int, to_ms: int) -> NDArray[np.void]:
    """Crops of a section pulled in [from_ms, to_ms), by pull and cell."""
    return fetch_columns(
        session,
        f"SELECT {_CROP_COLUMNS} FROM crop WHERE section_id = ? AND pulled_ms >= ?"
        " AND pulled_ms < ? ORDER BY pulled_ms, cell_id, lot_id",
        (section_id, from_ms, to_ms),
        _CROP,
    )


def crops_growing(session: Session, section_id: int, from_ms: int, to_ms: int) -> NDArray[np.void]:
    """Crops that grew at some time between two moments, by pull and cell."""
    return fetch_columns(
        session,
        f"SELECT {_CROP_COLUMNS} FROM crop WHERE section_id = ? AND pulled_ms > ?"
        " AND started_ms < ? ORDER BY pulled_ms, cell_id, lot_id",
        (section_id, from_ms, to_ms),
        _CROP,
    )


def last_crop_of_each(
    session: Session, cell_ids: Sequence[int], before_ms: int
) -> NDArray[np.void]:
    """Of each cell the last crop pulled before a moment, where there is one; by pull."""
    found = fetch_each(
        session,
        f"SELECT {_CROP_COLUMNS} FROM crop WHERE cell_id = ? AND pulled_ms < ?"
        " ORDER BY pulled_ms DESC, lot_id DESC LIMIT 1",
        [(cell_id, before_ms) for cell_id in cell_ids],
        _CROP,
    )
    crops = np.concatenate(found) if found else np.empty(0, list(_CROP))
    return crops[np.argsort(crops["pulled_ms"], kind="stable")]


def last_crops_of_cell(
    session: Session, cell_id: int, before_ms: int, count: int
) -> NDArray[np.void]:
    """The last crops of a cell pulled before a moment, oldest first."""
    rows = fetch_columns(
        session,
        f"SELECT {_CROP_COLUMNS} FROM crop WHERE cell_id = ? AND pulled_ms < ?"
        " ORDER BY pulled_ms DESC, lot_id DESC LIMIT ?",
        (cell_id, before_ms, count),
        _CROP,
    )
    return rows[::-1]


def crops_of_cell(session: Session, cell_id: int, from_ms: int, to_ms: int) -> NDArray[np.void]:
    """Crops of one cell pulled in [from_ms, to_ms), by pull."""
    return fetch_columns(
        session,
        f"SELECT {_CROP_COLUMNS} FROM crop WHERE cell_id = ? AND pulled_ms >= ?"
        " AND pulled_ms < ? ORDER BY pulled_ms, lot_id",
        (cell_id, from_ms, to_ms),
        _CROP,
    )


def crops_of_lots(session: Session, lot_ids: Sequence[int]) -> NDArray[np.void]:
    """Crops of these lots, by lot and cell."""
    return fetch_columns(
        session,
        f"SELECT {_CROP_COLUMNS} FROM crop WHERE lot_id IN ({marks(len(lot_ids))})"
        " ORDER BY lot_id, cell_id",
        tuple(lot_ids),
        _CROP,
    )


def drop_crops_from(session: Session, section_id: int, pulled_ms: int) -> None:
    """Forget the crops and lot figures pulled at a moment or later."""
    for table in ("crop", "lot_figure"):
        execute(
            session,
            f"DELETE FROM {table} WHERE section_id = ? AND pulled_ms >= ?",
            (section_id, pulled_ms),
        )


def drop_crops_of_lots(session: Session, section_id: int, lots: Sequence[LotRow]) -> None:
    """Forget the crops and figures of these lots."""
    for lot in lots:
        execute(session, "DELETE FROM crop WHERE lot_id = ?", (lot.id,))
        execute(
            session,
            "DELETE FROM lot_figure WHERE section_id = ? AND pulled_ms = ? AND lot_id = ?",
            (section_id, lot.pulled_ms, lot.id),
        )


def keep_crops(
    session: Session,
    section_id: int,
    rows: Sequence[tuple[int, int, int, int, int, float, float, float, float, int]],
) -> None:
    """Write crops."""
    insert_rows(
        session,
        f"INSERT INTO crop ({_CROP_COLUMNS}, section_id)"
        f" VALUES ({marks(len(_CROP))}, {int(section_id)})",
        rows,
    )


def keep_lot_figures(
    session: Session,
    section_id: int,
    rows: Sequence[tuple[int, int, float, float, float, float, int]],
) -> None:
    """Write what lots made and received."""
    insert_rows(
        session,
        "INSERT INTO lot_figure (pulled_ms, lot_id, metal_kg, net_kg, charge_c, estimated_c,"
        f" cathodes, section_id) VALUES (?, ?, ?, ?, ?, ?, ?, {int(section_id)})",
        rows,
    )


def lot_sums(
    session: Session, section_id: int, from_ms: int, to_ms: int
) -> tuple[int, float, float, float]:
    """Number, metal, charge and estimated charge of the lots pulled in [from_ms, to_ms)."""
    row = fetch_rows(
        session,
        "SELECT COUNT(*), COALESCE(SUM(metal_kg), 0), COALESCE(SUM(charge_c), 0),"
        " COALESCE(SUM(estimated_c), 0) FROM lot_figure WHERE section_id = ?"
        " AND pulled_ms >= ? AND pulled_ms < ?",
        (section_id, from_ms, to_ms),
    )[0]
    return int(row[0]), float(row[1]), float(row[2]), float(row[3])


def lot_figures(
    session: Session, section_id: int, from_ms: int, to_ms: int
) -> list[tuple[int, int, float, float, float, float, int]]:
    """(lot_id, pulled_ms, metal_kg, net_kg, charge_c, estimated_c, cathodes), by pull."""
    return [
        (int(r[0]), int(r[1]), float(r[2]), float(r[3]), float(r[4]), float(r[5]), int(r[6]))
        for r in fetch_rows(
            session,
            "SELECT lot_id, pulled_ms, metal_kg, net_kg, charge_c, estimated_c, cathodes"
            " FROM lot_figure WHERE section_id = ? AND pulled_ms >= ? AND pulled_ms < ?"
            " ORDER BY pulled_ms, lot_id",
            (section_id, from_ms, to_ms),
        )
    ]
