"""The current of a section, minute by minute, and the samples that its meter logged."""

from dataclasses import dataclass
from zoneinfo import ZoneInfo

import numpy as np

from server.demo.chance import local_days, moment_of_day_ms, moments_of_poisson, wander
from server.demo.recipe import DAY_MS, HOUR_MS, MINUTE_MS, STEP_MINUTES, SectionRecipe
from server.demo.truth import CutTruth, Span
from server.science.arrays import Moments, Numbers

# After a stop the current comes back in stairs of five minutes, as rectifiers are loaded by hand.
STAIR_MINUTES = 5
STAIRS = (0.3, 0.55, 0.8)
SATURDAY = 5


@dataclass(frozen=True)
class CurrentTruth:
    """What the rectifier gave: amps and set-point for each minute, and what befell it."""

    start_ms: int
    amps: Numbers
    set_amps: Numbers
    outages: tuple[Span, ...]
    trips: tuple[Span, ...]
    cuts: tuple[CutTruth, ...]
    gaps: tuple[Span, ...]


@dataclass(frozen=True)
class CurrentRecord:
    """Current samples as they were logged."""

    at_ms: Moments
    amps: Numbers


def make_current(
    recipe: SectionRecipe,
    start_ms: int,
    end_ms: int,
    steps: int,
    zone: ZoneInfo,
    rng: np.random.Generator,
) -> CurrentTruth:
    """A section's current: retuned now and then, cut at dear hours, tripped, stopped, noisy."""
    habits, planned = recipe.current, recipe.planned
    minutes = steps * STEP_MINUTES
    set_amps = np.full(minutes, recipe.rated_amps * habits.load)

    def between(span: Span | CutTruth) -> slice:
        return slice(_minute(span.from_ms, start_ms), _minute(span.to_ms, start_ms))

    for at_ms in moments_of_poisson(rng, start_ms, end_ms, habits.retune_hours * HOUR_MS):
        retuned = 1.0 + rng.normal(0.0, habits.retune_share)
        set_amps[_minute(at_ms, start_ms) :] = recipe.rated_amps * habits.load * retuned
    for span in _dear_hours(recipe, start_ms, end_ms, zone):
        set_amps[between(span)] *= 1.0 - habits.tariff_cut_share
    cuts = tuple(
        CutTruth(from_ms, min(from_ms + round(cut.days * DAY_MS), end_ms), cut.share)
        for cut in planned.cuts
        for from_ms in [_before(end_ms, cut.days_before_end)]
    )
    for cut in cuts:
        set_amps[between(cut)] *= 1.0 - cut.share
    outages = tuple(_spans(end_ms, [(o.days_before_end, o.hours) for o in planned.outages]))
    trips = tuple(_trips(habits.trip_days, start_ms, end_ms, outages, rng))
    for span in (*outages, *trips):
        _stop(set_amps, between(span))
    amps = set_amps * (1.0 + wander(rng, minutes, habits.noise_share, habits.noise_minutes))
    gaps = tuple(_spans(end_ms, [(g.days_before_end, g.hours) for g in planned.gaps]))
    return CurrentTruth(start_ms, amps, set_amps, outages, trips, cuts, gaps)


def log_current(
    current: CurrentTruth, recipe: SectionRecipe, end_ms: int, rng: np.random.Generator
) -> CurrentRecord:
    """Samples on every full hour and at every step of the set-point, none in the logger's gaps."""
    minutes = np.arange(current.set_amps.size)
    at_ms = current.start_ms + minutes * MINUTE_MS
    steps = np.concatenate(([True], np.diff(current.set_amps) != 0.0))
    logged = (steps | (at_ms % HOUR_MS == 0)) & (at_ms <= end_ms)
    for gap in current.gaps:
        logged &= (at_ms < gap.from_ms) | (at_ms >= gap.to_ms)
    noise = rng.normal(1.0, recipe.current.meter_noise_share, int(logged.sum()))
    return CurrentRecord(at_ms[logged], np.round(current.amps[logged] * noise))


def _minute(at_ms: int, start_ms: int) -> int:
    return max((at_ms - start_ms) // MINUTE_MS, 0)


def _before(end_ms: int, days: float) -> int:
    """A moment so many days before the end, on a full quarter of an hour."""
    quarter_ms = STEP_MINUTES * MINUTE_MS
    return (end_ms - round(days * DAY_MS)) // quarter_ms * quarter_ms


def _spans(end_ms: int, planned: list[tuple[float, float]]) -> list[Span]:
    starts = [(_before(end_ms, days), hours) for days, hours in planned]
    return [Span(from_ms, from_ms + round(hours * HOUR_MS)) for from_ms, hours in sorted(starts)]


def _dear_hours(recipe: SectionRecipe, start_ms: int, end_ms: int, zone: ZoneInfo) -> list[Span]:
    """Hours of the dear tariff on working days, by the clock on the wall."""
    habits = recipe.current
    if habits.tariff_cut_share == 0.0:
        return []
    days = [day for day in local_days(start_ms, end_ms, zone) if day.weekday() < SATURDAY]
    return [
        Span(
            moment_of_day_ms(day, habits.tariff_from_h * 60, zone),
            moment_of_day_ms(day, habits.tariff_to_h * 60, zone),
        )
        for day in days
    ]


def _trips(
    every_days: float,
    start_ms: int,
    end_ms: int,
    outages: tuple[Span, ...],
    rng: np.random.Generator,
) -> list[Span]:
    """Trips of 5 to 50 minutes, none within two hours of a written outage."""
    trips: list[Span] = []
    for at_ms in moments_of_poisson(rng, start_ms, end_ms, every_days * DAY_MS):
        from_ms = at_ms // MINUTE_MS * MINUTE_MS
        trip = Span(from_ms, from_ms + int(rng.integers(5, 51)) * MINUTE_MS)
        near = 2 * HOUR_MS
        taken = [o for o in (*outages, *trips) if o.from_ms - near < trip.to_ms + near]
        if all(o.to_ms + near < trip.from_ms for o in taken) and trip.to_ms < end_ms:
            trips.append(trip)
    return trips


def _stop(set_amps: Numbers, stopped: slice) -> None:
    """Set the current to zero and bring it back in stairs."""
    set_amps[stopped] = 0.0
    for nth, stair in enumerate(STAIRS):
        begins = stopped.stop + nth * STAIR_MINUTES
        set_amps[begins : begins + STAIR_MINUTES] *= stair
