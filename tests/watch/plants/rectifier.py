"""The current of a section, minute by minute, and what its logger wrote."""

from dataclasses import dataclass

import numpy as np

from tests.watch.plants.chance import wander
from tests.watch.plants.plant import Event, Moments, Numbers, Span
from tests.watch.plants.scenario import DAY_MS, HOUR_MS, MINUTE_MS, START_MS, Scenario

MINUTES_A_DAY = 1440
SATURDAY = 5
STAIRS = (0.3, 0.55, 0.8)
"""After a stop a rectifier is loaded by hand, five minutes a stair."""


@dataclass(frozen=True)
class Fed:
    """Amps of each minute, what was logged, and what befell the rectifier."""

    amps: Numbers
    logged_ms: Moments
    logged_amps: Numbers
    outages: tuple[Span, ...]
    events: tuple[Event, ...]


def feed(scenario: Scenario, walks_ms: Moments, rng: np.random.Generator) -> Fed:
    """The current that a section was given; some trips come in the middle of a walk."""
    habits, rated = scenario.current, scenario.trade.rated_amps
    minutes = np.arange(scenario.days * MINUTES_A_DAY)
    day = minutes // MINUTES_A_DAY
    factor = _retuned(scenario, minutes.size, rng)
    hour = minutes % MINUTES_A_DAY // 60
    is_dear = (day % 7 < SATURDAY) & (hour >= habits.cut_hours[0]) & (hour < habits.cut_hours[1])
    factor[is_dear] *= 1.0 - habits.cut
    events = []
    for step_day, ratio in habits.steps:
        factor[round(step_day * MINUTES_A_DAY) :] *= ratio
        events.append(Event("step", START_MS + round(step_day * DAY_MS)))
    if habits.ramp_days:
        factor *= np.minimum(0.6 + 0.1 * (minutes // (habits.ramp_days / 4 * 1440)), 1.0)
    outages = []
    for off_day, hours in habits.outages:
        begin = round(off_day * MINUTES_A_DAY)
        _stop(factor, begin, begin + round(hours * 60))
        from_ms = START_MS + begin * MINUTE_MS
        outages.append(Span(from_ms, from_ms + round(hours * HOUR_MS)))
    for trip, last in _trips(scenario, walks_ms, rng):
        _stop(factor, trip, trip + last)
        events.append(Event("trip", START_MS + trip * MINUTE_MS))
    noise = wander(rng, minutes.size, habits.noise, habits.noise_minutes)
    amps = rated * factor * (1.0 + noise)
    is_logged = minutes % 60 == 0
    if habits.logs_steps:
        is_logged |= np.diff(factor, prepend=factor[0]) != 0.0
    error = rng.normal(1.0, habits.meter_noise, int(is_logged.sum()))
    return Fed(
        amps,
        START_MS + minutes[is_logged].astype(np.int64) * MINUTE_MS,
        np.round(amps[is_logged] * error),
        tuple(outages),
        tuple(sorted(events, key=lambda event: event.at_ms)),
    )


def _retuned(scenario: Scenario, minutes: int, rng: np.random.Generator) -> Numbers:
    """Set-point over rated current as people turn it, without cuts."""
    habits = scenario.current
    factor = np.ones(minutes)
    times = rng.poisson(scenario.days / habits.retune_days)
    for begin in np.sort(rng.integers(0, minutes, times)):
        factor[begin:] = 1.0 + rng.normal(0.0, habits.retune)
    return factor


def _trips(
    scenario: Scenario, walks_ms: Moments, rng: np.random.Generator
) -> list[tuple[int, int]]:
    """Minute and length of each trip."""
    habits = scenario.current
    minutes = scenario.days * MINUTES_A_DAY
    count = rng.poisson(scenario.days / habits.trip_days)
    begins = rng.integers(MINUTES_A_DAY, minutes - 120, count).tolist()
    late = np.arange(len(walks_ms) // 6, len(walks_ms))
    for number in rng.choice(late, habits.trips_in_walk, replace=False).tolist():
        first, last = int(walks_ms[number].min()), int(walks_ms[number].max())
        at_ms = first + rng.uniform(0.2, 0.7) * (last - first)
        begins.append(round((at_ms - START_MS) / MINUTE_MS))
    return [(begin, int(rng.integers(6, 40))) for begin in sorted(begins)]


def _stop(factor: Numbers, begin: int, end: int) -> None:
    factor[begin:end] = 0.0
    for number, stair in enumerate(STAIRS):
        at = end + 5 * number
        factor[at : at + 5] *= stair
