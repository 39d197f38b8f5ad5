"""Which cathodes hung where and since when, and the charge that each crop received."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.charge import ChargeRecord, charge_record
from server.storage.current import bypasses_of
from server.storage.lots import (
    LotRow,
    crops_growing,
    crops_of_lots,
    drop_crops_from,
    drop_crops_of_lots,
    effective_lots,
    keep_crops,
    keep_lot_figures,
    last_crops_of_cell,
    lots_with_ids,
)
from server.storage.plant import FROM_THE_START_MS, SectionPlan

LOOK_BACK = 32
"""Crops of a cell that are looked back at to find what hangs in it."""

_LOTS_AT_ONCE = 500

_FAR_MS = 2**53


@dataclass(frozen=True)
class Hung:
    """Cathodes that were hung in a cell at the same moment and are hanging still."""

    started_ms: int
    """FROM_THE_START_MS where they hang since before the first lot."""
    cathodes: int


def hanging(cathodes_per_cell: int, crops: NDArray[np.void]) -> list[Hung]:
    """What hangs in a cell after these crops, in the order in which they were pulled.

    Each pull empties places that are hung again at once; a crop takes its cathodes from those
    that were hung when it says it started, or else from those that hung longest.
    """
    groups = {FROM_THE_START_MS: cathodes_per_cell}
    for started_ms, pulled_ms, cathodes in zip(
        crops["started_ms"].tolist(),
        crops["pulled_ms"].tolist(),
        crops["cathodes"].tolist(),
        strict=True,
    ):
        _take(groups, started_ms, cathodes)
        groups[pulled_ms] = groups.get(pulled_ms, 0) + cathodes
    return [Hung(start, count) for start, count in sorted(groups.items()) if count > 0]


def _take(groups: dict[int, int], started_ms: int, cathodes: int) -> None:
    """Take cathodes out of the group that was hung then, and the rest from the oldest."""
    order = sorted(groups, key=lambda start: (start != started_ms, start))
    for start in order:
        taken = min(groups[start], cathodes)
        groups[start] -= taken
        cathodes -= taken
        if groups[start] == 0:
            del groups[start]
        if cathodes == 0:
            return


def cells_of(text: str) -> list[int]:
    """Cell numbers of a stored list such as '1-12;15'."""
    numbers: list[int] = []
    for part in text.split(";"):
        first, _, last = part.partition("-")
        numbers.extend(range(int(first), int(last or first) + 1))
    return numbers


def replay_lots(session: Session, section: SectionPlan, from_ms: int) -> None:
    """Work out anew every crop pulled at a moment or later, in the order of the pulls."""
    drop_crops_from(session, section.id, from_ms)
    lots = effective_lots(session, section.id, from_ms, _FAR_MS)
    if not lots:
        return
    groups: dict[int, dict[int, int]] = {}
    planned: list[tuple[LotRow, list[tuple[int, int, int]]]] = []
    for lot in lots:
        crops: list[tuple[int, int, int]] = []
        for number in cells_of(lot.cells):
            cell_id = section.cell_id(number)
            held = groups.get(cell_id)
            per_cell = section.terms_at(lot.pulled_ms).cathodes_per_cell
            if held is None:
                former = last_crops_of_cell(session, cell_id, from_ms, LOOK_BACK)
                held = {h.started_ms: h.cathodes for h in hanging(per_cell, former)}
                groups[cell_id] = held
            cathodes = lot.cathodes_per_cell or per_cell
            started_ms = lot.started_ms
            if started_ms is None:
                started_ms = min(held, default=FROM_THE_START_MS)
            _take(held, started_ms, cathodes)
            held[lot.pulled_ms] = held.get(lot.pulled_ms, 0) + cathodes
            crops.append((cell_id, started_ms, cathodes))
        planned.append((lot, crops))
    _write(session, section, planned)


def recharge_crops(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> None:
    """Work out anew the charge of the crops that grew at some time of a stretch."""
    rows = crops_growing(session, section.id, from_ms, to_ms)
    if not len(rows):
        return
    ids = np.unique(rows["lot_id"]).tolist()
    for start in range(0, len(ids), _LOTS_AT_ONCE):
        some = ids[start : start + _LOTS_AT_ONCE]
        by_lot: dict[int, list[tuple[int, int, int]]] = {}
        for row in crops_of_lots(session, some):
            by_lot.setdefault(int(row["lot_id"]), []).append(
                (int(row["cell_id"]), int(row["started_ms"]), int(row["cathodes"]))
            )
        touched = lots_with_ids(session, some)
        drop_crops_of_lots(session, section.id, touched)
        _write(session, section, [(lot, by_lot[lot.id]) for lot in touched])


def crop_charges(
    record: ChargeRecord,
    bypasses: Iterable[tuple[int, int, int]],
    cell_id: NDArray[np.int64],
    started_ms: NDArray[np.int64],
    ended_ms: NDArray[np.int64],
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Charge, and its estimated part, of cells between two moments each, C."""
    start_c, start_estimated = record.charge_at(started_ms)
    end_c, end_estimated = record.charge_at(ended_ms)
    charge_c, estimated_c = end_c - start_c, end_estimated - start_estimated
    for cell, from_ms, to_ms in bypasses:
        hit = np.flatnonzero((cell_id == cell) & (started_ms < to_ms) & (ended_ms > from_ms))
        if not len(hit):
            continue
        out_c, out_estimated = record.charge_at(np.maximum(started_ms[hit], from_ms))
        back_c, back_estimated = record.charge_at(np.minimum(ended_ms[hit], to_ms))
        charge_c[hit] -= back_c - out_c
        estimated_c[hit] -= back_estimated - out_estimated
    return charge_c, estimated_c


