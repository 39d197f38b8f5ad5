"""Made-up tankhouses: one to look at, one whose account can be held against the truth."""

from collections.abc import Callable
from dataclasses import dataclass, replace
from zoneinfo import ZoneInfo

import numpy as np

from server.demo.current import CurrentRecord, log_current
from server.demo.logbook import (
    Assay,
    CounterReading,
    Find,
    OutageNote,
    assay,
    note_finds,
    note_outages,
    read_counter,
)
from server.demo.physics import make_section
from server.demo.recipe import DAY_MS, STEP_MS, SectionRecipe
from server.demo.recipes import DEMO_RECIPES, TRUTH_RECIPES
from server.demo.rounds import Rounds, walk_rounds
from server.demo.truth import LotTruth, SectionTruth
from server.demo.weighing import weigh_lots

DEMO_SEED = 20_261_201
DEMO_DAYS = 120
# 2024-03-04T00:00Z, a Monday.
TRUTH_START_MS = 1_709_510_400_000
# Told how many sections of how many are made.
Progress = Callable[[int, int], None]


@dataclass(frozen=True)
class Shift:
    """A shift: its name, and when it starts by the clock on the wall, as HH:MM."""

    name: str
    starts: str

    @property
    def starts_minutes(self) -> int:
        """Minutes after midnight at which the shift starts."""
        hours, minutes = self.starts.split(":")
        return int(hours) * 60 + int(minutes)


@dataclass(frozen=True)
class SectionRecords:
    """What meters, scales and people wrote down of a section up to the end."""

    current: CurrentRecord
    rounds: Rounds
    lots: tuple[LotTruth, ...]
    outages: tuple[OutageNote, ...]
    assays: tuple[Assay, ...]
    finds: tuple[Find, ...]
    counter: tuple[CounterReading, ...]


@dataclass(frozen=True)
class HouseSection:
    """A section: how it was made, what happened in it, what was written down."""

    recipe: SectionRecipe
    truth: SectionTruth
    records: SectionRecords


@dataclass(frozen=True)
class House:
    """A made-up tankhouse with months of readings."""

    name: str
    time_zone: str
    currency: str
    energy_price_per_kwh: float
    shifts: tuple[Shift, ...]
    start_ms: int
    end_ms: int
    sections: tuple[HouseSection, ...]

    def section(self, name: str) -> HouseSection:
        """A section by its name."""
        return {section.recipe.name: section for section in self.sections}[name]

    def truth(self, name: str) -> SectionTruth:
        """The true course of a section."""
        return self.section(name).truth


def demo_house(now_ms: int, seed: int = DEMO_SEED, progress: Progress | None = None) -> House:
    """A tankhouse of four sections and 200 cells, with 120 days of readings that end now."""
    return _build(
        name="Orrin Vale",
        time_zone="America/Santiago",
        shifts=(Shift("day", "06:00"), Shift("evening", "14:00"), Shift("night", "22:00")),
        start_ms=(now_ms - DEMO_DAYS * DAY_MS) // STEP_MS * STEP_MS,
        end_ms=now_ms,
        recipes=DEMO_RECIPES,
        seed=seed,
        progress=progress,
    )


def truth_house(
    seed: int = 1, days: int = 60, *, start_ms: int = TRUTH_START_MS, slips: bool = False
) -> House:
    """Three sections under a clean scale, to hold accounts against what really happened.

    The current is noisy and stepped, sections trip and stop, cells are bypassed and shorted; no
    sample is lost, and nothing is written wrong unless `slips` are asked for. Planned events are
    counted back from the end and those before the beginning are left out.
    """
    recipes = [_within(recipe, days) for recipe in TRUTH_RECIPES]
    if not slips:
        recipes = [replace(r, pen=replace(r.pen, slips_per_month=0.0)) for r in recipes]
    return _build(
        name="Truth House",
        time_zone="UTC",
        shifts=(Shift("night", "00:00"), Shift("day", "08:00"), Shift("evening", "16:00")),
        start_ms=start_ms,
        end_ms=start_ms + days * DAY_MS,
        recipes=tuple(recipes),
        seed=seed,
        progress=None,
    )


def _build(
    *,
    name: str,
    time_zone: str,
    shifts: tuple[Shift, ...],
    start_ms: int,
    end_ms: int,
    recipes: tuple[SectionRecipe, ...],
    seed: int,
    progress: Progress | None,
) -> House:
    zone = ZoneInfo(time_zone)
    shift_minutes = tuple(shift.starts_minutes for shift in shifts)
    sections: list[HouseSection] = []
    for recipe, seeds in zip(
        recipes, np.random.SeedSequence(seed).spawn(len(recipes)), strict=True
    ):
        sections.append(_make(recipe, start_ms, end_ms, shift_minutes, zone, seeds))
        if progress is not None:
            progress(len(sections), len(recipes))
    return House(
        name=name,
        time_zone=time_zone,
        currency="USD",
        energy_price_per_kwh=0.09,
        shifts=shifts,
        start_ms=start_ms,
        end_ms=end_ms,
        sections=tuple(sections),
    )


def _make(
    recipe: SectionRecipe,
    start_ms: int,
    end_ms: int,
    shift_minutes: tuple[int, ...],
    zone: ZoneInfo,
    seeds: np.random.SeedSequence,
) -> HouseSection:
    for_truth, *others = seeds.spawn(6)
    for_meter, for_rounds, for_scale, for_assays, for_finds = map(np.random.default_rng, others)
    truth, current, pulls = make_section(recipe, start_ms, end_ms, zone, for_truth)
    rounds, slips = walk_rounds(truth, recipe, shift_minutes, zone, for_rounds)
    lots = weigh_lots(truth, recipe, pulls, for_scale)
    records = SectionRecords(
        current=log_current(current, recipe, end_ms, for_meter),
        rounds=rounds,
        lots=tuple(lot for lot in lots if lot.weighed_at_ms <= end_ms),
        outages=note_outages(truth),
        assays=assay(truth, recipe, zone, for_assays),
        finds=note_finds(truth, recipe, for_finds),
        counter=read_counter(truth, zone) if recipe.current.has_counter else (),
    )
    return HouseSection(recipe, replace(truth, lots=lots, slips=slips), records)


def _within(recipe: SectionRecipe, days: int) -> SectionRecipe:
    """The recipe with only those planned events that begin after the first day."""
    planned = recipe.planned
    kept = replace(
        planned,
        bypasses=tuple(b for b in planned.bypasses if b.days_before_end < days - 1),
        outages=tuple(o for o in planned.outages if o.days_before_end < days - 1),
        cuts=tuple(c for c in planned.cuts if c.days_before_end < days - 1),
    )
    return replace(recipe, planned=kept)
