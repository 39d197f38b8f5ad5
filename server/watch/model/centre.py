"""What the cells of a round share: a robust centre that a short, which only lowers, cannot drag."""

import numpy as np
from numpy.typing import NDArray

Numbers = NDArray[np.float64]
Truths = NDArray[np.bool_]

# Fewer cells than this say nothing of what they share.
ENOUGH = 4

# Where the weight of a reading begins to fall, and below which it has none, in noises.
_LOW_BEND, _LOW_END, _HIGH_BEND, _HIGH_END = 1.5, 3.0, 2.5, 8.0

# Noises by which two parts of a round must differ, over all their readings, to be kept apart.
_BREAK = 7.0

# Readings on either side of a break, and the share of them that must go with their side.
_LEAST_PART, _AGREE = 5, 0.7


def middle(values: Numbers) -> float:
    """The median of a few numbers, none of them missing; NumPy's own takes ten times as long."""
    row = np.sort(values)
    half = len(row) // 2
    return float(row[half]) if len(row) % 2 else float((row[half - 1] + row[half]) / 2)


def held(values: Numbers, limit: Numbers | float) -> Numbers:
    """Numbers no further from zero than a limit; NumPy's own `clip` takes three times as long."""
    return np.minimum(np.maximum(values, -limit), limit)


def centre(rest_v: Numbers, noise_v: Numbers, trust: Numbers) -> tuple[float, float]:
    """Centre of the readings less their levels, and its variance.

    `trust` is how likely each cell is healthy; those more likely not are left out while enough
    others are there. Two steps from the median, lower readings losing weight sooner.
    """
    good = trust > 0.5
    if np.count_nonzero(good) < ENOUGH:
        good = np.ones(len(rest_v), bool)
    rest, noise = rest_v[good], noise_v[good]
    found = middle(rest)
    base = trust[good] / noise**2 if trust[good].any() else 1.0 / noise**2
    for _ in range(2):
        z = (rest - found) / noise
        weight = base * np.where(
            z < -_LOW_BEND,
            np.where(z < -_LOW_END, 0.0, _LOW_BEND / np.maximum(-z, _LOW_BEND)),
            np.where(z > _HIGH_END, 0.0, _HIGH_BEND / np.maximum(z, _HIGH_BEND)),
        )
        total = float(weight.sum())
        if total <= 0.0:
            break
        found = float((weight * rest).sum()) / total
    total = float(base.sum()) if total <= 0.0 else total
    return found, 1.0 / total


def broken(rest_v: Numbers, noise_v: Numbers) -> int:
    """Place in the walk at which what the cells share changed; 0 where it did not.

    A current that steps between two of its samples, or a meter that is exchanged, moves every
    reading from there on. Shorts do not stand in a row of five or more.
    """
    count = len(rest_v)
    if count < 2 * _LEAST_PART:
        return 0
    z = held((rest_v - middle(rest_v)) / noise_v, 8.0)
    sums = np.cumsum(z)[:-1]
    before = np.arange(1, count)
    after = count - before
    step = sums / before - (sums[-1] + z[-1] - sums) / after
    strength = np.abs(step) / np.sqrt(1.0 / before + 1.0 / after)
    strength[: _LEAST_PART - 1] = 0.0
    strength[count - _LEAST_PART :] = 0.0
    place = int(np.argmax(strength))
    if strength[place] < _BREAK or abs(step[place]) < 3.0:
        return 0
    first, last = rest_v[: place + 1], rest_v[place + 1 :]
    before_v, after_v = middle(first), middle(last)
    if abs(before_v - after_v) <= 3.0 * middle(noise_v):
        return 0
    for part, own_v, other_v in ((first, before_v, after_v), (last, after_v, before_v)):
        agree = np.count_nonzero(np.abs(part - own_v) < np.abs(part - other_v))
        if agree < max(_LEAST_PART, _AGREE * len(part)):
            return 0
    return place + 1
