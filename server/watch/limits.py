"""The first watch: cells whose reading, at rated current, lies outside the section's limits.

A flag is raised at the reading that is outside and ends at the second reading in a row, not more
than a week apart, that is inside again. A reading that is not believed raises a flag of its own,
which ends at the cell's next believed reading. A missing reading ends nothing.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from server.science.faraday import deposited_kg
from server.science.processes import process
from server.science.statistics.spread import median, robust_sd
from server.storage.flags import Flag
from server.storage.plant import SectionPlan
from server.storage.readings import Series
from server.watch.resistance import relative_u_resistance, resistance_ohm

_NEIGHBOURS_MS = 12 * 3_600_000
"""How far back the section's other cells say what a healthy one reads."""

_ENOUGH_NEIGHBOURS = 3

_IN_A_ROW_MS = 7 * 86_400_000

SHORT, HIGH, SUSPECT = "short", "drift high", "suspect reading"


@dataclass(frozen=True)
class Watched:
    """Readings of a section under load: as read, and referred to rated current."""

    series: Series
    referred_v: NDArray[np.float64]
    amps: NDArray[np.float64]
    """The section's current then; rated current where none is recorded."""

    def within(self, from_ms: int, to_ms: int) -> "Watched":
        """The readings with from_ms <= at < to_ms."""
        keep = (self.series.at_ms >= from_ms) & (self.series.at_ms < to_ms)
        return Watched(self.series.where(keep), self.referred_v[keep], self.amps[keep])


@dataclass(frozen=True)
class _Event:
    at_ms: int
    cell_id: int
    place: int
    """Index into the watched readings, or -1 for one that is not believed."""
    verdict: str
    """inside, low, high or suspect."""
    doubt: int
    """Index into the doubted readings, or -1."""


def replay(
    section: SectionPlan,
    watched: Watched,
    doubted: Series,
    reasons: Mapping[tuple[int, int], str],
    open_flags: Sequence[Flag],
    from_ms: int,
    to_ms: int,
) -> tuple[list[Flag], dict[tuple[int, str, int], int]]:
    """Flags raised in [from_ms, to_ms), and when flags that were open before ended in it.

    `open_flags` are those open at `from_ms`; the readings may reach further back, and say only
    whether the one before was inside. The second answer maps (cell, kind, raised) to its end.
    """
    low, high, _ = _limits(section, watched.series.at_ms)
    is_low, is_high = watched.referred_v < low, watched.referred_v > high
    has_doubt = set(doubted.cell_id.tolist())
    concerned = set(watched.series.cell_id[is_low | is_high].tolist()) | has_doubt
    concerned |= {flag.cell_id for flag in open_flags}
    events = _events(watched, doubted, is_low, is_high, concerned)
    alive: dict[tuple[int, str], Flag] = {(f.cell_id, f.kind): f for f in open_flags}
    before: dict[int, tuple[int, bool]] = {}
    raised: list[Flag] = []
    ended: dict[tuple[int, str, int], int] = {}

    def end(cell_id: int, kind: str, at_ms: int) -> None:
        flag = alive.pop((cell_id, kind), None)
        if flag is None:
            return
        if flag.raised_ms >= from_ms:
            flag.ended_ms = at_ms
        else:
            ended[(cell_id, kind, flag.raised_ms)] = at_ms

    for event in events:
        if event.at_ms >= to_ms:
            break
        is_new = event.at_ms >= from_ms
        cell_id = event.cell_id
        if event.verdict == "suspect":
            if is_new and (cell_id, SUSPECT) not in alive:
                reason = reasons.get((cell_id, event.at_ms), "The reading is not believed.")
                flag = _suspect_flag(section, doubted, event, reason)
                alive[(cell_id, SUSPECT)] = flag
                raised.append(flag)
            continue
        is_inside = event.verdict == "inside"
        if is_new:
            end(cell_id, SUSPECT, event.at_ms)
            last = before.get(cell_id)
            was_inside = last is not None and last[1] and event.at_ms - last[0] <= _IN_A_ROW_MS
            if is_inside and was_inside:
                end(cell_id, SHORT, event.at_ms)
                end(cell_id, HIGH, event.at_ms)
            elif not is_inside:
                kind, other = (SHORT, HIGH) if event.verdict == "low" else (HIGH, SHORT)
                end(cell_id, other, event.at_ms)
                if (cell_id, kind) not in alive:
                    flag = _limit_flag(section, watched, event.place, kind)
                    alive[(cell_id, kind)] = flag
                    raised.append(flag)
        before[cell_id] = (event.at_ms, is_inside)
    return raised, ended


