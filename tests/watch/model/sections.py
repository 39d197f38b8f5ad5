"""Small made-up sections with known truth, for the tests of the watch's arithmetic."""

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from server.watch.model.facts import Facts
from server.watch.model.replay import Doubted, Pulls, Replayed, Stays, replay
from server.watch.model.rounds import Readings, ordered

DAY_MS = 86_400_000
SHIFT_MS = DAY_MS // 3
STEP_MS = 20_000
RATED_AMPS = 36_000.0
OHM = 11e-6
NOISE_V = 0.006
CROP_MS = 7 * DAY_MS

Numbers = NDArray[np.float64]
NOBODY = np.zeros(0, np.int64)


def facts(cells: int = 40, **given: float) -> Facts:
    """A section of copper electrowinning, told its true resistance unless another is given."""
    told = {
        "rated_amps": RATED_AMPS,
        "resistance_ohm": OHM,
        "u_resistance_ohm": 0.1 * OHM,
        "least_noise_v": 0.001,
        "noise_v": 0.008,
        "spread_v": 0.024,
        "crop_ms": float(CROP_MS),
    }
    return Facts(cells=cells, **(told | given))


@dataclass
class MadeUp:
    """A section read three times a day; arrays of rounds by cells, to be changed at will."""

    at_ms: NDArray[np.int64]
    volts: Numbers
    """NaN where a cell was left out."""
    amps: Numbers
    pulls: list[tuple[int, int]] = field(default_factory=list)
    """(moment, place)."""
    doubted: list[tuple[int, int]] = field(default_factory=list)
    stays: list[tuple[int, int, int]] = field(default_factory=list)
    """(place, from, to)."""

    def readings(self) -> Readings:
        """What was read, in the order of time."""
        place = np.broadcast_to(np.arange(self.volts.shape[1]), self.volts.shape)
        is_read = np.isfinite(self.volts)
        return ordered(self.at_ms[is_read], place[is_read], self.volts[is_read], self.amps[is_read])

    def replayed(self, known: Facts | None = None, **given: object) -> Replayed:
        """What the watch makes of it."""
        pulls = np.array(sorted(self.pulls), np.int64).reshape(-1, 2)
        doubted = np.array(sorted(self.doubted), np.int64).reshape(-1, 2)
        stays = np.array(self.stays, np.int64).reshape(-1, 3)
        readings = given.pop("readings", None) or self.readings()
        return replay(
            known or facts(self.volts.shape[1]),
            readings,
            Pulls(pulls[:, 1], pulls[:, 0]),
            Stays(stays[:, 0], stays[:, 1], stays[:, 2]),
            Doubted(doubted[:, 1], doubted[:, 0]),
            **given,
        )


def made_up(
    seed: int = 1,
    rounds: int = 40,
    cells: int = 40,
    noise_v: float = NOISE_V,
    amps: Numbers | float = RATED_AMPS,
) -> MadeUp:
    """A healthy section: cells that differ, a common movement, noise; nothing is pulled."""
    rng = np.random.default_rng(seed)
    passed = np.broadcast_to(np.reshape(amps, (-1, 1)), (rounds, cells)).astype(float)
    volts = (
        2.0
        + rng.normal(0, 0.02, cells)
        + rng.normal(0, 0.006, (rounds, 1))
        + OHM * (passed - RATED_AMPS)
        + rng.normal(0, noise_v, (rounds, cells))
    )
    at_ms = SHIFT_MS * np.arange(rounds)[:, None] + STEP_MS * np.arange(cells)
    return MadeUp(at_ms + 1_709_251_200_000, volts, passed.copy())


def pull_every_week(section: MadeUp, crop_v: float = 0.0, seed: int = 1) -> None:
    """Pull each cell once in a week, a few every day; a new crop moves the voltage at random."""
    rng = np.random.default_rng(seed)
    rounds, cells = section.volts.shape
    for place in range(cells):
        for turn in range(3 * (-place % 7), rounds, 21):
            section.pulls.append((int(section.at_ms[turn, place]) - 2 * 3_600_000, place))
            section.volts[turn : turn + 21, place] += rng.normal(0, crop_v)


def flags(replayed: Replayed, kind: str = "short") -> list[tuple[int, int, int | None]]:
    """(place, raised, ended) of the flags of a kind."""
    return [
        (one.place, one.raised_ms, one.ended_ms) for one in replayed.book.raised if one.kind == kind
    ]
