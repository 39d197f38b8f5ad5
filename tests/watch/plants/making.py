"""A scenario and a seed become a plant: physics, walks, and what the pen made of it."""

from zlib import crc32

import numpy as np

from tests.watch.plants.cathodes import Hung, hang
from tests.watch.plants.chance import wander
from tests.watch.plants.faults import drift, short
from tests.watch.plants.plant import Event, Find, Numbers, Plant, Truths
from tests.watch.plants.rectifier import feed
from tests.watch.plants.scenario import (
    DAY_MS,
    HOUR_MS,
    MINUTE_MS,
    START_MS,
    STEP_MS,
    STEPS_A_DAY,
    Scenario,
)
from tests.watch.plants.scenarios import SCENARIOS
from tests.watch.plants.walks import walk

IDLE_SHARE = 0.85
"""Of the voltage at no current that is left when the rectifier has tripped."""
BYPASSED_V = 0.03
STEPS_AN_HOUR = STEPS_A_DAY // 24
MINUTES_A_STEP = STEP_MS // MINUTE_MS


def make(scenario: Scenario, seed: int) -> Plant:
    """One section over all its days; the same scenario and seed give the same plant."""
    streams = np.random.SeedSequence([seed, crc32(scenario.name.encode())]).spawn(8)
    rngs = [np.random.default_rng(stream) for stream in streams]
    trade, cells = scenario.trade, scenario.cells
    walks = walk(scenario, rngs[0])
    fed = feed(scenario, walks.at_ms, rngs[1])
    hung = hang(scenario, rngs[2])
    shorts, finds, share = short(scenario, hung, rngs[3])
    drifts, drift_v = drift(scenario, hung, rngs[4])
    healthy_v, healthy_ohm = _healthy(scenario, hung, rngs[5])

    # A short is metal of a fixed resistance beside the plates: V = E + R (I - V/R_s).
    rated = trade.rated_amps
    grown_v = healthy_v + healthy_ohm * rated * (1.0 - share)
    siemens = share * rated / grown_v
    divided = 1.0 + healthy_ohm * siemens
    by_step = fed.amps.reshape(-1, MINUTES_A_STEP)
    mean_amps, is_fed = by_step.mean(axis=1)[:, None], (by_step > 0.0).mean(axis=1)[:, None]
    shorted = siemens * (healthy_v * is_fed + healthy_ohm * mean_amps) / divided
    shorted *= hung.in_service

    step = (walks.at_ms - START_MS) // STEP_MS
    at = (step, np.broadcast_to(np.arange(cells), step.shape))
    amps = fed.amps[(walks.at_ms - START_MS) // MINUTE_MS]
    emf_v = np.where(amps > 0.0, 1.0, IDLE_SHARE) * healthy_v[at]
    plates_v = emf_v + healthy_ohm[at] * amps
    true_v = plates_v / divided[at] + drift_v[at] * amps / rated
    in_service = hung.in_service[at]
    offset_v = walks.offset_v[:, None]
    noise_v = scenario.noise_v * np.exp(0.1 * rngs[6].normal(size=cells))
    shown_v = np.where(in_service, true_v, BYPASSED_V) + offset_v
    volts, is_wrong = _written(scenario, shown_v, noise_v, in_service, rngs[7])
    short_amps = np.where(in_service & (amps > 0.0), siemens[at] * plates_v / divided[at], 0.0)
    plating = (mean_amps * hung.in_service - shorted) * trade.efficiency * trade.metal_kg_per_ah
    return Plant(
        scenario=scenario,
        seed=seed,
        at_ms=walks.at_ms,
        volts=volts,
        amps=amps,
        healthy_v=plates_v + offset_v,
        true_v=true_v + offset_v,
        short_at_reading_amps=short_amps,
        in_service=in_service,
        is_wrong=is_wrong,
        crop_of=hung.crop_of[at],
        hung_ms=START_MS + hung.hung_step[at].astype(np.int64) * STEP_MS,
        noise_v=noise_v,
        resistance_ohm=healthy_ohm.mean(axis=0),
        short_amps=shorted.astype(np.float32),
        logged_ms=fed.logged_ms,
        logged_amps=fed.logged_amps,
        pulls=hung.pulls,
        shorts=shorts,
        drifts=drifts,
        bypasses=hung.bypasses,
        outages=fed.outages,
        events=_events(scenario, fed.events),
        finds=_with_vain_looks(scenario, finds, rngs[3]),
        kg=(plating / STEPS_AN_HOUR).astype(np.float32),
    )


def make_all(seeds: tuple[int, ...] = (1, 2)) -> list[Plant]:
    """Every scenario with every seed."""
    return [make(scenario, seed) for scenario in SCENARIOS for seed in seeds]


def _healthy(scenario: Scenario, hung: Hung, rng: np.random.Generator) -> tuple[Numbers, Numbers]:
    """Voltage at no current, and differential resistance, by steps and cells."""
    trade, common, cells = scenario.trade, scenario.common, scenario.cells
    steps = scenario.steps
    level_v = rng.normal(0.0, trade.level_v, cells)
    seat_sd_v = trade.seat_v * scenario.seat_factor
    seat_v = rng.normal(0.0, seat_sd_v, (int(hung.crop_of.max()) + 1, cells))
    own_age = rng.normal(1.0, 0.1, cells)
    age = np.maximum(hung.age_days, 0.0)
    age_v = trade.fresh_v * np.exp(-24.0 * age / trade.fresh_h)
    age_v += trade.growth_v * own_age * age / scenario.crop_days
    memory = common.memory_h * STEPS_AN_HOUR
    warmer = wander(rng, steps, common.temperature_k, memory)
    day = np.arange(steps) / STEPS_A_DAY
    warmer += common.daily_k * np.sin(2.0 * np.pi * (day - 0.3))
    acid_v = wander(rng, steps, common.acid_v, memory)
    seats_v = np.take_along_axis(seat_v, hung.crop_of, axis=0)
    emf_v = trade.volts - trade.resistive_v + level_v + seats_v + age_v + acid_v[:, None]
    own_ohm = rng.normal(1.0, trade.resistance_spread, cells)
    ohm = trade.resistive_v / trade.rated_amps * own_ohm
    return emf_v, ohm * (1.0 + trade.per_kelvin * warmer)[:, None]


def _written(
    scenario: Scenario,
    shown_v: Numbers,
    noise_v: Numbers,
    in_service: Truths,
    rng: np.random.Generator,
) -> tuple[Numbers, Truths]:
    """What was written down, and where that is not what was read."""
    pen = scenario.pen
    noise = rng.normal(size=shown_v.shape) * np.where(in_service, noise_v, 0.002)
    volts = np.round((shown_v + noise) / pen.rounding_v) * pen.rounding_v
    volts = np.round(np.maximum(volts, 0.0), 4)
    missing = rng.random(shown_v.shape) < np.where(in_service, pen.missing, 0.5)
    volts[missing] = np.nan
    is_wrong = (rng.random(shown_v.shape) < pen.errors) & ~missing & in_service
    for place in np.argwhere(is_wrong):
        meant = float(volts[tuple(place)])
        volts[tuple(place)] = _slipped(meant, rng)
        is_wrong[tuple(place)] = volts[tuple(place)] != meant
    return volts, is_wrong


def _slipped(volts: float, rng: np.random.Generator) -> float:
    """A slip of the pen: a unit too large or too small, or two digits swapped."""
    kind = rng.random()
    if kind < 0.3:
        return round(volts * 1000.0, 1)
    if kind < 0.4:
        return volts / 1000.0
    digits = list(f"{volts:.3f}")
    places = [(0, 2), (2, 3), (3, 4)]
    one, other = places[int(rng.integers(len(places)))]
    digits[one], digits[other] = digits[other], digits[one]
    return float("".join(digits))


def _events(scenario: Scenario, of_current: tuple[Event, ...]) -> tuple[Event, ...]:
    meters = [Event("meter", START_MS + day * DAY_MS) for day, _ in scenario.pen.meters]
    return tuple(sorted([*of_current, *meters], key=lambda event: event.at_ms))


def _with_vain_looks(
    scenario: Scenario, finds: tuple[Find, ...], rng: np.random.Generator
) -> tuple[Find, ...]:
    """Finds of people, with now and then a look that found nothing."""
    vain = [
        Find(START_MS + int(hour) * HOUR_MS, int(rng.integers(1, scenario.cells + 1)), "nothing")
        for hour in rng.integers(24, scenario.days * 24, scenario.days // 12)
    ]
    return tuple(sorted([*finds, *vain], key=lambda find: find.at_ms))
