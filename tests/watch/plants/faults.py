"""Shorts and drifts: where, from when, how large, and what ended them."""

from dataclasses import dataclass, replace

import numpy as np

from tests.watch.plants.cathodes import Hung
from tests.watch.plants.plant import Drift, Find, Numbers, Short
from tests.watch.plants.scenario import (
    HOUR_MS,
    START_MS,
    STEP_MS,
    STEPS_A_DAY,
    Drifts,
    Scenario,
)

LEAST_SHARE, MOST_SHARE = 0.006, 0.35
CREEP_H = -1.0
"""Stands for a short that grows evenly over all its life."""
STEPS_AN_HOUR = STEPS_A_DAY // 24


@dataclass(frozen=True)
class _Crop:
    """What hung in a cell between two pulls, in steps; it may have been hung before the record."""

    cell: int
    hung: int
    begin: int
    end: int
    is_last: bool


def short(
    scenario: Scenario, hung: Hung, rng: np.random.Generator
) -> tuple[tuple[Short, ...], tuple[Find, ...], Numbers]:
    """The shorts, what people found of them, and the share they take by steps and cells."""
    crops = _crops(hung)
    shorts = [
        *_by_chance(scenario, crops, rng),
        *_planned(scenario, crops, rng),
    ]
    share = np.zeros(hung.hung_step.shape)
    finds = []
    kept = []
    for one in shorts:
        begin = (one.from_ms - START_MS) // STEP_MS
        end = (one.to_ms - START_MS) // STEP_MS
        first = max(begin, 0)
        # A cell out of the circuit is emptied: its short is gone when it returns.
        out = np.flatnonzero(~hung.in_service[first:end, one.cell - 1])
        if out.size:
            end = first + int(out[0])
            one = replace(one, to_ms=START_MS + end * STEP_MS, ended_by="pull")
        if end <= first:
            continue
        hours = (np.arange(first, end) - begin + 0.5) / STEPS_AN_HOUR
        share[first:end, one.cell - 1] += one.share * _grown(one, hours)
        kept.append(one)
        if one.ended_by == "find":
            finds.append(Find(one.to_ms, one.cell, "short"))
    np.minimum(share, MOST_SHARE, out=share)
    kept.sort(key=lambda s: (s.from_ms, s.cell))
    return tuple(kept), tuple(sorted(finds, key=lambda f: f.at_ms)), share


def _grown(one: Short, hours: Numbers) -> Numbers:
    if one.growth_h == CREEP_H:
        return hours * HOUR_MS / (one.to_ms - one.from_ms)
    if one.growth_h == 0.0:
        return np.ones(hours.size)
    return 1.0 - np.exp(-hours / one.growth_h)


def _crops(hung: Hung) -> list[_Crop]:
    steps = hung.hung_step.shape[0]
    crops = []
    for cell in range(hung.hung_step.shape[1]):
        column = hung.hung_step[:, cell]
        begins = [0, *(np.flatnonzero(np.diff(column)) + 1).tolist(), steps]
        crops += [
            _Crop(cell + 1, int(column[begin]), begin, end, end == steps)
            for begin, end in zip(begins[:-1], begins[1:], strict=True)
        ]
    return crops


def _by_chance(scenario: Scenario, crops: list[_Crop], rng: np.random.Generator) -> list[Short]:
    habits = scenario.shorts
    expected = scenario.trade.shorts_per_crop if habits.per_crop is None else habits.per_crop
    full = scenario.crop_days * STEPS_A_DAY
    shorts = []
    for crop, number in zip(crops, rng.poisson(expected, len(crops)).tolist(), strict=True):
        for _ in range(number):
            # The hazard grows with the square of the age, its integral with the third power.
            onset = crop.hung + int(full * np.cbrt(rng.random()))
            while onset < crop.end:
                shorts.append(_one(scenario, crop, onset, rng))
                if rng.random() >= habits.another:
                    break
                onset += int(rng.exponential(1.0 * STEPS_A_DAY)) + 1
    return shorts


