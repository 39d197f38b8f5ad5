"""When each cell is passed with the voltmeter."""

from dataclasses import dataclass

import numpy as np

from tests.watch.plants.plant import Moments, Numbers
from tests.watch.plants.scenario import DAY_MS, HOUR_MS, MINUTE_MS, START_MS, Scenario


@dataclass(frozen=True)
class Walks:
    """Rounds by cells: when passed; and by rounds, what the meter and whoever reads add."""

    at_ms: Moments
    offset_v: Numbers


def walk(scenario: Scenario, rng: np.random.Generator) -> Walks:
    """Every round that is walked, a few minutes early or late; some are not."""
    pen = scenario.pen
    gap_ms = DAY_MS // pen.rounds_a_day
    number = np.arange(scenario.days * pen.rounds_a_day)
    late_ms = rng.integers(-12, 13, number.size) * MINUTE_MS
    starts = START_MS + number * gap_ms + HOUR_MS + late_ms
    day = number // pen.rounds_a_day
    step_s = np.full(number.size, pen.walk_s)
    for from_day, seconds in pen.walk_change:
        step_s[day >= from_day] = seconds
    meter_v = np.zeros(number.size)
    for from_day, volts in pen.meters:
        meter_v[day >= from_day] = volts
    offset_v = meter_v + rng.normal(0.0, pen.reader_v, number.size)
    backwards = rng.random(number.size) < pen.backwards
    is_walked = rng.random(number.size) >= pen.missed_rounds
    for off_day, hours in scenario.current.outages:
        from_ms = START_MS + off_day * DAY_MS
        is_walked &= (starts < from_ms - HOUR_MS) | (starts > from_ms + hours * HOUR_MS)
    place = np.arange(scenario.cells)
    places = np.where(backwards[:, None], place[::-1], place)
    at_ms = starts[:, None] + np.round(places * step_s[:, None]).astype(np.int64) * 1000
    return Walks(at_ms[is_walked], offset_v[is_walked])
