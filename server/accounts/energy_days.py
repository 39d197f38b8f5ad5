"""A section's energy over whole UTC days: voltages joined in time, currents stepped."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from server.accounts.charge import ChargeRecord
from server.accounts.periods import DAY_MS, HOUR_MS
from server.science.energy import (
    joined_volts,
    moments_of_current,
    referred_volts,
    straight_energy_j,
)
from server.storage.plant import SectionPlan
from server.storage.readings import Series
from server.watch.loaded import Loaded
from server.watch.resistance import resistance_ohm

Numbers = NDArray[np.float64]

REACH_MS = 7 * DAY_MS
"""How far a reading reaches in time: a week, beyond which a cell is another cell."""

LEAST_LOAD = 0.2
"""Share of the rated current below which a voltage says nothing about the cell under load."""


@dataclass(frozen=True)
class EnergyOfDay:
    """Charge and energy of one UTC day; arrays by hour (24 x 4) and by cell (cells x 2).

    By hour: section charge, cells' charge, the part of it whose voltage was read, all in C, and
    energy in J. By cell: charge and energy.
    """

    day_ms: int
    hours: Numbers
    cells: Numbers


def readings_under_load(
    section: SectionPlan, series: Series, record: ChargeRecord, bypasses: list[tuple[int, int, int]]
) -> Loaded:
    """The believed readings of cells that carried current, with the voltage at rated current.

    Where no current is recorded, a reading is taken as made at rated current.
    """
    series = series.believed()
    rated, resistance = _terms_of(section, series.at_ms)
    amps = record.amps_at(series.at_ms)
    amps = np.where(np.isfinite(amps), amps, rated)
    keep = amps >= LEAST_LOAD * rated
    for cell_id, start, end in bypasses:
        keep &= ~((series.cell_id == cell_id) & (series.at_ms >= start) & (series.at_ms < end))
    referred = referred_volts(series.volts, amps, rated, resistance)
    return Loaded(series.where(keep), referred[keep], amps[keep])


def _terms_of(section: SectionPlan, at_ms: NDArray[np.int64]) -> tuple[Numbers, Numbers]:
    """Rated current and differential resistance that hold at each moment."""
    starts = np.array([t.from_ms for t in section.terms])
    place = np.maximum(np.searchsorted(starts, at_ms, side="right") - 1, 0)
    rated = np.array([t.rated_amps for t in section.terms])[place]
    resistance = np.array([resistance_ohm(section, t) for t in section.terms])[place]
    return rated, resistance


def energy_of_day(
    section: SectionPlan,
    day_ms: int,
    record: ChargeRecord,
    loaded: Series,
    referred_v: Numbers,
    bypasses: list[tuple[int, int, int]],
) -> EnergyOfDay:
    """Charge and energy of a section's cells over one UTC day.

    Each cell's referred voltage is joined by straight lines between its readings and turned
    back to the current of each moment; a cell that no reading reaches is given the median of
    the others, and its charge does not count as measured.
    """
    edges = _edges(section, day_ms, bypasses)
    cells = len(section.cell_ids)
    grid_ms = _grid(section, day_ms, edges, loaded)
    volts = _joined(section, day_ms, grid_ms, loaded, referred_v)
    start = grid_ms[:, :-1]
    knots = slice(*np.searchsorted(record.at_ms, [day_ms, day_ms + DAY_MS]))
    edge_s = (record.at_ms[knots] - day_ms) / 1000
    if not len(edge_s):
        return EnergyOfDay(day_ms, np.zeros((24, 4)), np.zeros((cells, 2)))
    # The record may begin in the course of the day: before it there is no current.
    edge_s = np.concatenate(([-1.0], edge_s))
    amps = np.concatenate(([0.0], record.amps[knots]))
    grid_s = (grid_ms - day_ms) / 1000
    q, q2, qt = moments_of_current(edge_s, amps, grid_s)
    charge, square, lasts = np.diff(q), np.diff(q2), np.diff(grid_s)
    first = np.diff(qt) - (grid_s[:, :-1] + 1.0) * charge
    rated, resistance = _terms_of(section, start.ravel())
    served = _in_service(section, start, bypasses)
    is_read = np.isfinite(volts[:, :-1]) & np.isfinite(volts[:, 1:])
    known_v = volts[np.isfinite(volts)]
    filled = np.where(np.isfinite(volts), volts, np.median(known_v) if known_v.size else np.nan)
    joules = straight_energy_j(
        filled[:, :-1],
        filled[:, 1:],
        lasts,
        charge,
        square,
        first,
        rated.reshape(start.shape),
        resistance.reshape(start.shape),
    )
    joules = np.where(served & (lasts > 0), np.where(charge == 0, 0.0, joules), 0.0)
    cell_charge = np.where(served, charge, 0.0)
    hour = np.minimum((start - day_ms) // HOUR_MS, 23)
    hours = np.zeros((24, 4))
    hour_q, _, _ = moments_of_current(edge_s, amps, np.arange(25) * 3600.0)
    hours[:, 0] = np.diff(hour_q)
    for column, values in (
        (1, cell_charge),
        (2, np.where(is_read, cell_charge, 0.0)),
        (3, joules),
    ):
        hours[:, column] = np.bincount(hour.ravel(), values.ravel(), minlength=24)
    by_cell = np.stack((cell_charge.sum(axis=1), joules.sum(axis=1)), axis=1)
    return EnergyOfDay(day_ms, hours, by_cell)


def _edges(
    section: SectionPlan, day_ms: int, bypasses: list[tuple[int, int, int]]
) -> NDArray[np.int64]:
    """Moments of the day at which the books break: full hours, bypasses, new terms."""
    moments = {day_ms + hour * HOUR_MS for hour in range(25)}
    moments.update(edge for _, start, end in bypasses for edge in (start, end))
    moments.update(terms.from_ms for terms in section.terms)
    return np.array(sorted(m for m in moments if day_ms <= m <= day_ms + DAY_MS), np.int64)


def _grid(
    section: SectionPlan, day_ms: int, edges: NDArray[np.int64], loaded: Series
) -> NDArray[np.int64]:
    """Per cell the edges and the moments of its own readings in the day, ascending."""
    cells = len(section.cell_ids)
    today = loaded.where((loaded.at_ms > day_ms) & (loaded.at_ms < day_ms + DAY_MS))
    place = np.searchsorted(np.array(section.cell_ids), today.cell_id)
    counts = np.bincount(place, minlength=cells)
    most = int(counts.max()) if len(today) else 0
    own = np.full((cells, most), day_ms + DAY_MS, np.int64)
    rank = np.arange(len(today)) - np.repeat(np.cumsum(counts) - counts, counts)
    own[place, rank] = today.at_ms
    grid = np.concatenate((np.tile(edges, (cells, 1)), own), axis=1)
    grid.sort(axis=1)
    return grid


def _joined(
    section: SectionPlan,
    day_ms: int,
    grid_ms: NDArray[np.int64],
    loaded: Series,
    referred_v: Numbers,
) -> Numbers:
    """Referred voltage of every cell at the moments of its grid."""
    # Only the readings that can reach into the day, so that a day is the same to the last bit
    # whatever stretch of readings was at hand.
    near = (loaded.at_ms >= day_ms - REACH_MS) & (loaded.at_ms < day_ms + DAY_MS + REACH_MS)
    ids = np.array(section.cell_ids)
    return joined_volts(
        loaded.cell_id[near],
        (loaded.at_ms[near] - day_ms) / 1000,
        referred_v[near],
        np.broadcast_to(ids[:, None], grid_ms.shape),
        (grid_ms - day_ms) / 1000,
        REACH_MS / 1000,
    )


def _in_service(
    section: SectionPlan, start_ms: NDArray[np.int64], bypasses: list[tuple[int, int, int]]
) -> NDArray[np.bool_]:
    """Whether each cell carried the section's current over the stretch that starts then."""
    starts = np.array([t.from_ms for t in section.terms])
    there = np.array([t.cells for t in section.terms])
    place = np.maximum(np.searchsorted(starts, start_ms, side="right") - 1, 0)
    number = np.arange(1, len(section.cell_ids) + 1)[:, None]
    served: NDArray[np.bool_] = number <= there[place]
    for cell_id, start, end in bypasses:
        row = section.number_of(cell_id) - 1
        served[row] &= ~((start_ms[row] >= start) & (start_ms[row] < end))
    return served
