"""Charge per section and cell: steps of current as prefix sums, looked up and kept up to date."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from sqlalchemy.orm import Session

from server.accounts.periods import DAY_MS, utc_day_ms
from server.science.charge import (
    ESTIMATED,
    MEASURED,
    UNRECORDED,
    counter_charge_c,
    held_current,
    without_outages,
)
from server.storage.current import (
    bypasses_of,
    counters_beside,
    counters_between,
    keep_charge_days,
    keep_knots,
    knots_between,
    later_day_totals,
    off_times,
    prefix_rows,
    samples_beside,
    samples_between,
)
from server.storage.plant import SectionPlan

_GRAINS_PER_C = 16.0
"""Charge is kept in sixteenths of a coulomb.

Sums and differences of such numbers are exact in double precision up to 5e14 C, decades of the
largest section: what a crop received does not depend, even in the last bit, on what went before.
"""

Moments = NDArray[np.int64]
Numbers = NDArray[np.float64]


def _grained(charge_c: ArrayLike) -> Numbers:
    """Charge rounded to the grain in which it is kept."""
    return np.asarray(np.rint(np.asarray(charge_c, float) * _GRAINS_PER_C) / _GRAINS_PER_C)


@dataclass(frozen=True)
class ChargeRecord:
    """The steps of a section's current over a stretch of time, with their running charge."""

    at_ms: Moments
    amps: Numbers
    basis: NDArray[np.int64]
    charge_c: Numbers
    """Charge since the record began, at each step."""
    estimated_c: Numbers

    def _place(self, at_ms: Moments) -> NDArray[np.int64]:
        return np.searchsorted(self.at_ms, at_ms, side="right") - 1

    def charge_at(self, at_ms: Moments) -> tuple[Numbers, Numbers]:
        """Charge, and its estimated part, from the start of the record up to moments, C."""
        at_ms = np.asarray(at_ms, np.int64)
        if not len(self.at_ms):
            return np.zeros(at_ms.shape), np.zeros(at_ms.shape)
        k = self._place(at_ms)
        known = np.maximum(k, 0)
        lead_s = np.where(k >= 0, (at_ms - self.at_ms[known]) / 1000, 0.0)
        step_c = _grained(self.amps[known] * lead_s)
        charge = np.where(k >= 0, self.charge_c[known] + step_c, self.charge_c[0])
        estimated = np.where(
            k >= 0,
            self.estimated_c[known] + np.where(self.basis[known] == ESTIMATED, step_c, 0.0),
            self.estimated_c[0],
        )
        return charge, estimated

    def amps_at(self, at_ms: Moments) -> Numbers:
        """Current at moments, A; NaN where none is recorded."""
        at_ms = np.asarray(at_ms, np.int64)
        if not len(self.at_ms):
            return np.full(at_ms.shape, np.nan)
        k = self._place(at_ms)
        known = np.maximum(k, 0)
        is_known = (k >= 0) & (self.basis[known] != UNRECORDED)
        return np.where(is_known, self.amps[known], np.nan)


def charge_record(session: Session, section_id: int, from_ms: int, to_ms: int) -> ChargeRecord:
    """The section's steps of current from the one that holds at `from_ms` to `to_ms`."""
    knots, days = knots_between(session, section_id, from_ms, to_ms)
    day = np.searchsorted(days["day_ms"], knots["at_ms"], side="right") - 1
    return ChargeRecord(
        np.ascontiguousarray(knots["at_ms"]),
        np.ascontiguousarray(knots["amps"]),
        np.ascontiguousarray(knots["basis"]),
        days["before_c"][day] + knots["since_day_c"],
        days["estimated_before_c"][day] + knots["estimated_since_day_c"],
    )


def charges_at(
    session: Session, section_id: int, at_ms: Sequence[int]
) -> list[tuple[float, float]]:
    """Charge and its estimated part up to each of a few moments, C: two look-ups a moment."""
    answers = []
    for moment in at_ms:
        row = prefix_rows(session, section_id, moment)
        if row is None:
            answers.append((0.0, 0.0))
            continue
        knot_ms, amps, basis, charge_c, estimated_c = row
        step_c = float(_grained(amps * ((moment - knot_ms) / 1000)))
        answers.append((charge_c + step_c, estimated_c + (step_c if basis == ESTIMATED else 0.0)))
    return answers


