"""What a detector says of a plant, in one form for all of them."""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from tests.watch.plants.plant import Numbers, Plant

CLAIMS = ("short", "drift high", "drift low")
"""Kinds that say something is wrong with a cell; the others say that a reading is."""

SECTION = 0
"""Stands for the cell of a flag that is raised for the whole section."""


@dataclass(frozen=True)
class Flag:
    """One flag; `cell` is numbered from 1, or 0 for the section."""

    cell: int
    kind: str
    tier: str
    raised_ms: int
    ended_ms: int | None
    short_amps: float | None = None
    u_short_amps: float | None = None
    probability: float | None = None

    def is_open(self, at_ms: int) -> bool:
        """Whether it stands at a moment; the reading that raises it counts, the last does not."""
        return self.raised_ms <= at_ms and (self.ended_ms is None or at_ms < self.ended_ms)


@dataclass(frozen=True)
class Watched:
    """Flags, and for each reading (rounds by cells; NaN where nothing is said) what is thought."""

    flags: tuple[Flag, ...]
    short_amps: Numbers
    """Expected current through shorts, flagged or not."""
    given_amps: Numbers
    """The same, given that there is a short: what a flag states."""
    u_given_amps: Numbers
    expected_v: Numbers


@dataclass(frozen=True)
class Case:
    """A plant and what a detector said of it."""

    plant: Plant
    watched: Watched

    @cached_property
    def of_shorts(self) -> tuple[Flag, ...]:
        """The flags that say a cell has a short."""
        return tuple(f for f in self.watched.flags if f.kind == "short" and f.cell != SECTION)

    @cached_property
    def is_flagged(self) -> NDArray[np.bool_]:
        """At which readings a flag of a short stood, rounds by cells."""
        at_ms = self.plant.at_ms
        standing = np.zeros(at_ms.shape, bool)
        for flag in self.of_shorts:
            column = at_ms[:, flag.cell - 1]
            ended_ms = np.inf if flag.ended_ms is None else flag.ended_ms
            standing[:, flag.cell - 1] |= (column >= flag.raised_ms) & (column < ended_ms)
        return standing


Cases = Sequence[Case]


def usual(cases: Cases) -> list[Case]:
    """Those of plants that were not made for one measure alone."""
    return [case for case in cases if not case.plant.scenario.only_steps]