def _write(
    session: Session,
    section: SectionPlan,
    planned: Sequence[tuple[LotRow, list[tuple[int, int, int]]]],
) -> None:
    """Give every crop its charge and its part of the metal, and every lot its figures."""
    flat = [(lot, *crop) for lot, crops in planned for crop in crops]
    cell_id = np.array([f[1] for f in flat], np.int64)
    started_ms = np.array([f[2] for f in flat], np.int64)
    pulled_ms = np.array([f[0].pulled_ms for f in flat], np.int64)
    record = charge_record(session, section.id, int(started_ms.min()), int(pulled_ms.max()) + 1)
    bypasses = bypasses_of(
        session, section.cell_ids, int(started_ms.min()), int(pulled_ms.max()) + 1
    )
    full_c, full_estimated_c = crop_charges(record, bypasses, cell_id, started_ms, pulled_ms)
    crop_rows, lot_rows, place = [], [], 0
    for lot, crops in planned:
        own = slice(place, place + len(crops))
        place += len(crops)
        cathodes = np.array([c[2] for c in crops])
        per_cell = np.array([section.terms_at(c[1]).cathodes_per_cell for c in crops])
        share = cathodes / per_cell
        charge_c, estimated_c = full_c[own] * share, full_estimated_c[own] * share
        metal_kg = lot.net_kg - lot.starter_kg
        total_c = float(charge_c.sum())
        weight = charge_c / total_c if total_c > 0 else cathodes / cathodes.sum()
        for i, (cell, started, count) in enumerate(crops):
            crop_rows.append(
                (
                    cell,
                    lot.pulled_ms,
                    lot.id,
                    started,
                    count,
                    float(share[i]),
                    float(charge_c[i]),
                    float(estimated_c[i]),
                    float(metal_kg * weight[i]),
                    int(len(crops) > 1),
                )
            )
        lot_rows.append(
            (
                lot.pulled_ms,
                lot.id,
                metal_kg,
                lot.net_kg,
                total_c,
                float(estimated_c.sum()),
                int(cathodes.sum()),
            )
        )
    keep_crops(session, section.id, crop_rows)
    keep_lot_figures(session, section.id, lot_rows)
