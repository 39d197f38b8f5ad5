"""The rest of what a shift writes down: assays, finds, outages, the ampere-hour counter."""

from dataclasses import dataclass
from zoneinfo import ZoneInfo

import numpy as np

from server.demo.chance import daily_moments
from server.demo.recipe import HOUR_MS, MINUTE_MS, STEP_MS, SectionRecipe
from server.demo.truth import SectionTruth

ASSAY_MINUTES = 6 * 60
COUNTER_MINUTES = 6 * 60 + 15
ASSAY_SPREAD_SHARE = 0.008
TEMPERATURE_SPREAD_DEGC = 0.2
FLOW_SPREAD_SHARE = 0.006
# The counter has five digits before the point and stood here when the record began.
COUNTER_ROLLS_OVER_KAH = 100_000.0
COUNTER_BEGAN_KAH = 31_270.4
COUNTER_GAIN = 1.0002
# Metal that a full percent of lost yield stands for in dissolved trivalent iron.
FERRIC_G_L_PER_YIELD = 40.0
# Acid set free for each gram of metal won, H2SO4 over the metal's molar mass.
ACID_KG_MOL = 98.08e-3
FALSE_CALLS_PER_FIND = 0.15


@dataclass(frozen=True)
class OutageNote:
    """A line of the outage sheet; no cell is the whole section, no end is still going on."""

    cell: int | None
    from_ms: int
    to_ms: int | None
    state: str


@dataclass(frozen=True)
class Assay:
    """What the laboratory found in one stream."""

    at_ms: int
    stream: str
    values: dict[str, float]


@dataclass(frozen=True)
class Find:
    """What somebody found on a cathode, and did."""

    at_ms: int
    cell: int
    cathode: int
    found: str
    action: str


@dataclass(frozen=True)
class CounterReading:
    """The rectifier's ampere-hour counter."""

    at_ms: int
    kah: float


def note_outages(truth: SectionTruth) -> tuple[OutageNote, ...]:
    """Planned stops and bypasses; trips of minutes are not in the sheet, only in the current."""
    notes = [OutageNote(None, span.from_ms, span.to_ms, "off") for span in truth.events.outages]
    notes += [
        OutageNote(bypass.cell, bypass.from_ms, bypass.to_ms, "bypassed")
        for bypass in truth.events.bypasses
    ]
    return tuple(sorted(notes, key=lambda note: note.from_ms))


def note_finds(
    truth: SectionTruth, recipe: SectionRecipe, rng: np.random.Generator
) -> tuple[Find, ...]:
    """Shorts that were found, contacts that were cleaned, and some calls that were false."""
    finds: list[Find] = []
    for short in truth.events.shorts:
        if short.to_ms is None or short.ended_by != "find":
            continue
        cathode = int(rng.integers(1, recipe.cathodes_per_cell + 1))
        action = "nodule knocked off" if short.growth_h else "cathode straightened"
        finds.append(Find(short.to_ms, short.cell, cathode, "short", action))
        if rng.random() < FALSE_CALLS_PER_FIND:
            cell = int(rng.integers(1, recipe.cells + 1))
            cathode = int(rng.integers(1, recipe.cathodes_per_cell + 1))
            at_ms = short.to_ms + 4 * MINUTE_MS
            if at_ms <= truth.end_ms:
                finds.append(Find(at_ms, cell, cathode, "nothing", ""))
    finds += [
        Find(contact.to_ms, contact.cell, 1, "contact", "contact cleaned")
        for contact in truth.events.contacts
        if contact.to_ms is not None
    ]
    return tuple(sorted(finds, key=lambda find: (find.at_ms, find.cell)))


def read_counter(truth: SectionTruth, zone: ZoneInfo) -> tuple[CounterReading, ...]:
    """The counter once a day, to a tenth of a kAh, rolling over after its last digit."""
    moments = daily_moments(truth.start_ms, truth.end_ms, COUNTER_MINUTES, zone)
    counted = [
        COUNTER_BEGAN_KAH + COUNTER_GAIN * truth.section_charge_c(truth.start_ms, at_ms) / 3.6e6
        for at_ms in moments.tolist()
    ]
    return tuple(
        CounterReading(at_ms, round(kah % COUNTER_ROLLS_OVER_KAH, 1))
        for at_ms, kah in zip(moments.tolist(), counted, strict=True)
    )


def assay(
    truth: SectionTruth, recipe: SectionRecipe, zone: ZoneInfo, rng: np.random.Generator
) -> tuple[Assay, ...]:
    """Feed and spent once a day: what the cells took out of the feed is missing in the spent.

    The flow is set for the recipe's fall of metal at rated current, so that flow × fall is the
    metal made, but in electrorefining, where the anodes give back what the cathodes take.
    """
    bath = recipe.bath
    rated_kg_s = truth.kg_per_c * recipe.rated_amps * recipe.cells * recipe.crop.efficiency
    flow_m3_h = rated_kg_s * 3600.0 / bath.metal_drop_g_l if bath.metal_drop_g_l else 30.0
    acid_per_metal = ACID_KG_MOL / recipe.metal.molar_mass_kg_mol
    moments = daily_moments(truth.start_ms + HOUR_MS, truth.end_ms, ASSAY_MINUTES, zone).tolist()
    assays: list[Assay] = []
    for at_ms in moments:
        step = (at_ms - truth.start_ms) // STEP_MS
        since_ms = max(at_ms - 24 * HOUR_MS, truth.start_ms)
        made_kg_h = truth.made_kg(since_ms, at_ms).sum() * HOUR_MS / (at_ms - since_ms)
        drop_g_l = made_kg_h / flow_m3_h if bath.metal_drop_g_l else 0.0
        feed_g_l = bath.metal_g_l * rng.normal(1.0, 0.01)
        iron = dict(bath.extras).get("iron_g_l")
        for stream, metal_g_l, acid_g_l in (
            ("feed", feed_g_l, bath.acid_g_l),
            ("spent", feed_g_l - drop_g_l, bath.acid_g_l + drop_g_l * acid_per_metal),
        ):
            values = {"metal_g_l": metal_g_l, "acid_g_l": acid_g_l, **dict(bath.extras)}
            if iron is not None:
                lost = 1.0 - float(truth.section_yield[step])
                values["ferric_g_l"] = max(0.75 * iron + FERRIC_G_L_PER_YIELD * lost, 0.1)
            values = {
                name: value * rng.normal(1.0, ASSAY_SPREAD_SHARE) for name, value in values.items()
            }
            values["temperature_c"] = float(truth.temperature_degc[step]) + rng.normal(
                0.0, TEMPERATURE_SPREAD_DEGC
            )
            values["flow_m3_h"] = flow_m3_h * rng.normal(1.0, FLOW_SPREAD_SHARE)
            assays.append(Assay(at_ms, stream, values))
    return tuple(assays)
