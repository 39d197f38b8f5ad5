"""Harvested and made; current efficiency on both bases."""

from sqlalchemy.orm import Session

from server.accounts.charge import PeriodCharge
from server.accounts.doubt import ESTIMATED_CURRENT, doubts_of, root_sum
from server.accounts.results import Crops, Made
from server.accounts.stock import Stock
from server.science.constants import Metal
from server.science.faraday import deposited_kg
from server.storage.lots import lot_sums
from server.storage.plant import SectionPlan


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


def made_account(
    section: SectionPlan,
    metal: Metal,
    charge: PeriodCharge,
    harvested_kg: float,
    start: Stock,
    end: Stock,
) -> Made:
    """Harvest and change of stock between two moments, against the charge of that time."""
    doubts = doubts_of(section.terms_at(end.at_ms - 1))
    theoretical_kg = float(deposited_kg(max(charge.cells_c, 0.0), metal))
    change_kg = end.total_kg - start.total_kg
    made_kg = harvested_kg + change_kg
    # Harvest and judged stock both rest on the scale: its error is common to them.
    u_made_kg = root_sum(doubts.scale * made_kg, *_doubts_of_change(start, end))
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


def _doubts_of_change(start: Stock, end: Stock) -> tuple[float, float, float]:
    """Standard uncertainties of a change of stock, kg: independent contributions.

    Cathodes that hang at both ends are judged alike, and only what they grew between is in
    doubt; those that were pulled or hung between have a doubt of their own.
    """
    both = start.doubts_kg.keys() & end.doubts_kg.keys()
    return (
        abs(sum(end.doubts_kg[key] - start.doubts_kg[key] for key in both)),
        sum(u_kg for key, u_kg in start.doubts_kg.items() if key not in both),
        sum(u_kg for key, u_kg in end.doubts_kg.items() if key not in both),
    )
