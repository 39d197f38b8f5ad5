"""A section's figures day by day, its current and its outages, for trends."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.account import metal_of
from server.accounts.charge import charge_record
from server.accounts.energy import energies_between
from server.accounts.periods import days_between
from server.accounts.results import DayFigures
from server.science.faraday import deposited_kg, specific_energy_from_volts_j_kg
from server.storage.current import effective_outages, newest_sample
from server.storage.lots import lot_figures
from server.storage.plant import House, SectionPlan


@dataclass(frozen=True)
class CurrentSteps:
    """A section's current as steps: each holds from its moment to the next."""

    at_ms: NDArray[np.int64]
    amps: NDArray[np.float64]
    basis: NDArray[np.int64]


def section_days(
    session: Session, house: House, section_name: str, from_ms: int, to_ms: int
) -> list[DayFigures]:
    """Figures of each local day that touches a time, whole days, in order."""
    section = house.section(section_name)
    metal = metal_of(section)
    days = days_between(from_ms, to_ms, house.time_zone)
    if not days:
        return []
    record = charge_record(session, section.id, days[0].from_ms, days[-1].to_ms)
    edges = np.array([days[0].from_ms, *(d.to_ms for d in days)], np.int64)
    charge_c, estimated_c = record.charge_at(edges)
    lots = lot_figures(session, section.id, days[0].from_ms, days[-1].to_ms)
    pulled_ms = np.array([lot[1] for lot in lots], np.int64)
    metal_kg = np.array([lot[2] for lot in lots])
    lot_c = np.array([lot[4] for lot in lots])
    bounds = np.searchsorted(pulled_ms, edges)
    totals = energies_between(session, section, edges.tolist())
    figures = []
    for place, day in enumerate(days):
        own = slice(bounds[place], bounds[place + 1])
        total = totals[place]
        section_c = float(charge_c[place + 1] - charge_c[place])
        guessed_c = float(estimated_c[place + 1] - estimated_c[place])
        received_c, pulled_kg = float(lot_c[own].sum()), float(metal_kg[own].sum())
        efficiency = specific = mean_v = None
        if received_c > 0:
            efficiency = pulled_kg / float(deposited_kg(received_c, metal))
        if total.energy_j is not None and total.cell_charge_c > 0:
            mean_v = total.energy_j / total.cell_charge_c
            if efficiency is not None and efficiency > 0:
                specific = float(specific_energy_from_volts_j_kg(mean_v, efficiency, metal))
        is_recorded = len(record.at_ms) > 0 and day.to_ms > record.at_ms[0]
        figures.append(
            DayFigures(
                from_ms=day.from_ms,
                to_ms=day.to_ms,
                mean_amps=section_c * 1000 / (day.to_ms - day.from_ms) if is_recorded else None,
                cell_charge_c=total.cell_charge_c,
                estimated_share=guessed_c / section_c if section_c > 0 else 0.0,
                dc_j=total.energy_j,
                mean_cell_volts=mean_v,
                pulled_kg=pulled_kg,
                crop_current_efficiency=efficiency,
                specific_energy_j_kg=specific,
            )
        )
    return figures


def current_steps(
    session: Session, house: House, section_name: str, from_ms: int, to_ms: int
) -> CurrentSteps:
    """The steps of a section's current that touch a time."""
    section = house.section(section_name)
    record = charge_record(session, section.id, from_ms, to_ms)
    return CurrentSteps(record.at_ms, record.amps, record.basis)


def last_current(session: Session, section: SectionPlan, now_ms: int) -> tuple[int, float] | None:
    """(at_ms, amps) of the newest logged current."""
    return newest_sample(session, section.id, now_ms + 1)


def section_outages(
    session: Session, section: SectionPlan, from_ms: int, to_ms: int
) -> list[tuple[str, int, int | None, str]]:
    """Outages that touch a time: (cells, from_ms, to_ms or None while it lasts, state)."""
    return effective_outages(session, section.id, from_ms, to_ms)
