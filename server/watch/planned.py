"""Cells whose anodes or contacts deserve a planned stop, with what the repair should bring."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.flag_spans import FlagSpan, flag_spans
from server.storage.plant import House, SectionPlan
from server.storage.summaries import energy_cells
from server.watch.flags import flags_between
from server.watch.life import DAY_MS
from server.watch.record import LATELY_MS, OFTEN
from server.watch.worklist import WorkItem

KIND = "drift high"

STANDS_MS = 7 * DAY_MS
"""A drift high that is open for longer does not go away by itself."""

MONTH_DAYS = 30


@dataclass(frozen=True)
class PlannedStop:
    """A cell that reads high for long or again and again; SI units."""

    section: str
    cell: int
    flags: int
    """Drifts high that were raised in the last 90 days."""
    since_ms: int | None
    """Since when one is open; None where none is."""
    last_ms: int
    """When the last one was raised."""
    deviation_v: float | None
    """By how much the cell reads high: now, or when the last flag was raised."""
    gain_j_per_month: float | None
    """That voltage times the charge of a month; None where either is not known.

    Where no flag is open, only for the share of the 90 days in which one was.
    """
    gain_kg_per_month: float | None
    """Metal that a short in the same cell keeps from being made; None where there is none."""


def planned_stops(
    session: Session, house: House, items: Sequence[WorkItem], at_ms: int
) -> list[PlannedStop]:
    """Cells that deserve a planned stop, the one that gains most energy first.

    `items` is the work list of that moment. A cell is listed where a drift high is open for more
    than a week, or was raised three times in 90 days.
    """
    spans = _drifts(session, house, at_ms)
    is_open = {(item.flag.section, item.flag.cell): item for item in items if _is_drift(item)}
    shorts = {
        (item.flag.section, item.flag.cell): item for item in items if item.flag.kind == "short"
    }
    cells = [cell for cell, drifts in spans.items() if len(drifts) >= OFTEN]
    cells += [
        cell
        for cell, item in is_open.items()
        if item.flag.raised_ms < at_ms - STANDS_MS and cell not in cells
    ]
    told = _told(session, house, [cell for cell in cells if cell not in is_open], at_ms)
    charge = {
        name: _monthly_charge(session, house.section(name), at_ms)
        for name in sorted({name for name, _ in cells})
    }
    found = []
    for name, number in cells:
        item, short = is_open.get((name, number)), shorts.get((name, number))
        drifts = spans.get((name, number), [])
        volts = item.newest.deviation_v if item else told.get((name, number))
        charge_c = charge[name].get(number)
        share = 1.0 if item else _share_flagged(drifts, at_ms)
        lost_kg = short.newest.lost_kg_per_day if short else None
        raised = [drift.raised_ms for drift in drifts] + ([item.flag.raised_ms] if item else [])
        found.append(
            PlannedStop(
                name,
                number,
                len(drifts),
                item.flag.raised_ms if item else None,
                max(raised),
                volts,
                None if volts is None or charge_c is None else max(volts, 0.0) * charge_c * share,
                None if lost_kg is None else lost_kg * MONTH_DAYS,
            )
        )
    return sorted(found, key=lambda one: (-(one.gain_j_per_month or 0.0), one.section, one.cell))


def _is_drift(item: WorkItem) -> bool:
    return item.flag.kind == KIND


def _drifts(session: Session, house: House, at_ms: int) -> dict[tuple[str, int], list[FlagSpan]]:
    """Drifts high that were raised lately, by section and cell, by time."""
    found: dict[tuple[str, int], list[FlagSpan]] = {}
    for span in flag_spans(session, at_ms - LATELY_MS, at_ms + 1):
        if span.kind == KIND and span.raised_ms >= at_ms - LATELY_MS:
            section = house.section_of_id(span.section_id)
            found.setdefault((section.name, section.number_of(span.cell_id)), []).append(span)
    return found


def _told(
    session: Session, house: House, cells: Sequence[tuple[str, int]], at_ms: int
) -> Mapping[tuple[str, int], float | None]:
    """By how much each of these cells read high when its last flag was raised."""
    return {
        (flag.section, flag.cell): flag.deviation_v
        for name in sorted({name for name, _ in cells})
        for flag in flags_between(session, house, at_ms - LATELY_MS, at_ms + 1, name)
        if flag.kind == KIND and (name, flag.cell) in cells
    }


def _share_flagged(drifts: Sequence[FlagSpan], at_ms: int) -> float:
    ends = ((drift, at_ms if drift.ended_ms is None else drift.ended_ms) for drift in drifts)
    return sum(min(end_ms, at_ms) - drift.raised_ms for drift, end_ms in ends) / LATELY_MS


def _monthly_charge(session: Session, section: SectionPlan, at_ms: int) -> dict[int, float]:
    """Charge of each cell in a month like the last one, C: by the whole days that are recorded."""
    today_ms = at_ms // DAY_MS * DAY_MS
    days = energy_cells(session, section.id, today_ms - MONTH_DAYS * DAY_MS, today_ms)
    found: dict[int, float] = {}
    for _, of_day in days:
        for number, charge_c in enumerate(of_day[:, 0].tolist(), start=1):
            found[number] = found.get(number, 0.0) + charge_c * MONTH_DAYS / len(days)
    return found
