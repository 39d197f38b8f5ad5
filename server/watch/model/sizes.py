"""How large a short can be, how it grows from round to round, and how often one begins."""

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

Numbers = NDArray[np.float64]

# Shares of the section's current that a short may take: from what no meter shows to more than half.
_LEAST, _MOST, _SIZES = 0.004, 0.6, 20

# Common practice: a short takes a few per cent of the current, a third or three times that as well.
_USUAL, _SPREAD = 0.04, 1.0

# Between two rounds most shorts stay, some grow by a step or two, few shrink.
_STEPS = ((0, 0.90), (1, 0.05), (2, 0.02), (-1, 0.03))

# Common practice, and wide: shorts begun for each crop of a cell.
ONSETS_PER_CROP = 0.2

# Share of shorts that end between two rounds unseen: knocked off, or burnt away.
HEALED = 0.003


@dataclass(frozen=True)
class Sizes:
    """Grid of short currents as shares of the section's current, and what is believed of them."""

    shares: Numbers
    prior: Numbers
    """How a new short is distributed; adds up to 1."""
    growth: Numbers
    """From each size (row) to each (column) between two rounds; rows add up to 1."""
    passing: Numbers
    """The same with no short as the first row and column, shorts that end included."""


@lru_cache(maxsize=1)
def sizes() -> Sizes:
    """The grid, made once."""
    shares = np.geomspace(_LEAST, _MOST, _SIZES)
    prior = np.exp(-0.5 * (np.log(shares / _USUAL) / _SPREAD) ** 2)
    growth = np.zeros((_SIZES, _SIZES))
    for start in range(_SIZES):
        for step, share in _STEPS:
            growth[start, min(max(start + step, 0), _SIZES - 1)] += share
    prior /= prior.sum()
    passing = np.zeros((_SIZES + 1, _SIZES + 1))
    passing[0, 0] = 1.0
    passing[1:, 0] = HEALED
    passing[1:, 1:] = growth * (1.0 - HEALED)
    return Sizes(shares, prior, growth, passing)
