"""What the age of a deposit does to a healthy cell's voltage, learned from pulls.

All cells of a section grow older together, so that only a pull, which makes one of them young
again, tells what age does: its first readings after it are held against its level before it.
"""

import numpy as np
from numpy.typing import NDArray

from server.watch.model.centre import held
from server.watch.model.facts import Facts
from server.watch.model.state import (
    AGE_SUM,
    AGE_WEIGHT,
    CROP_COUNT,
    CROP_SUM,
    YOUTH_COUNT,
    YOUTH_SUM,
    State,
)

Numbers = NDArray[np.float64]
Places = NDArray[np.int64]

_HOUR_MS = 3_600_000.0

# A cell just hung reads otherwise for some hours (common practice); later, age goes straight on.
_YOUTH_H = np.array([2.0, 5.0, 9.0, 16.0])

# Readings that stand for no effect of youth until others have been seen.
_YOUTH_BEFORE = 4.0

# Usual crops after which cathodes have been pulled, though nobody wrote it down.
OVERDUE = 3.0

# How much of what was gathered is kept from pull to pull.
_KEPT = 0.99

# Surprises count up to so many standard deviations.
_MOST = 2.5

# How likely healthy a cell must be to teach what age does.
_SOUND = 0.8


def age_of(state: State, facts: Facts, at: Places, at_ms: Places) -> tuple[Numbers, Places]:
    """Age of each deposit in crops, and its part of youth; half a crop where nothing is known."""
    lasts_ms = at_ms - state.hung_ms[at]
    is_known = lasts_ms <= OVERDUE * facts.crop_ms
    age = np.where(is_known, np.minimum(np.maximum(lasts_ms / facts.crop_ms, 0.0), 2.0), 0.5)
    hours = np.where(is_known, lasts_ms / _HOUR_MS, _YOUTH_H[-1])
    return age, np.searchsorted(_YOUTH_H, hours, side="right")


def age_effect_v(state: State, facts: Facts, age: Numbers, youth: Places) -> Numbers:
    """By how much a healthy cell of each age reads above one in the middle of its crop."""
    shared = state.shared
    early = shared[YOUTH_SUM] / (shared[YOUTH_COUNT] + _YOUTH_BEFORE)
    return np.asarray(age_slope_v(state, facts) * (age - 0.5) + np.append(early, 0.0)[youth])


def age_slope_v(state: State, facts: Facts) -> float:
    """By how much a healthy cell's voltage rises over a crop; none until pulls have shown it."""
    before = 1.0 / facts.spread_v**2
    return float(state.shared[AGE_SUM] / (state.shared[AGE_WEIGHT] + before))


def age_variance(state: State, facts: Facts, younger: Numbers) -> Numbers:
    """How unsure the effect is of growing younger by so many crops, squared."""
    return np.asarray(younger**2 / (state.shared[AGE_WEIGHT] + 1.0 / facts.spread_v**2))


def youth_variance(state: State, facts: Facts, youth: Places) -> Numbers:
    """How unsure the effect of youth is, squared."""
    unsure = _YOUTH_BEFORE * facts.noise_v**2 / (state.shared[YOUTH_COUNT] + _YOUTH_BEFORE)
    return np.asarray(np.append(unsure, 0.0)[youth])


def crop_variance(state: State, facts: Facts) -> float:
    """By how much the level of a cell changes from crop to crop, squared."""
    first = (0.3 * facts.noise_v) ** 2
    count = float(state.shared[CROP_COUNT])
    found = (float(state.shared[CROP_SUM]) + 10.0 * first) / (count + 10.0)
    return max(found, (0.05 * facts.noise_v) ** 2)


def learn_ages(
    state: State,
    facts: Facts,
    at: Places,
    age: Numbers,
    youth: Places,
    above_v: Numbers,
    base_var: Numbers,
    healthy: Numbers,
) -> None:
    """Hold the readings of young deposits against the cell's level before its pull."""
    fresh = state.fresh[at] > 0
    if not fresh.any():
        return
    cells, part = at[fresh], youth[fresh]
    crop_var = crop_variance(state, facts)
    var = state.before_var[cells] + base_var[fresh] + crop_var
    away = held(above_v[fresh] - state.before_v[cells], _MOST * np.sqrt(var))
    shared = state.shared
    is_old = part == len(_YOUTH_H)
    is_sound = healthy[fresh] > _SOUND
    early = shared[YOUTH_SUM] / (shared[YOUTH_COUNT] + _YOUTH_BEFORE)
    for place in np.flatnonzero(~is_old & is_sound).tolist():
        own = part[place]
        found = away[place] + early[own]
        shared[YOUTH_SUM][own] = _KEPT * shared[YOUTH_SUM][own] + found
        shared[YOUTH_COUNT][own] = _KEPT * shared[YOUTH_COUNT][own] + 1.0
    use = is_old & is_sound
    if use.any():
        kept = _KEPT ** int(use.sum())
        younger = age[fresh][use] - state.fresh[cells[use]]
        found = away[use] + age_slope_v(state, facts) * younger
        weight = 1.0 / var[use]
        shared[AGE_WEIGHT] = kept * shared[AGE_WEIGHT] + float((younger**2 * weight).sum())
        shared[AGE_SUM] = kept * shared[AGE_SUM] + float((younger * found * weight).sum())
        # A short that nobody saw made the level before the pull too low: only cells that read
        # less than before tell how far a crop by itself moves the level.
        lower = use & (away < 0.0)
        more = float((away[lower] ** 2 - (var[lower] - crop_var)).sum())
        shared[CROP_SUM] = kept * shared[CROP_SUM] + more
        shared[CROP_COUNT] = kept * shared[CROP_COUNT] + float(lower.sum())
    state.fresh[cells[is_old]] = 0.0
