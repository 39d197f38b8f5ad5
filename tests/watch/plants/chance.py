"""Noise with a memory."""

from itertools import accumulate
from math import exp, sqrt

import numpy as np

from tests.watch.plants.plant import Numbers


def wander(rng: np.random.Generator, count: int, spread: float, memory: float) -> Numbers:
    """Stationary noise of a standard deviation that forgets itself over `memory` samples."""
    keep = exp(-1.0 / memory)
    pushes = rng.normal(0.0, spread * sqrt(1.0 - keep * keep), count)
    pushes[:1] = rng.normal(0.0, spread)
    return np.fromiter(
        accumulate(pushes.tolist(), lambda so_far, push: keep * so_far + push), float, count
    )
