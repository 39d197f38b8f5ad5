"""Harvested, stock and made; current efficiency on both bases."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.charge import PeriodCharge, charges_at
from server.accounts.crops import LOOK_BACK, hanging
from server.accounts.doubt import (
    ESTIMATED_CURRENT,
    STOCK_MODEL,
    STOCK_SHAPE,
    doubts_of,
    root_sum,
)
from server.accounts.periods import DAY_MS
from server.accounts.results import Crops, Made
from server.science.constants import Metal
from server.science.faraday import deposited_kg
from server.science.spread import median
from server.storage.current import bypasses_of
from server.storage.lots import crops_growing, crops_pulled, last_crops_of_cell, lot_sums
from server.storage.plant import FROM_THE_START_MS, SectionPlan

Numbers = NDArray[np.float64]

_RECENT_MS = 45 * DAY_MS
"""How far back a cell's crops say something about its efficiency now."""

_RECENT_CROPS = 5


@dataclass(frozen=True)
class Stock:
    """Metal still hanging in the cells of a section at a moment, per cell."""

    kg: Numbers
    started_ms: NDArray[np.int64]
    """When the oldest cathodes of each cell were hung; 0: before its first lot."""
    efficiency: Numbers
    """Share by which each cell's charge was judged."""
    u_kg: float
    """Standard uncertainty of the sum from the judgement alone, without scale and current."""

    @property
    def total_kg(self) -> float:
        """Summed over the cells."""
        return float(self.kg.sum())


def crop_account(
    session: Session, section: SectionPlan, metal: Metal, from_ms: int, to_ms: int
) -> Crops:
    """Lots pulled in a period, each against the charge that its own cathodes received."""
    lots, weighed_kg, charge_c, estimated_c = lot_sums(session, section.id, from_ms, to_ms)
    theoretical_kg = float(deposited_kg(max(charge_c, 0.0), metal))
    estimated = estimated_c / charge_c if charge_c > 0 else 0.0
    efficiency = u_efficiency = None
    if theoretical_kg > 0 and lots:
        doubts = doubts_of(section.terms_at(to_ms - 1))
        efficiency = weighed_kg / theoretical_kg
        u_efficiency = efficiency * root_sum(
            doubts.scale, doubts.current, ESTIMATED_CURRENT * estimated
        )
    return Crops(
        lots=lots,
        weighed_kg=weighed_kg,
        theoretical_kg=theoretical_kg,
        current_efficiency=efficiency,
        u_current_efficiency=u_efficiency,
        estimated_share=estimated,
    )


def stock_at(session: Session, section: SectionPlan, metal: Metal, at_ms: int) -> Stock:
    """Metal that hangs in each cell at a moment.

    Cathodes whose lot has been weighed since carry the part of its metal that their charge up
    to the moment is of their whole charge. The others carry the charge since they were hung,
    times the efficiency that the cell's recent crops showed (the median of its last five within
    45 days; else the section's over that time; else the section's target).
    """
    terms = section.terms_at(at_ms)
    cells = len(section.cell_ids)
    kg, started, efficiency = np.zeros(cells), np.zeros(cells, np.int64), np.full(cells, np.nan)
    recent = crops_pulled(session, section.id, at_ms - _RECENT_MS, at_ms + 1)
    later = crops_growing(session, section.id, at_ms, at_ms + 1)
    later = later[(later["started_ms"] < at_ms) & (later["pulled_ms"] > at_ms)]
    section_efficiency = _efficiency(recent, metal)
    if np.isnan(section_efficiency):
        section_efficiency = terms.target_current_efficiency
    open_parts: list[tuple[int, int, float, float]] = []
    moments = {at_ms}
    for place, cell_id in enumerate(section.cell_ids[: terms.cells]):
        own = recent[recent["cell_id"] == cell_id]
        if not len(own):
            own = last_crops_of_cell(session, cell_id, at_ms + 1, _RECENT_CROPS * 4)
        shown = _efficiency(own[own["pulled_ms"] > at_ms - _RECENT_MS][-_RECENT_CROPS:], metal)
        efficiency[place] = section_efficiency if np.isnan(shown) else shown
        groups = {h.started_ms: h.cathodes for h in hanging(terms.cathodes_per_cell, own)}
        if FROM_THE_START_MS in groups and len(own):
            # Some cathodes hang since before these crops: look further back for their pull.
            own = last_crops_of_cell(session, cell_id, at_ms + 1, LOOK_BACK)
            groups = {h.started_ms: h.cathodes for h in hanging(terms.cathodes_per_cell, own)}
        if groups:
            started[place] = min(groups)
        for crop in later[later["cell_id"] == cell_id]:
            start = int(crop["started_ms"])
            started[place] = start
            if start in groups:
                groups[start] = max(groups[start] - int(crop["cathodes"]), 0)
            elif groups:
                oldest = min(groups)
                groups[oldest] = max(groups[oldest] - int(crop["cathodes"]), 0)
            whole_c = float(crop["charge_c"])
            if whole_c > 0:
                kg_per_c = float(crop["metal_kg"]) / whole_c * float(crop["share"])
                open_parts.append((place, start, kg_per_c, STOCK_SHAPE))
                moments.add(start)
        for start, count in groups.items():
            if count > 0:
                share = count / terms.cathodes_per_cell
                kg_per_c = float(deposited_kg(1.0, metal)) * share * efficiency[place]
                open_parts.append((place, start, kg_per_c, STOCK_MODEL))
                moments.add(start)
    u_kg = _fill(session, section, at_ms, open_parts, sorted(moments), kg)
    return Stock(
        kg=kg,
        started_ms=started,
        efficiency=efficiency,
        u_kg=u_kg,
    )


