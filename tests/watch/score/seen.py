"""What was seen, how soon, and what was called out for nothing."""

from collections.abc import Iterator, Sequence
from itertools import pairwise

import numpy as np

from tests.watch.plants.plant import Drift, Moments, Plant
from tests.watch.plants.scenario import DAY_MS, HOUR_MS
from tests.watch.score.charts import has_cause
from tests.watch.score.watched import CLAIMS, SECTION, Case, Flag

SHIFT_CELLS = 1_500
LARGE_STEP = 6.0
"""Standard deviations of a reading."""
BEFORE_A_STEP = 10
"""Readings of the cell that went before, so that there is something to step from."""
DRIFT_DAYS = 12


def flagged_share(cases: Sequence[Case]) -> float:
    """Share of all ampere-hours through shorts that passed while a flag of a short stood.

    Either tier counts; a stretch under two flags counts once.
    """
    total = sum(case.plant.total_short_ah for case in cases)
    return sum(_flagged_ah(case) for case in cases) / total if total else float("nan")


def _flagged_ah(case: Case) -> float:
    spans: dict[int, list[tuple[int, int]]] = {}
    for flag in case.of_shorts:
        end_ms = case.plant.end_ms if flag.ended_ms is None else flag.ended_ms
        spans.setdefault(flag.cell, []).append((flag.raised_ms, end_ms))
    flagged = 0.0
    for cell, of_cell in spans.items():
        done_ms = 0
        for begin_ms, end_ms in sorted(of_cell):
            flagged += case.plant.short_ah(cell, max(begin_ms, done_ms), max(end_ms, done_ms))
            done_ms = max(done_ms, end_ms)
    return flagged


def false_flags(case: Case) -> list[Flag]:
    """Flags of a cell raised at a reading at which it had nothing of the kind.

    A short is false where there is none and the gap has not narrowed; a drift where none of its
    sense has begun or the cell has not come back from it. A drift down is true of a short too. What
    is said of readings (suspect, missing) and of the whole section is not counted.
    """
    lowered = has_cause(case.plant)
    return [
        flag
        for flag in case.watched.flags
        if flag.kind in CLAIMS and flag.cell != SECTION and not _is_true(case, flag, lowered)
    ]


def _is_true(
    case: Case, flag: Flag, lowered: np.ndarray[tuple[int, int], np.dtype[np.bool_]]
) -> bool:
    plant = case.plant
    if flag.kind == "drift high":
        return plant.drifts_at(flag.cell, flag.raised_ms, 1)
    number = int(np.searchsorted(plant.at_ms[:, flag.cell - 1], flag.raised_ms))
    return number < len(lowered) and bool(lowered[number, flag.cell - 1])


def false_per_thousand(cases: Sequence[Case], kinds: Sequence[str] = CLAIMS) -> float:
    """Flags raised falsely for each 1,000 readings."""
    readings = sum(int(case.plant.is_read.sum()) for case in cases)
    count = sum(flag.kind in kinds for case in cases for flag in false_flags(case))
    return 1000.0 * count / readings


def steps_seen(cases: Sequence[Case]) -> tuple[float, float, int]:
    """Share of large steps flagged at their first reading, by their second, and how many.

    A step is a sudden short in a cell that had none at its reading before, which is read at least
    six standard deviations of a reading under what is healthy; the cell was read ten times before.
    For the second reading count those that are still there.
    """
    first, second = [], []
    for case in cases:
        for readings, column in _steps(case.plant):
            seen = case.is_flagged[readings, column]
            first.append(bool(seen[0]))
            if len(seen) > 1:
                second.append(bool(seen.any()))
    return _mean(first), _mean(second), len(first)


def _steps(plant: Plant) -> Iterator[tuple[Moments, int]]:
    """The first two readings of each large step, and its cell's column."""
    is_used = plant.is_read & plant.is_loaded
    away = (plant.healthy_v - plant.true_v) / plant.reading_noise_v
    for short in plant.shorts:
        column = short.cell - 1
        of_cell = np.flatnonzero(is_used[:, column])
        at_ms = plant.at_ms[of_cell, column]
        start = int(np.searchsorted(at_ms, short.from_ms))
        readings = of_cell[start : start + 2]
        readings = readings[plant.at_ms[readings, column] < short.to_ms]
        if not short.is_sudden or start < BEFORE_A_STEP or not readings.size:
            continue
        was_shorted = plant.has_short[of_cell[start - 1], column]
        if not was_shorted and (away[readings, column] >= LARGE_STEP).all():
            yield readings, column


