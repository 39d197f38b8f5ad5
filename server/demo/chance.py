"""Noise with a memory, and the tankhouse's own days, for everything that is made up."""

from collections.abc import Iterator
from datetime import UTC, date, datetime, time, timedelta
from itertools import accumulate
from math import sqrt
from zoneinfo import ZoneInfo

import numpy as np

from server.science.arrays import Moments, Numbers


def wander(rng: np.random.Generator, count: int, spread: float, memory: float) -> Numbers:
    """Stationary noise of the given spread that forgets itself over `memory` samples.

    An autoregressive process of first order; zeros when the spread is zero.
    """
    if spread == 0.0 or count == 0:
        return np.zeros(count)
    keep = float(np.exp(-1.0 / memory))
    pushes = rng.normal(0.0, spread * sqrt(1.0 - keep * keep), count)
    pushes[0] = rng.normal(0.0, spread)
    steps = accumulate(pushes.tolist(), lambda so_far, push: keep * so_far + push)
    return np.fromiter(steps, np.float64, count)


def moments_of_poisson(
    rng: np.random.Generator, start_ms: int, end_ms: int, mean_ms: float
) -> list[int]:
    """Moments of a process without memory, one every `mean_ms` on average."""
    moments: list[int] = []
    at_ms = start_ms + rng.exponential(mean_ms)
    while at_ms < end_ms:
        moments.append(int(at_ms))
        at_ms += rng.exponential(mean_ms)
    return moments


def local_days(start_ms: int, end_ms: int, zone: ZoneInfo) -> Iterator[date]:
    """The dates on the tankhouse's calendar that the record touches."""
    day = datetime.fromtimestamp(start_ms / 1000, UTC).astimezone(zone).date()
    last = datetime.fromtimestamp(end_ms / 1000, UTC).astimezone(zone).date()
    while day <= last:
        yield day
        day += timedelta(days=1)


def moment_of_day_ms(day: date, minutes: int, zone: ZoneInfo) -> int:
    """The moment at which the clock on the wall shows so many minutes after midnight."""
    wall = datetime.combine(day, time(minutes // 60, minutes % 60), zone)
    return round(wall.timestamp() * 1000)


def daily_moments(start_ms: int, end_ms: int, minutes: int, zone: ZoneInfo) -> Moments:
    """One moment a day by the clock on the wall, start ≤ moment ≤ end."""
    moments = [moment_of_day_ms(day, minutes, zone) for day in local_days(start_ms, end_ms, zone)]
    return np.array([m for m in moments if start_ms <= m <= end_ms], dtype=np.int64)