@dataclass(frozen=True)
class PeriodCharge:
    """What went through a section and its cells over a period, C."""

    section_c: float
    estimated_c: float
    cell_c: Numbers
    """Per cell, in the order of their numbers; 0 for a cell that is not there."""
    cell_estimated_c: Numbers
    recorded_to_ms: int | None
    """Up to when current is recorded, where that is before the period's end."""

    @property
    def cells_c(self) -> float:
        """Summed over the cells in service."""
        return float(self.cell_c.sum())

    @property
    def estimated_share(self) -> float:
        """Part of the cells' charge that rests on gaps that were filled."""
        total_c = self.cells_c
        return float(self.cell_estimated_c.sum()) / total_c if total_c > 0 else 0.0


def period_charge(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> PeriodCharge:
    """Charge of a section and of each of its cells over a period.

    Each cell gets the section's charge while it is there, less what passed while it was
    bypassed. Costs a few look-ups, whatever the length of the period.
    """
    cells = len(section.cell_ids)
    edges = sorted(
        {from_ms, to_ms, *(t.from_ms for t in section.terms if from_ms < t.from_ms < to_ms)}
    )
    bypasses = [
        (section.number_of(cell_id) - 1, max(start, from_ms), min(end, to_ms))
        for cell_id, start, end in bypasses_of(session, section.cell_ids, from_ms, to_ms)
    ]
    moments = sorted({*edges, *(b[1] for b in bypasses), *(b[2] for b in bypasses)})
    at = dict(zip(moments, charges_at(session, section.id, moments), strict=True))
    cell_c, cell_estimated_c = np.zeros(cells), np.zeros(cells)
    for start, end in zip(edges, edges[1:], strict=False):
        there = section.terms_at(start).cells
        cell_c[:there] += at[end][0] - at[start][0]
        cell_estimated_c[:there] += at[end][1] - at[start][1]
    for place, start, end in bypasses:
        cell_c[place] -= at[end][0] - at[start][0]
        cell_estimated_c[place] -= at[end][1] - at[start][1]
    last = prefix_rows(session, section.id, to_ms - 1)
    is_open = last is not None and last[2] == UNRECORDED
    return PeriodCharge(
        section_c=at[to_ms][0] - at[from_ms][0],
        estimated_c=at[to_ms][1] - at[from_ms][1],
        cell_c=cell_c,
        cell_estimated_c=cell_estimated_c,
        recorded_to_ms=last[0] if last is not None and is_open else None,
    )


def rebuild_charge(
    session: Session, section_id: int, from_ms: int, to_ms: int, max_hold_ms: int
) -> tuple[int, int]:
    """Work the steps of current anew where samples between two moments changed.

    Answers the whole UTC days, [from, to), whose steps were written.
    """
    first_ms, last_ms = samples_beside(session, section_id, from_ms, to_ms)
    counter_first_ms, counter_last_ms = counters_beside(session, section_id, from_ms, to_ms)
    start_ms = min(from_ms, first_ms, counter_first_ms)
    end_ms = max(to_ms, last_ms + max_hold_ms + 1, counter_last_ms)
    day_from, day_to = utc_day_ms(start_ms), utc_day_ms(end_ms - 1) + DAY_MS
    # The days at either end need the samples and counters that reach into them.
    sample_first_ms, sample_last_ms = samples_beside(session, section_id, day_from, day_to)
    count_first_ms, count_last_ms = counters_beside(session, section_id, day_from, day_to)
    span = (min(sample_first_ms, count_first_ms), max(sample_last_ms, count_last_ms))
    inner = samples_beside(session, section_id, span[0], span[1])
    sample_ms, amps = samples_between(session, section_id, inner[0], inner[1] + 1)
    if not len(sample_ms):
        keep_knots(session, section_id, day_from, day_to, [])
        _keep_days(session, section_id, day_from, day_to, [])
        return day_from, day_to
    edge_ms, amps, basis = _stepped(session, section_id, sample_ms, amps, max_hold_ms)
    edge_ms, amps, basis = _counted(session, section_id, edge_ms, amps, basis)
    rows, totals = _days(edge_ms, amps, basis, day_from, day_to)
    keep_knots(session, section_id, day_from, day_to, rows)
    _keep_days(session, section_id, day_from, day_to, totals)
    return day_from, day_to


def _stepped(
    session: Session, section_id: int, sample_ms: Moments, amps: Numbers, max_hold_ms: int
) -> tuple[Moments, Numbers, NDArray[np.int64]]:
    """Samples held, gaps filled, outages at zero; whole milliseconds."""
    edge, amps, basis = held_current(sample_ms, amps, max_hold_ms)
    off = off_times(session, section_id, int(edge[0]), int(edge[-1]))
    edge, amps, basis = without_outages(edge, amps, basis, np.array(off, float).reshape(-1, 2))
    return edge.astype(np.int64), amps, basis


def _counted(
    session: Session,
    section_id: int,
    edge_ms: Moments,
    amps: Numbers,
    basis: NDArray[np.int64],
) -> tuple[Moments, Numbers, NDArray[np.int64]]:
    """The steps scaled so that between two readings of the counter they give its charge."""
    count_ms, count_c = counters_between(session, section_id, int(edge_ms[0]), int(edge_ms[-1]) + 1)
    if len(count_ms) < 2:
        return edge_ms, amps, basis
    new_ms = np.setdiff1d(count_ms, edge_ms)
    source = np.searchsorted(edge_ms, new_ms, side="right") - 1
    edge_ms = np.concatenate((edge_ms, new_ms))
    order = np.argsort(edge_ms, kind="stable")
    amps = np.concatenate((amps, amps[source]))[order]
    basis = np.concatenate((basis, basis[source]))[order]
    edge_ms = edge_ms[order]
    lasts_s = np.append(np.diff(edge_ms), 0) / 1000
    places = np.searchsorted(edge_ms, count_ms)
    sampled_c = np.add.reduceat(amps * lasts_s, places)[:-1]
    charge_c, _ = counter_charge_c(count_c[:-1], count_c[1:], sampled_c)
    for start, end, counted, sampled in zip(
        places[:-1], places[1:], charge_c, sampled_c, strict=True
    ):
        if np.isfinite(counted) and sampled > 0:
            amps[start:end] *= counted / sampled
            basis[start:end] = np.where(basis[start:end] == ESTIMATED, MEASURED, basis[start:end])
    return edge_ms, amps, basis


def _days(
    edge_ms: Moments, amps: Numbers, basis: NDArray[np.int64], day_from: int, day_to: int
) -> tuple[list[tuple[int, float, int, float, float]], list[tuple[int, float, float]]]:
    """Knots with the charge since their day began, and each day's totals.

    Every sum runs within one day in the order of time, so that it comes out the same to the
    last bit whichever stretch of days is worked out together.
    """
    first_day = max(day_from, utc_day_ms(int(edge_ms[0])))
    last_edge = int(edge_ms[-1])
    day_starts = np.arange(first_day, min(day_to, utc_day_ms(last_edge) + DAY_MS), DAY_MS)
    new_ms = np.setdiff1d(day_starts[day_starts > edge_ms[0]], edge_ms)
    source = np.searchsorted(edge_ms, new_ms, side="right") - 1
    all_ms = np.concatenate((edge_ms, new_ms))
    order = np.argsort(all_ms, kind="stable")
    all_ms = all_ms[order]
    amps = np.concatenate((amps, amps[source]))[order]
    basis = np.concatenate((basis, basis[source]))[order]
    ends_ms = np.append(all_ms[1:], all_ms[-1])
    # The last step of a day ends with the day.
    ends_ms = np.minimum(ends_ms, all_ms // DAY_MS * DAY_MS + DAY_MS)
    step_c = amps * ((ends_ms - all_ms) / 1000)
    guess_c = np.where(basis == ESTIMATED, step_c, 0.0)
    rows: list[tuple[int, float, int, float, float]] = []
    totals: list[tuple[int, float, float]] = []
    bounds = np.searchsorted(all_ms, np.append(day_starts, day_starts[-1:] + DAY_MS))
    for day, start, end in zip(day_starts.tolist(), bounds[:-1], bounds[1:], strict=True):
        since = _grained(np.concatenate(([0.0], np.cumsum(step_c[start:end]))))
        guessed = _grained(np.concatenate(([0.0], np.cumsum(guess_c[start:end]))))
        rows.extend(
            zip(
                all_ms[start:end].tolist(),
                amps[start:end].tolist(),
                basis[start:end].tolist(),
                since[:-1].tolist(),
                guessed[:-1].tolist(),
                strict=True,
            )
        )
        totals.append((day, float(since[-1]), float(guessed[-1])))
    return rows, totals


def _keep_days(
    session: Session,
    section_id: int,
    day_from: int,
    day_to: int,
    totals: list[tuple[int, float, float]],
) -> None:
    """Write the days' totals and carry the running charge on through all later days."""
    before_c, estimated_c, later = later_day_totals(session, section_id, day_from, day_to)
    days = [*totals, *later]
    rows = []
    for day, total, guessed in days:
        rows.append((day, total, guessed, before_c, estimated_c))
        before_c += total
        estimated_c += guessed
    keep_charge_days(session, section_id, day_from, rows)
