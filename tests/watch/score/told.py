"""The detector that is told every healthy voltage: the best that anyone could do with the meter.

It knows what each cell would have read at each moment without noise if it had no fault, how much
each cell's readings scatter, its resistance, and which entries are slips of the pen. Left to it is
to tell a short from noise. It holds, for each cell, the probability of every size of a short and
moves it from reading to reading by Bayes' rule (Shiryaev's recursion over a grid of sizes): shorts
begin, grow and end at rates as the trade knows them, and are gone with the cathodes.
"""

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from tests.watch.plants.plant import Numbers, Plant
from tests.watch.score.charts import Scored, flags_of, limit_for
from tests.watch.score.watched import Case, Watched

SHARES = np.geomspace(0.004, 0.4, 18)
"""Sizes, as shares of the cell's current."""
PRIOR = np.exp(-0.5 * (np.log(SHARES / 0.04) / 0.8) ** 2)
PRIOR /= PRIOR.sum()
ONSETS_PER_CROP = 0.15
"""The hazard grows with the square of the deposit's age."""
ENDS = 0.02
"""Share of shorts that end between two readings unseen."""
LEAST_HAZARD = 1e-4
GROWS = ((0, 0.75), (1, 0.13), (2, 0.05), (-1, 0.07))
"""From one size to others between two readings."""

ACT = float(np.log(0.98 / 0.02))
"""Log odds from which somebody is sent."""


def _growth() -> Numbers:
    growth = np.zeros((SHARES.size, SHARES.size))
    for place in range(SHARES.size):
        for step, share in GROWS:
            growth[place, min(max(place + step, 0), SHARES.size - 1)] += share
    return growth


GROWTH = _growth()


def told(plant: Plant) -> tuple[Scored, Watched]:
    """Log odds of a short at every reading, and what is thought of its current."""
    is_used = plant.is_read & plant.is_loaded
    away = np.where(is_used, plant.volts - plant.healthy_v, np.nan)
    drop_v = plant.resistance_ohm[:, None] * SHARES
    weight = np.zeros((plant.cells, SHARES.size + 1))
    weight[:, 0] = 1.0
    odds, amps, given, spread = (np.full(plant.at_ms.shape, np.nan) for _ in range(4))
    onset = _onsets(plant)
    pulled = np.zeros(plant.at_ms.shape, bool)
    pulled[1:] = np.diff(plant.crop_of, axis=0) != 0
    for number in range(len(away)):
        weight[pulled[number]] = np.eye(1, SHARES.size + 1)
        there = is_used[number]
        before = _moved(weight, onset[number])
        load = plant.amps[number][:, None]
        z = (away[number][:, None] + np.hstack((np.zeros_like(load), drop_v * load))) / (
            plant.reading_noise_v[:, None]
        )
        likely = np.exp(-0.5 * (z**2 - np.nanmin(z**2, axis=1, initial=np.inf)[:, None]))
        after = before * np.where(there[:, None], likely, 1.0)
        weight = after / after.sum(axis=1, keepdims=True)
        some = weight[:, 1:]
        short = np.maximum(some.sum(axis=1), 1e-300)
        odds[number, there] = (np.log(short) - np.log(np.maximum(weight[:, 0], 1e-300)))[there]
        mean = some @ SHARES
        amps[number, there] = (mean * plant.amps[number])[there]
        given[number, there] = (mean / short * plant.amps[number])[there]
        square = (some @ SHARES**2) / short - (mean / short) ** 2
        # Sizes between two steps of the grid are as likely as those on it.
        between = (mean / short * np.log(SHARES[1] / SHARES[0]) / np.sqrt(12.0)) ** 2
        sd = np.sqrt(np.maximum(square, 0.0) + between) * plant.amps[number]
        spread[number, there] = sd[there]
    scored = Scored(plant, odds, over=lambda limit: min(limit, 0.0) - 2.0, act=ACT)
    return scored, Watched((), amps, given, spread, plant.healthy_v)


def _onsets(plant: Plant) -> Numbers:
    """Probability that a short begins before each reading and after the one before."""
    crop_ms = plant.scenario.crop_days * 86_400_000
    age = (plant.at_ms - plant.hung_ms) / crop_ms
    before = np.zeros(age.shape)
    before[1:] = np.clip((plant.at_ms[:-1] - plant.hung_ms[1:]) / crop_ms, 0.0, None)
    before[0] = np.clip(age[0] - 0.1, 0.0, None)
    return np.clip(ONSETS_PER_CROP * (age**3 - before**3), LEAST_HAZARD, 0.5)


def _moved(weight: Numbers, onset: Numbers) -> Numbers:
    """Probabilities before a reading: shorts begin, grow and end."""
    none, some = weight[:, :1], weight[:, 1:]
    begun = none * onset[:, None]
    return np.hstack(
        (
            none - begun + ENDS * some.sum(axis=1, keepdims=True),
            (1.0 - ENDS) * some @ GROWTH + begun * PRIOR,
        )
    )


def told_cases(plants: Sequence[Plant]) -> list[Case]:
    """What it says of plants, at the limit for the share of false flags asked for."""
    pairs = [told(plant) for plant in plants]
    limit = limit_for([scored for scored, _ in pairs], -6.0, 12.0)
    return [
        Case(scored.plant, replace(watched, flags=flags_of(scored, limit)))
        for scored, watched in pairs
    ]
