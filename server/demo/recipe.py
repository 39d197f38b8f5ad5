"""What a made-up section is like and what is planned to happen in it."""

from dataclasses import dataclass

from server.science.constants import Metal

MINUTE_MS = 60_000
HOUR_MS = 60 * MINUTE_MS
DAY_MS = 24 * HOUR_MS
# Current changes by the minute, everything else in a cell by the quarter of an hour.
STEP_MINUTES = 15
STEP_MS = STEP_MINUTES * MINUTE_MS
STEPS_PER_HOUR = HOUR_MS // STEP_MS


@dataclass(frozen=True)
class PlannedShort:
    """A short still open at the end, in the n-th oldest deposit then hanging.

    The share is that of the cell's current which it takes when grown; it grows towards that with
    `growth_h` as the time constant, zero for a short that is there at once.
    """

    oldest: int
    hours_before_end: float
    growth_h: float
    share: float


@dataclass(frozen=True)
class PlannedContact:
    """A contact that corrodes: its resistance grows evenly until it is cleaned, if it is."""

    cell: int
    days_before_end: float
    micro_ohm_per_day: float
    cleaned_days_before_end: float | None = None


@dataclass(frozen=True)
class PlannedBypass:
    """A cell shorted out of the circuit, until the end when `hours` is None."""

    cell: int
    days_before_end: float
    hours: float | None


@dataclass(frozen=True)
class PlannedOutage:
    """The whole section off, written in the outage sheet."""

    days_before_end: float
    hours: float


@dataclass(frozen=True)
class PlannedCut:
    """A set-point cut: the current lowered by a share of itself for some days."""

    days_before_end: float
    days: float
    share: float


@dataclass(frozen=True)
class PlannedGap:
    """Hours in which the current was not logged, though it flowed."""

    days_before_end: float
    hours: float


@dataclass(frozen=True)
class PlannedScaleFault:
    """A scale that reads wrong by a share of the weight, from a day on."""

    days_before_end: float
    share: float


@dataclass(frozen=True)
class Planned:
    """Everything that is bound to happen in a section, besides what chance brings."""

    shorts: tuple[PlannedShort, ...] = ()
    contacts: tuple[PlannedContact, ...] = ()
    bypasses: tuple[PlannedBypass, ...] = ()
    outages: tuple[PlannedOutage, ...] = ()
    cuts: tuple[PlannedCut, ...] = ()
    gaps: tuple[PlannedGap, ...] = ()
    scale_faults: tuple[PlannedScaleFault, ...] = ()


@dataclass(frozen=True)
class CurrentHabits:
    """How a rectifier is driven, and how its meter reads."""

    load: float = 1.0
    retune_hours: float = 36.0
    retune_share: float = 0.012
    tariff_cut_share: float = 0.08
    tariff_from_h: int = 18
    tariff_to_h: int = 23
    trip_days: float = 25.0
    noise_share: float = 0.003
    noise_minutes: float = 20.0
    meter_noise_share: float = 0.001
    has_counter: bool = False


@dataclass(frozen=True)
class VoltageHabits:
    """Voltages of healthy cells at rated current, how they differ and how they wander.

    The resistive share is that part of the voltage which follows the current, R_d I / V.
    """

    cell_volts: float
    resistive_share: float
    level_spread_v: float
    seat_spread_v: float
    common_spread_v: float
    common_hours: float
    growth_volts: float
    fresh_volts: float
    fresh_hours: float


@dataclass(frozen=True)
class CropHabits:
    """How cathodes grow and are pulled.

    `shorts_per_crop` is how many shorts one cell grows in a full crop if nobody looks; their hazard
    grows with the square of the deposit's age.
    """

    crop_days: int
    cells_per_lot: int
    efficiency: float
    efficiency_spread: float
    efficiency_wander: float
    shorts_per_crop: float
    short_share: float
    late_share: float = 0.02
    starter_kg_per_cathode: float = 0.0


@dataclass(frozen=True)
class PenHabits:
    """How rounds are walked, read and written, and how lots are weighed."""

    round_minutes: int
    walk_seconds: int = 20
    meter_noise_v: float = 0.002
    reader_spread_v: float = 0.001
    decimals: int = 3
    missing_share: float = 0.006
    missed_round_share: float = 0.005
    slips_per_month: float = 0.0
    scale_noise_share: float = 0.0005
    scale_step_kg: float = 1.0


@dataclass(frozen=True)
class BathHabits:
    """The electrolyte: g/L at the feed, degrees Celsius, and how far the metal falls on its way."""

    metal_g_l: float
    acid_g_l: float
    temperature_degc: float
    metal_drop_g_l: float
    extras: tuple[tuple[str, float], ...]


@dataclass(frozen=True)
class SectionRecipe:
    """One section of a made-up tankhouse: the plate on the wall, its habits, its fate."""

    name: str
    process: str
    metal: Metal
    cells: int
    rows: int
    cathodes_per_cell: int
    cathode_area_m2: float
    rated_amps: float
    metal_value_per_kg: float
    target_efficiency: float
    target_kwh_t: float
    target_volts: tuple[float, float]
    current: CurrentHabits
    voltage: VoltageHabits
    crop: CropHabits
    pen: PenHabits
    bath: BathHabits
    planned: Planned = Planned()
    optional_facts: tuple[tuple[str, float], ...] = ()

    @property
    def resistance_ohm(self) -> float:
        """Differential resistance of an average healthy cell."""
        return self.voltage.resistive_share * self.voltage.cell_volts / self.rated_amps
