"""Kilowatt-hours of a period: whole days from their sums, the edges by the hour."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from sqlalchemy.orm import Session

from server.accounts.charge import PeriodCharge, charges_at
from server.accounts.doubt import ESTIMATED_CURRENT, doubts_of, root_sum
from server.accounts.periods import DAY_MS, HOUR_MS, utc_day_ms
from server.accounts.results import Energy, Made
from server.science.faraday import specific_energy_j_kg
from server.science.units import kwh_from_joules
from server.storage.plant import House, SectionPlan
from server.storage.summaries import energy_days, energy_hours

_UNREAD = 0.05
"""Relative standard uncertainty of the voltage of cells that no reading reaches."""


@dataclass(frozen=True)
class EnergySum:
    """Energy of a section's cells over a time, with the charge it belongs to."""

    energy_j: float | None
    cell_charge_c: float
    measured_charge_c: float


def energy_between(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> EnergySum:
    """Energy of the cells of a section over a period.

    Whole UTC days come from their sums and the days at the edges hour by hour; of an hour that
    the period cuts, the part that its charge has of the hour's. Charge at times when no voltage
    of the section was at hand is taken at the mean voltage of the rest, and is not measured.
    """
    whole_from = utc_day_ms(from_ms + DAY_MS - 1)
    whole_to = utc_day_ms(to_ms)
    parts = _Parts()
    edges = [(from_ms, to_ms)]
    if whole_from < whole_to:
        days = energy_days(session, section.id, whole_from, whole_to)
        parts.add(days["cell_charge_c"], days["measured_charge_c"], days["energy_j"])
        edges = [(from_ms, whole_from), (whole_to, to_ms)]
    for start_ms, end_ms in edges:
        if start_ms < end_ms:
            _add_hours(session, section, start_ms, end_ms, parts)
    return parts.sum()


def energies_between(
    session: Session, section: SectionPlan, edges_ms: Sequence[int]
) -> list[EnergySum]:
    """Energy of a section's cells between each two of these ascending moments.

    For many short periods in a row, such as the days of a year: the hours are loaded once.
    Edges that cut an hour are worked out one by one.
    """
    if any(edge_ms % HOUR_MS for edge_ms in edges_ms):
        pairs = zip(edges_ms, edges_ms[1:], strict=False)
        return [energy_between(session, section, *pair) for pair in pairs]
    days = energy_hours(session, section.id, utc_day_ms(edges_ms[0]), edges_ms[-1])
    hour_ms = np.array([day + hour * HOUR_MS for day, _ in days for hour in range(24)])
    hours = np.concatenate([table for _, table in days]) if days else np.zeros((0, 4))
    bounds = np.searchsorted(hour_ms, edges_ms)
    sums = []
    for start, end in zip(bounds, bounds[1:], strict=False):
        parts = _Parts()
        parts.add(hours[start:end, 1], hours[start:end, 2], hours[start:end, 3])
        sums.append(parts.sum())
    return sums


class _Parts:
    """Sums over days and hours, some of which have no known energy."""

    def __init__(self) -> None:
        self.cell_charge_c = self.measured_charge_c = 0.0
        self.known_j = self.known_charge_c = 0.0

    def add(self, cell_c: ArrayLike, measured_c: ArrayLike, energy_j: ArrayLike) -> None:
        """Add days or hours; NaN energy is unknown."""
        cell_c, energy_j = np.asarray(cell_c, float), np.asarray(energy_j, float)
        is_known = np.isfinite(energy_j)
        self.cell_charge_c += float(cell_c.sum())
        self.measured_charge_c += float(np.sum(measured_c))
        self.known_j += float(energy_j[is_known].sum())
        self.known_charge_c += float(cell_c[is_known].sum())

    def sum(self) -> EnergySum:
        """What was added, the unknown at the mean voltage of the known."""
        energy_j = None
        if self.cell_charge_c == 0:
            energy_j = 0.0
        elif self.known_charge_c > 0:
            energy_j = self.known_j * (self.cell_charge_c / self.known_charge_c)
        return EnergySum(energy_j, self.cell_charge_c, self.measured_charge_c)


def _add_hours(
    session: Session, section: SectionPlan, from_ms: int, to_ms: int, parts: _Parts
) -> None:
    """Add a time that is no whole day, hour by hour."""
    for day_ms, hours in energy_hours(session, section.id, utc_day_ms(from_ms), to_ms):
        starts = day_ms + np.arange(24) * HOUR_MS
        part = ((starts >= from_ms) & (starts + HOUR_MS <= to_ms)).astype(float)
        for hour in np.flatnonzero((part == 0) & (starts < to_ms) & (starts + HOUR_MS > from_ms)):
            start_ms = int(starts[hour])
            inner = (max(start_ms, from_ms), min(start_ms + HOUR_MS, to_ms))
            before, after = charges_at(session, section.id, inner)
            if hours[hour, 0] != 0:
                part[hour] = (after[0] - before[0]) / hours[hour, 0]
        parts.add(hours[:, 1] * part, hours[:, 2] * part, np.where(part > 0, hours[:, 3] * part, 0))


def energy_account(
    session: Session,
    house: House,
    section: SectionPlan,
    charge: PeriodCharge,
    made: Made,
    from_ms: int,
    to_ms: int,
) -> Energy:
    """What the cells took, what each kilogram cost, and how sure that is."""
    total = energy_between(session, section, from_ms, to_ms)
    terms = section.terms_at(to_ms - 1)
    read_share = total.measured_charge_c / total.cell_charge_c if total.cell_charge_c > 0 else 0.0
    if total.energy_j is None or charge.cells_c <= 0:
        return Energy(None, None, None, None, None, None, None, read_share)
    mean_v = total.energy_j / total.cell_charge_c if total.cell_charge_c > 0 else None
    ac_j = None
    if terms.rectifier_efficiency is not None:
        ac_j = total.energy_j / terms.rectifier_efficiency
    doubts = doubts_of(terms)
    u_volts = root_sum(doubts.meter_v / mean_v if mean_v else 0.0, _UNREAD * (1.0 - read_share))
    u_energy = root_sum(u_volts, doubts.current, ESTIMATED_CURRENT * charge.estimated_share)
    specific = u_specific = None
    if made.made_kg > 0:
        specific = float(specific_energy_j_kg(total.energy_j, made.made_kg))
        u_specific = specific * root_sum(u_energy, made.u_made_kg / made.made_kg)
    paid_j = ac_j if ac_j is not None else total.energy_j
    return Energy(
        dc_j=total.energy_j,
        u_dc_j=total.energy_j * u_energy,
        ac_j=ac_j,
        mean_cell_volts=mean_v,
        specific_energy_j_kg=specific,
        u_specific_energy_j_kg=u_specific,
        cost=_cost(house, paid_j, from_ms, to_ms),
        read_share=read_share,
    )


def _cost(house: House, paid_j: float, from_ms: int, to_ms: int) -> float:
    """Energy at the prices that held, weighted by the time for which each did."""
    edges = sorted(
        {from_ms, to_ms, *(t.from_ms for t in house.terms if from_ms < t.from_ms < to_ms)}
    )
    price = sum(
        house.terms_at(start).energy_price_per_kwh * (end - start)
        for start, end in zip(edges, edges[1:], strict=False)
    ) / (to_ms - from_ms)
    return float(kwh_from_joules(paid_j)) * price