def _fill(
    session: Session,
    section: SectionPlan,
    at_ms: int,
    parts: list[tuple[int, int, float, float]],
    moments: list[int],
    kg: Numbers,
) -> float:
    """Add each part's charge times its metal per coulomb; answers how sure the sum is, kg.

    What is judged alike errs alike: the parts' uncertainties are added up.
    """
    charge_at = dict(zip(moments, charges_at(session, section.id, moments), strict=True))
    place_of = {cell_id: place for place, cell_id in enumerate(section.cell_ids)}
    bypasses: dict[int, list[tuple[int, int]]] = {}
    for cell_id, start, end in bypasses_of(session, section.cell_ids, moments[0], at_ms):
        bypasses.setdefault(place_of[cell_id], []).append((start, end))
    u_kg = 0.0
    for place, start, kg_per_c, relative_u in parts:
        charge_c = charge_at[at_ms][0] - charge_at[start][0]
        for out_ms, back_ms in bypasses.get(place, ()):
            if back_ms > start and out_ms < at_ms:
                edges = charges_at(session, section.id, (max(out_ms, start), min(back_ms, at_ms)))
                charge_c -= edges[1][0] - edges[0][0]
        kg[place] += charge_c * kg_per_c
        u_kg += charge_c * kg_per_c * relative_u
    return u_kg


def _efficiency(crops: NDArray[np.void], metal: Metal) -> float:
    """Median of the crops' metal over what their charge could have made; NaN without charge.

    The median, since a short takes metal from few crops and mostly late in their growth: the
    mean of finished crops would judge young deposits too low.
    """
    has_charge = crops["charge_c"] > 0
    if not has_charge.any():
        return float("nan")
    theoretical_kg = deposited_kg(crops["charge_c"][has_charge], metal)
    return float(median(crops["metal_kg"][has_charge] / theoretical_kg))


def made_account(
    session: Session,
    section: SectionPlan,
    metal: Metal,
    charge: PeriodCharge,
    harvested_kg: float,
    from_ms: int,
    to_ms: int,
) -> Made:
    """Harvest and change of stock, against the charge of the period."""
    start, end = (stock_at(session, section, metal, at_ms) for at_ms in (from_ms, to_ms))
    doubts = doubts_of(section.terms_at(to_ms - 1))
    theoretical_kg = float(deposited_kg(max(charge.cells_c, 0.0), metal))
    change_kg = end.total_kg - start.total_kg
    made_kg = harvested_kg + change_kg
    # Harvest and judged stock both rest on the scale: its error is common to them.
    u_made_kg = root_sum(doubts.scale * made_kg, start.u_kg, end.u_kg)
    efficiency = u_efficiency = None
    if theoretical_kg > 0:
        efficiency = made_kg / theoretical_kg
        u_efficiency = root_sum(
            u_made_kg / theoretical_kg,
            efficiency * root_sum(doubts.current, ESTIMATED_CURRENT * charge.estimated_share),
        )
    return Made(
        theoretical_kg=theoretical_kg,
        harvested_kg=harvested_kg,
        stock_start_kg=start.total_kg,
        stock_end_kg=end.total_kg,
        u_stock_end_kg=root_sum(end.u_kg, doubts.scale * end.total_kg),
        made_kg=made_kg,
        u_made_kg=u_made_kg,
        current_efficiency=efficiency,
        u_current_efficiency=u_efficiency,
    )