def drifts_seen(cases: Sequence[Case]) -> tuple[float, int]:
    """Share of drifts of one standard deviation a week that are flagged within twelve days.

    A drift up has to be flagged as one; a drift down as one, or as a short, which also lowers the
    voltage. Only drifts that last so long.
    """
    seen = [
        _is_seen(case, drift)
        for case in cases
        for drift in case.plant.drifts
        if drift.sigma_a_week == 1.0 and drift.to_ms - drift.from_ms >= DRIFT_DAYS * DAY_MS
    ]
    return _mean(seen), len(seen)


def _is_seen(case: Case, drift: Drift) -> bool:
    until_ms = drift.from_ms + DRIFT_DAYS * DAY_MS
    kinds = ("drift high",) if drift.sense > 0 else ("drift low", "short")
    return any(
        flag.cell == drift.cell
        and flag.kind in kinds
        and flag.raised_ms < until_ms
        and (flag.ended_ms is None or flag.ended_ms > drift.from_ms)
        for flag in case.watched.flags
    )


def act_per_shift(cases: Sequence[Case]) -> float:
    """Flags that say to act, in quiet plants, for each shift of eight hours of 1,500 cells."""
    quiet = [case for case in cases if case.plant.scenario.is_quiet]
    shifts = sum(c.plant.cells * c.plant.scenario.days * 3 / SHIFT_CELLS for c in quiet)
    count = sum(f.tier == "act" and f.kind in CLAIMS for c in quiet for f in c.watched.flags)
    return count / shifts if shifts else float("nan")


def run_length(cases: Sequence[Case], kinds: Sequence[str] = CLAIMS) -> float:
    """Readings of quiet plants for each flag of a cell: the run length without a fault."""
    quiet = [case for case in cases if case.plant.scenario.is_quiet]
    readings = sum(int(case.plant.is_read.sum()) for case in quiet)
    count = sum(f.kind in kinds and f.cell != SECTION for c in quiet for f in c.watched.flags)
    return readings / count if count else float("inf")


def flags_after_events(cases: Sequence[Case]) -> tuple[int, float, int]:
    """False flags after a trip, a new set-point or a new meter: most, mean, and how many events.

    Counted are those of cells and of the section raised in the two rounds from the event on.
    """
    counts = []
    for case in cases:
        starts_ms, ends_ms = case.plant.at_ms.min(axis=1), case.plant.at_ms.max(axis=1)
        of_section = [flag for flag in case.watched.flags if flag.cell == SECTION]
        flags = [*false_flags(case), *of_section]
        for event in case.plant.events:
            number = int(np.searchsorted(ends_ms, event.at_ms))
            if number + 1 >= len(starts_ms):
                continue
            until_ms = ends_ms[number + 1]
            counts.append(sum(event.at_ms <= flag.raised_ms <= until_ms for flag in flags))
    return max(counts, default=0), float(np.mean(counts)) if counts else 0.0, len(counts)


def chatter(cases: Sequence[Case]) -> int:
    """Flags raised within three rounds of the end of one of their cell and kind.

    Not counted are those on other cathodes than the former: a pull parts them.
    """
    again = 0
    for case in cases:
        gap_ms = 3 * DAY_MS // case.plant.scenario.pen.rounds_a_day + HOUR_MS
        for before, after in pairwise(
            sorted(case.watched.flags, key=lambda f: (f.cell, f.kind, f.raised_ms))
        ):
            if (before.cell, before.kind) != (after.cell, after.kind) or before.ended_ms is None:
                continue
            if after.kind in CLAIMS and 0 <= after.raised_ms - before.ended_ms <= gap_ms:
                again += not _is_pulled(case.plant, after.cell, before.ended_ms, after.raised_ms)
    return again


def _is_pulled(plant: Plant, cell: int, from_ms: int, to_ms: int) -> bool:
    return any(cell in p.cells and from_ms <= p.pulled_ms <= to_ms for p in plant.pulls)


def _mean(seen: Sequence[bool]) -> float:
    return float(np.mean(seen)) if seen else float("nan")
