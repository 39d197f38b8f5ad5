"""Lots and crops with their own efficiency, for people to read."""

from sqlalchemy.orm import Session

from server.accounts.account import metal_of
from server.accounts.doubt import ESTIMATED_CURRENT, doubts_of, root_sum
from server.accounts.results import CropResult, LotResult
from server.science.constants import Metal
from server.science.faraday import deposit_thickness_m, deposited_kg
from server.storage.lots import (
    LotRow,
    crops_of_cell,
    crops_of_lots,
    lot_figures,
    lots_with_ids,
)
from server.storage.plant import House

_AT_ONCE = 500


def _lots_by_id(session: Session, lot_ids: list[int]) -> dict[int, LotRow]:
    rows: dict[int, LotRow] = {}
    for start in range(0, len(lot_ids), _AT_ONCE):
        for lot in lots_with_ids(session, lot_ids[start : start + _AT_ONCE]):
            rows[lot.id] = lot
    return rows


def _thickness_m(metal_kg: float, area_m2: float, metal: Metal) -> float | None:
    if area_m2 <= 0 or metal_kg < 0:
        return None
    return float(deposit_thickness_m(metal_kg, area_m2, metal))


def lot_results(
    session: Session, house: House, section_name: str, from_ms: int, to_ms: int
) -> list[LotResult]:
    """Lots pulled in [from_ms, to_ms), the newest first."""
    section = house.section(section_name)
    metal = metal_of(section)
    figures = lot_figures(session, section.id, from_ms, to_ms)
    lots = _lots_by_id(session, [f[0] for f in figures])
    starts = _starts(session, list(lots))
    results = []
    for lot_id, pulled_ms, metal_kg, net_kg, charge_c, estimated_c, cathodes in reversed(figures):
        lot, terms = lots[lot_id], section.terms_at(pulled_ms)
        theoretical_kg = float(deposited_kg(max(charge_c, 0.0), metal))
        efficiency = u_efficiency = None
        if theoretical_kg > 0:
            doubts = doubts_of(terms)
            efficiency = metal_kg / theoretical_kg
            u_efficiency = efficiency * root_sum(
                doubts.scale, doubts.current, ESTIMATED_CURRENT * estimated_c / charge_c
            )
        results.append(
            LotResult(
                lot=lot.name,
                cells=lot.cells,
                weighed_ms=lot.weighed_ms,
                started_ms=starts.get(lot_id, 0),
                pulled_ms=pulled_ms,
                cathodes=cathodes,
                net_kg=net_kg,
                starter_kg=lot.starter_kg,
                metal_kg=metal_kg,
                theoretical_kg=theoretical_kg,
                current_efficiency=efficiency,
                u_current_efficiency=u_efficiency,
                thickness_m=_thickness_m(metal_kg, cathodes * terms.cathode_area_m2, metal),
                is_impossible=efficiency is not None
                and u_efficiency is not None
                and (efficiency - 2 * u_efficiency > 1),
            )
        )
    return results


def _starts(session: Session, lot_ids: list[int]) -> dict[int, int]:
    """When the oldest cathodes of each lot were hung."""
    starts: dict[int, int] = {}
    for start in range(0, len(lot_ids), _AT_ONCE):
        crops = crops_of_lots(session, lot_ids[start : start + _AT_ONCE])
        pairs = zip(crops["lot_id"].tolist(), crops["started_ms"].tolist(), strict=True)
        for lot_id, started_ms in pairs:
            starts[lot_id] = min(started_ms, starts.get(lot_id, started_ms))
    return starts


def cell_crops(
    session: Session, house: House, section_name: str, cell: int, from_ms: int, to_ms: int
) -> list[CropResult]:
    """Crops of one cell pulled in [from_ms, to_ms), the newest first."""
    section = house.section(section_name)
    metal = metal_of(section)
    crops = crops_of_cell(session, section.cell_id(cell), from_ms, to_ms)
    lots = _lots_by_id(session, crops["lot_id"].tolist())
    results = []
    for crop in crops[::-1]:
        charge_c, metal_kg = float(crop["charge_c"]), float(crop["metal_kg"])
        terms = section.terms_at(int(crop["pulled_ms"]))
        theoretical_kg = float(deposited_kg(max(charge_c, 0.0), metal))
        results.append(
            CropResult(
                cell=cell,
                lot=lots[int(crop["lot_id"])].name,
                started_ms=int(crop["started_ms"]),
                pulled_ms=int(crop["pulled_ms"]),
                cathodes=int(crop["cathodes"]),
                charge_c=charge_c,
                metal_kg=metal_kg,
                current_efficiency=metal_kg / theoretical_kg if theoretical_kg > 0 else None,
                thickness_m=_thickness_m(
                    metal_kg, int(crop["cathodes"]) * terms.cathode_area_m2, metal
                ),
                is_shared=bool(crop["is_shared"]),
            )
        )
    return results
