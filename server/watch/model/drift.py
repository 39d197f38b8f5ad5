"""Cells that leave what they used to read, slowly and for good."""

import numpy as np
from numpy.typing import NDArray

from server.watch.model.centre import ENOUGH, held, middle
from server.watch.model.facts import Facts
from server.watch.model.state import CROP_COUNT, CROP_SUM, State

Numbers = NDArray[np.float64]

# Weight of the newest reading in the recent mean (Roberts 1959): it looks back about three days.
RECENT = 0.12

# A reading counts in full up to so many times the variance of a plain one.
_SURE = 1.5

# The reference takes the mean of the first readings, then follows over about four months.
_SETTLED, _LEARNED, _FOLLOWS = 20.0, 45.0, 1.0 / 360.0


def gather(
    state: State,
    facts: Facts,
    at: NDArray[np.int64],
    above_v: Numbers,
    healthy: Numbers,
    noise_v: Numbers,
    base_var: Numbers,
) -> tuple[Numbers, Numbers]:
    """Recent mean of each cell against its reference, and how far chance alone takes it.

    A reading counts as far as the cell is healthy: what a short takes is no drift.
    """
    known = state.known[at]
    limit = 4.0 * noise_v
    new = known < 1
    state.reference_v[at] = np.where(new, above_v, state.reference_v[at])
    away = above_v - state.reference_v[at]
    is_settled = known >= _SETTLED
    before = state.recent_v[at]
    sure = healthy * np.minimum(1.0, _SURE * noise_v**2 / base_var)
    recent = before + RECENT * sure * held(away - before, limit)
    recent = np.where(is_settled, recent, 0.0)
    state.recent_v[at] = recent
    follow = np.where(known >= _LEARNED, _FOLLOWS, 1.0 / (known + 1.0)) * sure
    state.reference_v[at] += follow * held(away, 2 * limit)
    if np.count_nonzero(is_settled) >= ENOUGH:
        # What all cells do is no drift of one.
        recent = recent - middle(recent[is_settled])
    crop_var = max(state.shared[CROP_SUM] / (state.shared[CROP_COUNT] + 10.0), 0.0)
    chance = np.sqrt(
        noise_v**2 * (RECENT / (2.0 - RECENT) + 1.0 / np.clip(known, 1.0, _LEARNED))
        + 0.5 * crop_var
    )
    return recent, chance
