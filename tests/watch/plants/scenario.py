"""What a made-up section is like and what befalls it."""

from dataclasses import dataclass, field

MINUTE_MS = 60_000
HOUR_MS = 60 * MINUTE_MS
DAY_MS = 24 * HOUR_MS
STEP_MS = 15 * MINUTE_MS
"""The current changes by the minute, everything else in a cell by the quarter of an hour."""
STEPS_A_DAY = DAY_MS // STEP_MS

START_MS = 1_772_409_600_000
"""2026-03-02T00:00Z, a Monday: every record begins here."""


@dataclass(frozen=True)
class Trade:
    """A process with the voltages that are usual in it, at rated current."""

    process: str
    volts: float
    resistive_v: float
    """Differential resistance times rated current."""
    noise_v: float
    """Of one reading: bubbles, contact of the probes, meter."""
    level_v: float
    """Standard deviation between healthy cells."""
    seat_v: float
    """Standard deviation of what a fresh crop changes in a cell's level."""
    fresh_v: float
    """What a fresh cathode reads above a grown one, gone with `fresh_h`."""
    growth_v: float
    """What a full crop changes as the gap narrows."""
    rated_amps: float
    cathodes: int
    cathode_area_m2: float
    metal_kg_per_ah: float
    value_per_kg: float
    efficiency: float
    target_kwh_t: float
    limits_v: tuple[float, float]
    crop_days: int
    shorts_per_crop: float
    fresh_h: float = 5.0
    resistance_spread: float = 0.03
    per_kelvin: float = -0.01
    """Relative change of the differential resistance with the bath's temperature."""


@dataclass(frozen=True)
class Shorts:
    """How shorts come and go; the hazard of one grows with the square of the deposit's age."""

    per_crop: float | None = None
    """Expected in a full crop of a cell if nobody looks; the trade's own when None."""
    share: float = 0.055
    """Median share of the cell's current that a grown short takes."""
    share_spread: float = 0.6
    """Standard deviation of the natural logarithm of that share."""
    sudden: float = 0.5
    """Share of shorts that are there at once."""
    growth_h: tuple[float, float] = (2.0, 20.0)
    """Time constants of the others."""
    another: float = 0.15
    """Chance that one short is followed by another in the same cell."""
    found: float = 0.35
    """Share that people come upon by themselves, `found_h` later on average."""
    found_h: float = 36.0
    standing: int = 0
    """Cells with a short from before the record on."""
    stubborn: int = 0
    """Cells whose short comes back within hours of every pull."""
    every_fourth: tuple[tuple[int, int], ...] = ()
    """Days from and to which every fourth cell has one."""
    creeping: int = 0
    """Cells in which, late in the record, a short creeps from nothing over a whole crop."""


@dataclass(frozen=True)
class Drifts:
    """Some cells that drift for the same cause, from different days on."""

    cause: str
    """contact, anode, flow or passivation (up); gap (down)."""
    cells: int
    sigma_a_week: float = 1.0
    from_days: tuple[int, int] = (14, 30)
    lasts_days: float = 60.0

    @property
    def sense(self) -> int:
        """1 for a voltage that rises, -1 for one that falls."""
        return -1 if self.cause == "gap" else 1


@dataclass(frozen=True)
class Current:
    """How the rectifier is driven, and how its current is logged."""

    noise: float = 0.003
    noise_minutes: float = 20.0
    retune_days: float = 2.0
    retune: float = 0.01
    cut: float = 0.0
    """Share by which working days' dear hours are cut."""
    cut_hours: tuple[int, int] = (17, 22)
    steps: tuple[tuple[float, float], ...] = ()
    """Day from which on, and the factor by which, the set-point changes for good."""
    trip_days: float = 40.0
    trips_in_walk: int = 0
    outages: tuple[tuple[float, float], ...] = ()
    """Day on which, and hours for which, the section is off and the book says so."""
    ramp_days: float = 0.0
    """Days of a start-up from 0.6 of rated current."""
    logs_steps: bool = False
    """Whether the logger writes at every step of the set-point, besides every hour."""
    meter_noise: float = 0.001


@dataclass(frozen=True)
class Common:
    """What moves the whole section: standard deviations and how long they are remembered."""

    temperature_k: float = 1.0
    daily_k: float = 0.7
    acid_v: float = 0.004
    memory_h: float = 14.0


@dataclass(frozen=True)
class Pen:
    """How rounds are walked and written down."""

    rounds_a_day: int = 3
    walk_s: float = 25.0
    """From one cell to the next."""
    walk_change: tuple[tuple[int, float], ...] = ()
    """Day from which on, and seconds that, a step of the walk takes."""
    backwards: float = 0.0
    """Share of the rounds that are walked from the last cell to the first."""
    rounding_v: float = 0.001
    reader_v: float = 0.0005
    """Standard deviation of what whoever reads adds to a whole round."""
    meters: tuple[tuple[int, float], ...] = ()
    """Day from which on, and volts by which, another meter reads off."""
    missing: float = 0.006
    missed_rounds: float = 0.005
    errors: float = 0.0
    """Share of readings with a slipped unit or swapped digits."""


@dataclass(frozen=True)
class Crops:
    """When cathodes are pulled."""

    days: int | None = None
    """The trade's own when None."""
    at_once: bool = False
    late: float = 0.02
    rehung: float = 0.0
    """Share of crops that are pulled early and hung anew."""
    bypasses: int = 0
    """How many times a cell is bypassed for a day or more."""


@dataclass(frozen=True)
class Scenario:
    """One made-up section, but for chance."""

    name: str
    trade: Trade
    cells: int = 60
    days: int = 60
    shorts: Shorts = field(default_factory=Shorts)
    drifts: tuple[Drifts, ...] = ()
    current: Current = field(default_factory=Current)
    common: Common = field(default_factory=Common)
    pen: Pen = field(default_factory=Pen)
    crops: Crops = field(default_factory=Crops)
    noise_factor: float = 1.0
    seat_factor: float = 1.0
    only_steps: bool = False
    """Made to count large steps alone: their ampere-hours would outweigh all others."""
    states_resistance: bool = True
    """Whether plant.toml states the differential resistance."""

    @property
    def noise_v(self) -> float:
        """Standard deviation of one reading of an average cell, V."""
        return self.trade.noise_v * self.noise_factor

    @property
    def crop_days(self) -> int:
        """Days that a crop is meant to grow."""
        return self.crops.days or self.trade.crop_days

    @property
    def is_quiet(self) -> bool:
        """Whether no cell has any fault from beginning to end."""
        shorts = self.shorts
        return not (
            (shorts.per_crop is None or shorts.per_crop > 0.0)
            or shorts.standing
            or shorts.stubborn
            or shorts.every_fourth
            or shorts.creeping
            or self.drifts
        )

    @property
    def steps(self) -> int:
        """Quarters of an hour in the record."""
        return self.days * STEPS_A_DAY

    @property
    def end_ms(self) -> int:
        """The end of the record."""
        return START_MS + self.days * DAY_MS