def _limits(
    section: SectionPlan, at_ms: NDArray[np.int64]
) -> tuple[NDArray[np.float64], NDArray[np.float64], NDArray[np.int64]]:
    """Lower and upper limit that hold at each moment, and the place of their terms."""
    starts = np.array([t.from_ms for t in section.terms])
    place = np.maximum(np.searchsorted(starts, at_ms, side="right") - 1, 0)
    low = np.array([t.low_volts for t in section.terms])[place]
    high = np.array([t.high_volts for t in section.terms])[place]
    return low, high, place


def _events(
    watched: Watched,
    doubted: Series,
    is_low: NDArray[np.bool_],
    is_high: NDArray[np.bool_],
    concerned: set[int],
) -> list[_Event]:
    """The readings of the cells that need a closer look, in the order of time and cell."""
    cells = np.array(sorted(concerned), np.int64)
    series = watched.series
    events = []
    for place in np.flatnonzero(np.isin(series.cell_id, cells)).tolist():
        verdict = "low" if is_low[place] else "high" if is_high[place] else "inside"
        events.append(
            _Event(int(series.at_ms[place]), int(series.cell_id[place]), place, verdict, -1)
        )
    events.extend(
        _Event(int(doubted.at_ms[place]), int(doubted.cell_id[place]), -1, "suspect", place)
        for place in range(len(doubted))
    )
    events.sort(key=lambda e: (e.at_ms, e.cell_id))
    return events


def _suspect_flag(section: SectionPlan, doubted: Series, event: _Event, reason: str) -> Flag:
    return Flag(
        cell_id=event.cell_id,
        kind=SUSPECT,
        raised_ms=event.at_ms,
        section_id=section.id,
        tier="look",
        ended_ms=None,
        raised_by_ms=event.at_ms,
        volts=float(doubted.volts[event.doubt]),
        evidence=reason,
    )


def _limit_flag(section: SectionPlan, watched: Watched, place: int, kind: str) -> Flag:
    """A flag for a reading outside the limits, with what its neighbours say of it."""
    series = watched.series
    at_ms, cell_id = int(series.at_ms[place]), int(series.cell_id[place])
    terms = section.terms_at(at_ms)
    volts, referred = float(series.volts[place]), float(watched.referred_v[place])
    near = (
        (series.at_ms > at_ms - _NEIGHBOURS_MS)
        & (series.at_ms <= at_ms)
        & (series.cell_id != cell_id)
    )
    others = watched.referred_v[near]
    centre = (terms.low_volts + terms.high_volts) / 2
    spread = (terms.high_volts - terms.low_volts) / 4
    if others.size >= _ENOUGH_NEIGHBOURS:
        centre, spread = float(median(others)), float(robust_sd(others))
    deviation = referred - centre
    limit = terms.low_volts if kind == SHORT else terms.high_volts
    side = "under the lower" if kind == SHORT else "over the upper"
    evidence = (
        f"{referred:.3f} V at rated current is {side} limit of {limit:.3f} V and"
        f" {abs(deviation) * 1000:.0f} mV {'below' if deviation < 0 else 'above'} what the"
        f" section's other cells read."
    )
    short = u_short = lost_kg = lost_value = None
    if kind == SHORT:
        resistance = resistance_ohm(section, terms)
        short = min(max(-deviation / resistance, 0.0), float(watched.amps[place]))
        relative = relative_u_resistance(section, terms)
        u_short = float(np.hypot(spread / resistance, short * relative))
        metal = process(section.process, section.metal, section.electrons).metal
        lost_kg = float(deposited_kg(short * 86_400, metal)) * terms.target_current_efficiency
        lost_value = lost_kg * terms.metal_value_per_kg
        evidence += (
            f" If it is a short, about {short / 1000:.1f} kA pass there and"
            f" {lost_kg:.0f} kg of metal a day are not made."
        )
    else:
        evidence += " Contacts first, then anodes."
    return Flag(
        cell_id=cell_id,
        kind=kind,
        raised_ms=at_ms,
        section_id=section.id,
        tier="look",
        ended_ms=None,
        raised_by_ms=at_ms,
        volts=volts,
        expected_volts=volts - deviation,
        deviation_v=deviation,
        short_amps=short,
        u_short_amps=u_short,
        lost_kg_per_day=lost_kg,
        lost_value_per_day=lost_value,
        evidence=evidence,
    )
