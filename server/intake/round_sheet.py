"""What whoever walks a round has before them: each cell, its last reading, its usual range."""

from dataclasses import dataclass
from itertools import groupby

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.intake.cells import parse_cells
from server.intake.history import REACH_MS, Readings
from server.intake.yardstick import IDLE_SHARE, Currents, is_working, yardstick
from server.science.statistics.spread import median, robust_sd
from server.storage.current import effective_outages, samples_beside, samples_between
from server.storage.latest import latest
from server.storage.plant import SectionPlan, SectionTerms
from server.storage.readings_before import last_believed
from server.storage.walk import walking_order

Numbers = NDArray[np.float64]
Whole = NDArray[np.int64]

USUAL_SDS = 3.0
"""The usual range reaches this many standard deviations either way: 997 of 1,000 readings."""

_LAST_READINGS = 12
"""Four days of three rounds: a cell's own level, before its deposit has changed it much."""

_LEAST_FOR_A_LEVEL = 3
_LEAST_FOR_OWN_NOISE = 8
"""With fewer readings of a cell the section's noise is taken for its own."""


@dataclass(frozen=True, slots=True)
class RoundCell:
    """One cell as the round meets it."""

    number: int
    row: int
    last_volts: float | None
    last_ms: int | None
    low_volts: float | None
    """Lower end of the usual range; None where too little is known."""
    high_volts: float | None
    bypassed_since_ms: int | None
    """None where it is in service."""


@dataclass(frozen=True, slots=True)
class RoundSheet:
    """A section as the round meets it."""

    section: str
    at_ms: int
    stretches: tuple[tuple[RoundCell, ...], ...]
    """The cells in walking order, row by row."""
    last_amps: float | None
    last_amps_ms: int | None
    off_since_ms: int | None
    """None where the section runs."""
    low_volts: float
    """The section's limits of a cell voltage."""
    high_volts: float

    @property
    def cells(self) -> tuple[RoundCell, ...]:
        """Every cell, in walking order."""
        return tuple(cell for stretch in self.stretches for cell in stretch)


def round_sheet(session: Session, plan: SectionPlan, at_ms: int, max_hold_ms: int) -> RoundSheet:
    """What is known of a section at a moment, for a round that is walked then."""
    terms = plan.terms_at(at_ms)
    order = walking_order(terms)
    off_since_ms, bypassed = _out_of_service(session, plan, terms, at_ms)
    newest = latest(session, plan.cell_ids)
    usual = _usual_ranges(session, plan, terms.cells, at_ms, max_hold_ms)
    length = -(-terms.cells // terms.rows)
    cells = []
    for number in order:
        read_ms, volts = newest.get(plan.cell_id(number), (None, None))
        low_volts, high_volts = usual.get(number, (None, None))
        cells.append(
            RoundCell(
                number=number,
                row=(number - 1) // length + 1,
                last_volts=volts,
                last_ms=read_ms,
                low_volts=low_volts,
                high_volts=high_volts,
                bypassed_since_ms=bypassed.get(number),
            )
        )
    last_ms, _ = samples_beside(session, plan.id, at_ms + 1, at_ms + 1)
    sampled_ms, amps = samples_between(session, plan.id, last_ms, at_ms + 1)
    return RoundSheet(
        section=plan.name,
        at_ms=at_ms,
        stretches=tuple(tuple(cells) for _, cells in groupby(cells, key=lambda cell: cell.row)),
        last_amps=float(amps[-1]) if len(amps) else None,
        last_amps_ms=int(sampled_ms[-1]) if len(amps) else None,
        off_since_ms=off_since_ms,
        low_volts=terms.low_volts,
        high_volts=terms.high_volts,
    )


def _out_of_service(
    session: Session, plan: SectionPlan, terms: SectionTerms, at_ms: int
) -> tuple[int | None, dict[int, int]]:
    """Since when the section is off, and since when each cell that is bypassed, by number."""
    off_since_ms: int | None = None
    bypassed: dict[int, int] = {}
    for cells, from_ms, _to_ms, _state in effective_outages(session, plan.id, at_ms, at_ms + 1):
        if not cells:
            off_since_ms = from_ms if off_since_ms is None else min(from_ms, off_since_ms)
            continue
        for number in parse_cells(cells):
            if number <= terms.cells:
                bypassed[number] = min(from_ms, bypassed.get(number, from_ms))
    return off_since_ms, bypassed


def _usual_ranges(
    session: Session, plan: SectionPlan, cells: int, at_ms: int, max_hold_ms: int
) -> dict[int, tuple[float, float]]:
    """Lowest and highest voltage that each cell usually shows at the current of the moment."""
    currents = Currents(max_hold_ms)
    now = yardstick(plan, np.array([at_ms]))
    amps_now = currents.amps(session, plan, np.array([at_ms]))
    if amps_now[0] < IDLE_SHARE * now.rated_amps[0]:
        return {}
    shift_now = now.resistance_ohm * np.where(np.isnan(amps_now), now.rated_amps, amps_now)
    levels = _levels(session, plan, cells, at_ms, Currents(max_hold_ms))
    centre = median(levels, axis=1)
    count = np.isfinite(levels).sum(axis=1)
    own = robust_sd(levels, axis=1)
    of_section = robust_sd((levels - centre[:, None]).ravel())
    noise = np.where(count >= _LEAST_FOR_OWN_NOISE, own, of_section)
    reach = USUAL_SDS * np.maximum(noise, now.meter_u_v)
    low, high = centre + shift_now - reach, centre + shift_now + reach
    return {
        place + 1: (float(low[place]), float(high[place]))
        for place in np.flatnonzero(count >= _LEAST_FOR_A_LEVEL).tolist()
    }


def _levels(
    session: Session, plan: SectionPlan, cells: int, at_ms: int, currents: Currents
) -> Numbers:
    """The last readings of each cell less what the current made of them; NaN where there is none.

    One row a cell; readings of a cell that did not carry its working current are left out.
    """
    wanted = [(cell_id, at_ms) for cell_id in plan.cell_ids[:cells]]
    cell_id, read_ms, microvolts = last_believed(session, wanted, REACH_MS, _LAST_READINGS)
    levels = np.full((cells, _LAST_READINGS), np.nan)
    if not len(cell_id):
        return levels
    number = np.searchsorted(np.array(plan.cell_ids), cell_id) + 1
    readings = Readings(number, read_ms, microvolts / 1e6, np.zeros(len(number), bool))
    terms = yardstick(plan, read_ms)
    amps = currents.amps(session, plan, read_ms)
    shift_v = terms.resistance_ohm * np.where(np.isnan(amps), terms.rated_amps, amps)
    working = is_working(session, plan, readings, amps, terms.rated_amps)
    first = np.append(True, np.diff(number) != 0)
    place = np.arange(len(number)) - np.maximum.accumulate(
        np.where(first, np.arange(len(number)), 0)
    )
    levels[number - 1, place] = np.where(working, readings.volts - shift_v, np.nan)
    return levels
