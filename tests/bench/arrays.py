"""Charts of a whole house over five years, against one pass of NumPy over the same memory."""

import time
from collections.abc import Callable

import numpy as np

from server.science.arrays import Numbers
from server.science.statistics.residuals import house_charts

CELLS = 1500
ROUNDS = 5475
"""Three rounds a day for five years."""
SECTION = 150
"""Cells that share a rectifier."""


def made_up_volts(missing: float = 0.0) -> Numbers:
    """Voltages of every cell in every round, one row for each round."""
    rng = np.random.default_rng(seed=20240305)
    volts = rng.normal(2.04, 0.010, (ROUNDS, CELLS))
    volts[rng.random(volts.shape) < missing] = np.nan
    return volts


def charts_against_a_pass(runs: int, missing: float = 0.0) -> tuple[float, float, float]:
    """Ratio of the times, and both in s: residual, CUSUM and EWMA, and `values + 1`.

    Each writes fresh arrays. They take turns, so that a busy minute of the machine meets both, and
    the shortest time of each counts.
    """
    volts = made_up_volts(missing)
    sections = np.arange(0, CELLS + 1, SECTION)
    charts_s = pass_s = float("inf")
    for _ in range(runs):
        pass_s = min(pass_s, _seconds(lambda: np.add(volts, 1.0)))
        charts_s = min(charts_s, _seconds(lambda: house_charts(volts, sections, 0.005, 0.1)))
    return charts_s / pass_s, charts_s, pass_s


def _seconds(work: Callable[[], object]) -> float:
    """How long the work takes, with what it made thrown away afterwards."""
    started = time.perf_counter()
    made = work()
    took_s = time.perf_counter() - started
    del made
    return took_s
