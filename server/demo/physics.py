"""What really happened in a section: cells with their shorts, contacts and wandering voltages."""

from zoneinfo import ZoneInfo

import numpy as np

from server.demo.chance import moments_of_poisson, wander
from server.demo.crops import Pull, crop_steps, crops_of, hung_steps, plan_pulls
from server.demo.current import CurrentTruth, make_current
from server.demo.recipe import DAY_MS, HOUR_MS, STEP_MS, STEPS_PER_HOUR, SectionRecipe
from server.demo.shorts import grow_shorts, open_shorts, short_shares
from server.demo.truth import (
    BypassTruth,
    ContactTruth,
    Events,
    ScaleFault,
    SectionTruth,
    ShortTruth,
)
from server.science.arrays import Numbers

RESISTANCE_SPREAD_SHARE = 0.06
YIELD_HOURS = 240.0
# The common movement is mostly the bath's temperature: warmer by this when a spread lower.
DEGREES_PER_SPREAD = 0.8
BYPASS_EVERY_DAYS = 14.0


def make_section(
    recipe: SectionRecipe,
    start_ms: int,
    end_ms: int,
    zone: ZoneInfo,
    seeds: np.random.SeedSequence,
) -> tuple[SectionTruth, CurrentTruth, tuple[Pull, ...]]:
    """The true course of a section, its current, and its pulls; the same for the same seeds."""
    for_current, for_pulls, for_shorts, for_cells = map(np.random.default_rng, seeds.spawn(4))
    steps = -((start_ms - end_ms) // STEP_MS)
    shape = (steps, recipe.cells)
    current = make_current(recipe, start_ms, end_ms, steps, zone, for_current)
    pulls = plan_pulls(recipe, start_ms, end_ms, zone, for_pulls)
    bypasses = _bypasses(recipe, start_ms, end_ms, for_cells)
    contacts = _contacts(recipe, end_ms)
    shorts = _shorts(recipe, pulls, bypasses, start_ms, steps, for_shorts)
    shares = short_shares(shorts, shape, start_ms)
    hung = hung_steps(pulls, recipe.cells, start_ms, steps)
    common_volts = wander(
        for_cells,
        steps,
        recipe.voltage.common_spread_v,
        recipe.voltage.common_hours * STEPS_PER_HOUR,
    )
    emf, resistance = _voltages(recipe, hung, shares, common_volts, for_cells)
    for contact in contacts:
        _corrode(resistance[:, contact.cell - 1], contact, start_ms)
    in_service = np.ones(shape, dtype=np.bool_)
    for bypass in bypasses:
        until = steps if bypass.to_ms is None else (bypass.to_ms - start_ms) // STEP_MS
        in_service[(bypass.from_ms - start_ms) // STEP_MS : until, bypass.cell - 1] = False
    spread = recipe.voltage.common_spread_v
    truth = SectionTruth(
        name=recipe.name,
        metal=recipe.metal,
        start_ms=start_ms,
        end_ms=end_ms,
        amps=current.amps,
        emf_volts=emf,
        resistance_ohm=resistance,
        short_share=shares,
        in_service=in_service,
        cell_yield=for_cells.normal(
            recipe.crop.efficiency, recipe.crop.efficiency_spread, recipe.cells
        ),
        section_yield=1.0
        + wander(for_cells, steps, recipe.crop.efficiency_wander, YIELD_HOURS * STEPS_PER_HOUR),
        temperature_degc=recipe.bath.temperature_degc - DEGREES_PER_SPREAD * common_volts / spread,
        hung_step=hung,
        events=Events(
            outages=current.outages,
            trips=current.trips,
            cuts=current.cuts,
            gaps=current.gaps,
            shorts=tuple(shorts),
            contacts=contacts,
            bypasses=bypasses,
            scale_faults=tuple(
                ScaleFault(_before(end_ms, start_ms, fault.days_before_end), fault.share)
                for fault in recipe.planned.scale_faults
            ),
        ),
    )
    return truth, current, pulls


def _before(end_ms: int, start_ms: int, days: float) -> int:
    """A moment so many days before the end, at the beginning of a quarter of the record."""
    return start_ms + (end_ms - round(days * DAY_MS) - start_ms) // STEP_MS * STEP_MS


def _shorts(
    recipe: SectionRecipe,
    pulls: tuple[Pull, ...],
    bypasses: tuple[BypassTruth, ...],
    start_ms: int,
    steps: int,
    rng: np.random.Generator,
) -> list[ShortTruth]:
    crops = crops_of(pulls, recipe.cells, start_ms, steps)
    spared = {bypass.cell for bypass in bypasses if bypass.to_ms is None}
    spared |= {contact.cell for contact in recipe.planned.contacts}
    shorts = grow_shorts(recipe, crops, start_ms, rng)
    shorts += open_shorts(recipe, crops, spared, start_ms, steps)
    return sorted(shorts, key=lambda short: (short.from_ms, short.cell))


def _bypasses(
    recipe: SectionRecipe, start_ms: int, end_ms: int, rng: np.random.Generator
) -> tuple[BypassTruth, ...]:
    """Planned bypasses, and those by chance that do not touch a cell's other ones."""
    bypasses: list[BypassTruth] = []
    for planned in recipe.planned.bypasses:
        from_ms = _before(end_ms, start_ms, planned.days_before_end)
        to_ms = None if planned.hours is None else from_ms + round(planned.hours * HOUR_MS)
        bypasses.append(BypassTruth(planned.cell, from_ms, to_ms))
    for at_ms in moments_of_poisson(rng, start_ms, end_ms, BYPASS_EVERY_DAYS * DAY_MS):
        cell = int(rng.integers(1, recipe.cells + 1))
        from_ms = start_ms + (at_ms - start_ms) // STEP_MS * STEP_MS
        to_ms = from_ms + int(rng.integers(6, 31)) * HOUR_MS
        if to_ms < end_ms and cell not in {bypass.cell for bypass in bypasses}:
            bypasses.append(BypassTruth(cell, from_ms, to_ms))
    return tuple(sorted(bypasses, key=lambda bypass: bypass.from_ms))


def _contacts(recipe: SectionRecipe, end_ms: int) -> tuple[ContactTruth, ...]:
    return tuple(
        ContactTruth(
            planned.cell,
            end_ms - round(planned.days_before_end * DAY_MS),
            None
            if planned.cleaned_days_before_end is None
            else end_ms - round(planned.cleaned_days_before_end * DAY_MS),
            planned.micro_ohm_per_day * 1e-6,
        )
        for planned in recipe.planned.contacts
    )


def _corrode(resistance: Numbers, contact: ContactTruth, start_ms: int) -> None:
    """Add the growing resistance of one contact to its cell's."""
    at_ms = start_ms + np.arange(resistance.size) * STEP_MS
    is_bad = at_ms >= contact.from_ms
    if contact.to_ms is not None:
        is_bad &= at_ms < contact.to_ms
    days = (at_ms - contact.from_ms) / DAY_MS
    resistance += np.where(is_bad, days * contact.ohm_per_day, 0.0)


def _voltages(
    recipe: SectionRecipe,
    hung: np.ndarray[tuple[int, int], np.dtype[np.int64]],
    short_share: Numbers,
    common_volts: Numbers,
    rng: np.random.Generator,
) -> tuple[Numbers, Numbers]:
    """Voltage of each cell without current, and its slope against current.

    Levels and slopes differ from cell to cell; every hanging seats the contacts a little otherwise;
    the gap closes as the deposit grows, and a fresh cathode takes hours to settle.
    """
    steps, cells = hung.shape
    habits, rated_amps = recipe.voltage, recipe.rated_amps
    level_volts = rng.normal(habits.cell_volts, habits.level_spread_v, cells)
    slope_ohm = recipe.resistance_ohm * rng.normal(1.0, RESISTANCE_SPREAD_SHARE, cells)
    seat_ohm = rng.normal(0.0, habits.seat_spread_v / rated_amps, hung.shape)
    age_steps = np.arange(steps)[:, np.newaxis] - hung
    emf = np.exp(age_steps * (-1.0 / (habits.fresh_hours * STEPS_PER_HOUR)))
    emf *= habits.fresh_volts
    emf += age_steps * (habits.growth_volts / crop_steps(recipe))
    emf += level_volts - slope_ohm * rated_amps
    emf += common_volts[:, np.newaxis]
    resistance = slope_ohm * (1.0 - short_share)
    resistance += seat_ohm[hung, np.arange(cells)]
    return emf, resistance
