"""How right the stated currents are, and the order of the work list."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from tests.watch.plants.plant import Moments, Numbers, Plant
from tests.watch.plants.scenario import DAY_MS, HOUR_MS, START_MS
from tests.watch.score.watched import CLAIMS, SECTION, Case

COVERS = 1.959964
"""Half of a 95 % interval in standard uncertainties."""

FIRST = 10
"""Items of a work list that are looked at for precision."""


def current_error(cases: Sequence[Case]) -> float:
    """Median of |stated / true - 1| of the short current, at flagged readings with a short."""
    stated, true, _ = _flagged(cases)
    return float(np.median(np.abs(stated / true - 1.0))) if true.size else float("nan")


def coverage(cases: Sequence[Case]) -> float:
    """Share of flagged readings with a short whose stated 95 % interval holds the true current."""
    stated, true, u = _flagged(cases)
    return float(np.mean(np.abs(stated - true) <= COVERS * u)) if true.size else float("nan")


def _flagged(cases: Sequence[Case]) -> tuple[Numbers, Numbers, Numbers]:
    parts: list[list[Numbers]] = [[], [], []]
    for case in cases:
        plant, watched = case.plant, case.watched
        use = case.is_flagged & plant.has_short & np.isfinite(watched.given_amps)
        for part, values in zip(
            parts,
            (watched.given_amps, plant.short_at_reading_amps, watched.u_given_amps),
            strict=True,
        ):
            part.append(values[use])
    stated, true, u = (np.concatenate(part) if part else np.zeros(0) for part in parts)
    return stated, true, u


def section_error(case: Case) -> float:
    """Relative error of all short ampere-hours of a section over the record.

    Between two readings of the same cathodes the expected current runs straight; before a pull
    the last one holds, after it there is none until the first reading.
    """
    return stated_ah(case) / case.plant.total_short_ah - 1.0


def stated_ah(case: Case) -> float:
    """Ampere-hours that the expected short currents of all readings add up to."""
    plant, amps = case.plant, case.watched.short_amps
    total = 0.0
    for column in range(plant.cells):
        use = np.isfinite(amps[:, column])
        at_ms, stated = plant.at_ms[use, column], amps[use, column]
        crop_of, hung_ms = plant.crop_of[use, column], plant.hung_ms[use, column]
        is_same = crop_of[1:] == crop_of[:-1]
        same = 0.5 * (stated[1:] + stated[:-1]) * (at_ms[1:] - at_ms[:-1])
        until_pull = stated[:-1] * np.maximum(hung_ms[1:] - at_ms[:-1], 0)
        total += float(np.where(is_same, same, until_pull).sum())
        if at_ms.size:
            total += float(stated[0] * (at_ms[0] - START_MS) * (hung_ms[0] <= START_MS))
            total += float(stated[-1] * (plant.end_ms - at_ms[-1]))
    return total / HOUR_MS


def sections_within(cases: Sequence[Case], error: float = 0.2) -> tuple[float, float]:
    """Share of sections whose short ampere-hours are within an error, and the median error.

    Of sections with shorts that were watched for thirty days or more. Those with drifts are left
    out: a gap that narrows by and by cannot be told from a short, whatever one is told.
    """
    errors = np.array(
        [
            abs(section_error(case))
            for case in cases
            if case.plant.shorts and not case.plant.drifts and case.plant.scenario.days >= 30
        ]
    )
    if not errors.size:
        return float("nan"), float("nan")
    return float(np.mean(errors <= error)), float(np.median(errors))


@dataclass(frozen=True)
class _Item:
    case: int
    cell: int
    kind: str
    tier: str
    amps: float


def work_list(cases: Sequence[Case]) -> tuple[float, float]:
    """Mean precision among the first ten, and mean NDCG among the first twenty, day by day.

    The sections of a process and seed stand for a house, which looks at its open flags at noon: to
    act first, then by stated current. Right is an item whose cell has what the flag says. The gain
    of an item is the true short current of its cell, discounted by 1 / log2(1 + rank), over that
    of the best order of the same items; what is not on the list is another measure's matter. Days
    with fewer than ten shorts are left out: no list could be right ten times.
    """
    precisions, gains = [], []
    seeds = sorted({case.plant.seed for case in cases})
    for seed in seeds:
        house = [case for case in cases if case.plant.seed == seed]
        days = max(case.plant.scenario.days for case in house)
        for day in range(3, days):
            at_ms = START_MS + day * DAY_MS + DAY_MS // 2
            there = [case for case in house if at_ms < case.plant.end_ms]
            truth = {
                (number, cell + 1): float(amps)
                for number, case in enumerate(there)
                for cell, amps in enumerate(_true_amps(case.plant, at_ms))
                if amps > 0.0
            }
            items = _items(there, at_ms)
            if len(truth) < FIRST or not items:
                continue
            right = [
                (item.case, item.cell) in truth
                or there[item.case].plant.drifts_at(
                    item.cell, at_ms, 1 if item.kind == "drift high" else -1
                )
                for item in items[:FIRST]
            ]
            precisions.append(float(np.mean(right)))
            found = [truth.get((item.case, item.cell), 0.0) for item in items[:20]]
            of_all = [truth.get((item.case, item.cell), 0.0) for item in items]
            best = sorted(of_all, reverse=True)[:20]
            gains.append(_discounted(found) / _discounted(best) if best[0] > 0.0 else 0.0)
    if not gains:
        return float("nan"), float("nan")
    return float(np.mean(precisions)), float(np.mean(gains))


def _items(cases: Sequence[Case], at_ms: int) -> list[_Item]:
    items = []
    for number, case in enumerate(cases):
        now = _last_stated(case, at_ms)
        for flag in case.watched.flags:
            if flag.kind in CLAIMS and flag.cell != SECTION and flag.is_open(at_ms):
                amps = float(now[flag.cell - 1]) if flag.kind == "short" else 0.0
                items.append(_Item(number, flag.cell, flag.kind, flag.tier, amps))
    items.sort(key=lambda item: (item.tier != "act", -item.amps))
    return items


def _last_stated(case: Case, at_ms: int) -> Numbers:
    """The current stated at each cell's last reading before a moment."""
    given: Numbers = case.watched.given_amps
    known: Moments = np.where(
        np.isfinite(given) & (case.plant.at_ms <= at_ms), np.arange(len(given))[:, None], -1
    )
    last = known.max(axis=0)
    return np.where(last >= 0, given[np.maximum(last, 0), np.arange(given.shape[1])], 0.0)


def _true_amps(plant: Plant, at_ms: int) -> Numbers:
    step = (at_ms - START_MS) * len(plant.short_amps) // (plant.end_ms - START_MS)
    return np.asarray(plant.short_amps[step], float)


def _discounted(gains: Sequence[float]) -> float:
    ranks = np.arange(len(gains)) + 1
    return float((np.array(gains) / np.log2(1.0 + ranks)).sum())