def _planned(scenario: Scenario, crops: list[_Crop], rng: np.random.Generator) -> list[Short]:
    habits = scenario.shorts
    cells = rng.permutation(scenario.cells) + 1
    standing = set(cells[: habits.standing].tolist())
    stubborn = set(cells[habits.standing : habits.standing + habits.stubborn].tolist())
    creeping = set(cells[-habits.creeping :].tolist()) if habits.creeping else set()
    late = int(0.5 * scenario.steps)
    shorts = []
    for crop in crops:
        if crop.cell in standing and crop.begin == 0:
            onset = max(crop.hung + 1, -2 * STEPS_A_DAY)
            shorts.append(replace(_one(scenario, crop, onset, rng, found=0.0), growth_h=0.0))
        if crop.cell in stubborn:
            onset = max(crop.hung + int(rng.integers(4, 24)), -2 * STEPS_A_DAY)
            if onset < crop.end:
                shorts.append(replace(_one(scenario, crop, onset, rng, found=0.0), growth_h=0.0))
        if crop.cell in creeping and crop.begin >= late and not crop.is_last:
            creeping.discard(crop.cell)
            one = _one(scenario, crop, crop.begin + 1, rng, found=0.0)
            shorts.append(replace(one, growth_h=CREEP_H, share=float(rng.uniform(0.03, 0.10))))
        for from_day, to_day in habits.every_fourth:
            onset = max(crop.hung + int(rng.integers(8, 96)), from_day * STEPS_A_DAY)
            is_within = onset < min(to_day * STEPS_A_DAY, crop.end)
            if crop.cell % 4 == 0 and is_within and onset >= crop.begin - STEPS_A_DAY:
                shorts.append(_one(scenario, crop, onset, rng, found=0.1))
    return shorts


def _one(
    scenario: Scenario,
    crop: _Crop,
    onset: int,
    rng: np.random.Generator,
    found: float | None = None,
) -> Short:
    habits = scenario.shorts
    share = habits.share * float(np.exp(habits.share_spread * rng.normal()))
    growth_h = 0.0 if rng.random() < habits.sudden else float(rng.uniform(*habits.growth_h))
    end, ended_by = crop.end, "nothing" if crop.is_last else "pull"
    find = onset + 1 + int(rng.exponential(habits.found_h * STEPS_AN_HOUR))
    if rng.random() < (habits.found if found is None else found) and max(onset, 0) < find < end:
        end, ended_by = find, "find"
    return Short(
        crop.cell,
        START_MS + onset * STEP_MS,
        START_MS + end * STEP_MS,
        ended_by,
        growth_h,
        min(max(share, LEAST_SHARE), MOST_SHARE),
    )


def drift(
    scenario: Scenario, hung: Hung, rng: np.random.Generator
) -> tuple[tuple[Drift, ...], Numbers]:
    """The drifts, and the volts that they add at rated current by steps and cells."""
    added = np.zeros(hung.hung_step.shape)
    free = (rng.permutation(scenario.cells) + 1).tolist()
    drifts = []
    for plan in scenario.drifts:
        for _ in range(plan.cells):
            cell = free.pop()
            begin = int(rng.uniform(*plan.from_days) * STEPS_A_DAY)
            end = min(begin + int(plan.lasts_days * STEPS_A_DAY), scenario.steps)
            if plan.cause == "passivation":
                end = _pull_after(hung, cell, end)
            drifts.append(
                Drift(
                    cell,
                    plan.cause,
                    plan.sense,
                    START_MS + begin * STEP_MS,
                    START_MS + end * STEP_MS,
                    plan.sigma_a_week,
                )
            )
            weeks = np.arange(end - begin) / (7 * STEPS_A_DAY)
            added[begin:end, cell - 1] += scenario.noise_v * _course(plan, weeks)
    return tuple(drifts), added


def _course(plan: Drifts, weeks: Numbers) -> Numbers:
    """Standard deviations that a drift has gone, after so many weeks."""
    gone = plan.sense * plan.sigma_a_week * weeks
    if plan.cause == "passivation":
        # Slow at first, as the film begins in spots.
        gone *= weeks * 7 / plan.lasts_days
    return gone


def _pull_after(hung: Hung, cell: int, step: int) -> int:
    """The next step in which new plates come into a cell."""
    later = np.flatnonzero(np.diff(hung.hung_step[step:, cell - 1]))
    return step + int(later[0]) + 1 if later.size else hung.hung_step.shape[0]
