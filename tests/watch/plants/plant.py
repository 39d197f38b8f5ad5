"""A made-up section: what people wrote down of it, and what really happened."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from tests.watch.plants.scenario import HOUR_MS, START_MS, STEP_MS, Scenario

Numbers = NDArray[np.float64]
Moments = NDArray[np.int64]
Truths = NDArray[np.bool_]

LEAST_LOAD = 0.2
"""Share of rated current."""


@dataclass(frozen=True)
class Pull:
    """One load of cathodes: cells numbered from 1, when hung and when pulled."""

    lot: str
    cells: tuple[int, ...]
    pulled_ms: int
    hung_ms: int
    """May be before the record."""


@dataclass(frozen=True)
class Short:
    """Metal between two plates, from its beginning to the pull, the find or the record's end."""

    cell: int
    from_ms: int
    to_ms: int
    ended_by: str
    """pull, find or nothing."""
    growth_h: float
    """Zero for one that is there at once."""
    share: float
    """Of the cell's current at rated current, when grown."""

    @property
    def is_sudden(self) -> bool:
        """Whether it is there at once."""
        return self.growth_h == 0.0


@dataclass(frozen=True)
class Drift:
    """A cell whose voltage leaves its level by and by."""

    cell: int
    cause: str
    sense: int
    from_ms: int
    to_ms: int
    sigma_a_week: float


@dataclass(frozen=True)
class Bypass:
    """A cell out of the circuit."""

    cell: int
    from_ms: int
    to_ms: int


@dataclass(frozen=True)
class Span:
    """A stretch of time."""

    from_ms: int
    to_ms: int


@dataclass(frozen=True)
class Event:
    """What hit the whole section: trip, step, meter."""

    kind: str
    at_ms: int


@dataclass(frozen=True)
class Find:
    """What people found at a cell by themselves."""

    at_ms: int
    cell: int
    found: str


@dataclass(frozen=True)
class Plant:
    """One section. Arrays of readings are rounds by cells, of truth over time steps by cells."""

    scenario: Scenario
    seed: int
    at_ms: Moments
    """When each cell was passed, also where nothing was written."""
    volts: Numbers
    """As written; NaN where nothing was."""
    amps: Numbers
    """The section's true current then."""
    healthy_v: Numbers
    """What this meter would have shown then without noise, had the cell no fault."""
    true_v: Numbers
    """What it would have shown without noise with the faults that the cell had."""
    short_at_reading_amps: Numbers
    in_service: Truths
    is_wrong: Truths
    """Whether what was written is not what was read: a slipped unit, swapped digits."""
    crop_of: NDArray[np.int32]
    """Which crop of its cell was hanging, counted from 0."""
    hung_ms: Moments
    """Since when it hung; may be before the record."""
    noise_v: Numbers
    """Standard deviation of a reading, by cell."""
    resistance_ohm: Numbers
    """True differential resistance, by cell."""
    short_amps: NDArray[np.float32]
    """Mean current through the shorts in each quarter of an hour."""
    logged_ms: Moments
    logged_amps: Numbers
    pulls: tuple[Pull, ...]
    shorts: tuple[Short, ...]
    drifts: tuple[Drift, ...]
    bypasses: tuple[Bypass, ...]
    outages: tuple[Span, ...]
    events: tuple[Event, ...]
    finds: tuple[Find, ...]
    kg: NDArray[np.float32]
    """Metal that grew in each quarter of an hour."""

    @property
    def name(self) -> str:
        """Name of the section: scenario and seed."""
        return f"{self.scenario.name} #{self.seed}"

    @property
    def cells(self) -> int:
        """How many cells."""
        return self.volts.shape[1]

    @property
    def end_ms(self) -> int:
        """The end of the record."""
        return self.scenario.end_ms

    @cached_property
    def is_read(self) -> Truths:
        """Where a reading was written that says something: of a cell in service, rightly."""
        return np.isfinite(self.volts) & self.in_service & ~self.is_wrong

    @cached_property
    def is_loaded(self) -> Truths:
        """Whether the section carried a current under which a voltage says something."""
        return self.amps >= LEAST_LOAD * self.scenario.trade.rated_amps

    @cached_property
    def reading_noise_v(self) -> Numbers:
        """Standard deviation of a written reading, by cell: what it scatters, and the rounding."""
        return np.hypot(self.noise_v, self.scenario.pen.rounding_v / np.sqrt(12.0))

    @cached_property
    def has_short(self) -> Truths:
        """Whether the cell had a short at the reading."""
        return self.short_at_reading_amps > 0.0

    @cached_property
    def _charge(self) -> Numbers:
        """Ampere-hours through shorts from the start to each quarter, by cell."""
        sums = np.zeros((self.short_amps.shape[0] + 1, self.cells))
        np.cumsum(self.short_amps, axis=0, dtype=np.float64, out=sums[1:])
        return sums * (STEP_MS / HOUR_MS)

    def short_ah(self, cell: int, from_ms: int, to_ms: int) -> float:
        """Ampere-hours through the shorts of a cell, numbered from 1, within a time."""
        ends = (np.clip([from_ms, to_ms], START_MS, self.end_ms) - START_MS) / STEP_MS
        whole = np.minimum(ends.astype(np.int64), self.short_amps.shape[0] - 1)
        column = self._charge[:, cell - 1]
        sums = column[whole] + (ends - whole) * (column[whole + 1] - column[whole])
        return float(max(sums[1] - sums[0], 0.0))

    @property
    def total_short_ah(self) -> float:
        """Ampere-hours through all shorts of the record."""
        return float(self._charge[-1].sum())

    def drifts_at(self, cell: int, at_ms: int, sense: int) -> bool:
        """Whether a cell was drifting, or had not come back, in a sense at a moment."""
        return any(
            d.cell == cell and d.sense == sense and d.from_ms <= at_ms < d.to_ms
            for d in self.drifts
        )
