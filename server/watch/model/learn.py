"""What the readings themselves teach: noise, resistance, how often shorts begin."""

import numpy as np
from numpy.typing import NDArray

from server.watch.model.centre import ENOUGH, held, middle
from server.watch.model.facts import Facts
from server.watch.model.rounds import Readings
from server.watch.model.sizes import ONSETS_PER_CROP, sizes
from server.watch.model.state import (
    COMMON_AMPS,
    COMMON_STEP_V,
    COMMON_V,
    ONSET_COUNT,
    ONSET_SUMS,
    RESISTANCE,
    RESISTANCE_VAR,
    State,
)

Numbers = NDArray[np.float64]
Places = NDArray[np.int64]

# Share by which a reading moves its cell's noise.
_NOISE_STEP = 0.03

# Readings that the first figure of the noise is worth, and how far a cell is drawn to the others.
_NOISE_BEFORE, _NOISE_ALIKE = 8.0, 0.02

# How much of what was gathered is kept from round to round.
_STEPS_KEPT = 0.9

# How much of the shorts seen at pulls is kept from pull to pull, and pulls the trade's figure
# is worth.
_ONSETS_KEPT, _ONSETS_BEFORE = 0.998, 20.0

# Surprises count up to so many standard deviations.
_MOST = 3.0

# Share of rated current by which it must have changed to teach anything about resistance.
_LEAST_CHANGE = 0.03

# A change of current that the log has missed is none to learn from: of the resistance as it is
# known the voltage must have followed to within this share, and the walk must have been steady.
_MOST_WRONG, _STEADY = 0.6, 0.02

# Variance by which a cell's own resistance may wander between rounds.
_TILT_WANDER = 1e-8


def learn_noise(
    state: State,
    facts: Facts,
    at: Places,
    surprise: Numbers,
    base_var: Numbers,
    var: Numbers,
    healthy: Numbers,
) -> None:
    """How much the readings of each healthy cell scatter: its own and the section's, half each."""
    share = np.sqrt(base_var / var)
    found = np.minimum(np.abs(surprise) * share, 4.0 * state.noise_v[at])
    known = state.known[at]
    share_of_one = np.maximum(_NOISE_STEP, 1.0 / (known + _NOISE_BEFORE)) * healthy
    own = state.noise_v[at] + share_of_one * (found - state.noise_v[at])
    state.noise_v[at] = np.maximum(own, facts.least_noise_v * 0.8)
    # A cell that is little known is taken to scatter as the others do.
    alike = np.maximum(_NOISE_ALIKE, 0.5 / (1.0 + known / _NOISE_BEFORE))
    state.noise_v[at] += alike * (middle(state.noise_v[at]) - state.noise_v[at])


def learn_onsets(state: State, some: Numbers, pulled: Numbers) -> None:
    """How many shorts of each size begin in a crop, from the cells that had one when pulled.

    Size by size, so that many large shorts do not make small ones likely that no reading shows.
    `pulled` is 1 for a cell that was; less where it is only likely.
    """
    count = float(pulled.sum())
    kept = _ONSETS_KEPT**count
    state.shared[ONSET_SUMS] = kept * state.shared[ONSET_SUMS] + pulled @ some
    state.shared[ONSET_COUNT] = kept * state.shared[ONSET_COUNT] + count


def onsets_per_crop(state: State) -> Numbers:
    """Shorts of each size that begin in a crop; the trade's figure until crops have been seen."""
    first = _ONSETS_BEFORE * ONSETS_PER_CROP * sizes().prior
    seen = state.shared[ONSET_SUMS] + first
    return np.asarray(seen / (state.shared[ONSET_COUNT] + _ONSETS_BEFORE))


def _is_steady(amps: Numbers) -> bool:
    """Whether the current stood still during the walk."""
    return bool(amps.max() - amps.min() < _STEADY * amps.max())


def learn_resistance(
    state: State,
    facts: Facts,
    at: Places,
    readings: Readings,
    common: Numbers,
    surprise: Numbers,
    sd: Numbers,
    healthy: Numbers,
    tilt_v: Numbers,
    var: Numbers,
) -> None:
    """How the section's voltage follows its current, and each cell's beside the section's.

    From a walk, that is: of one cell read twice a round alone is nothing to be learned.
    """
    if len(at) < ENOUGH:
        return
    shared = state.shared
    amps = middle(readings.amps)
    # What the cells share, at the current of the round: it does not hang on the resistance.
    now = middle(common) - shared[RESISTANCE] * (facts.rated_amps - amps)
    before, before_amps = shared[COMMON_V], shared[COMMON_AMPS]
    if np.isfinite(before):
        change = amps - before_amps
        miss = now - before - shared[RESISTANCE] * change
        noise = shared[COMMON_STEP_V]
        is_plain = abs(miss) < _MOST_WRONG * shared[RESISTANCE] * abs(change) + _MOST * noise
        if abs(change) > _LEAST_CHANGE * facts.rated_amps:
            if not is_plain or not _is_steady(readings.amps):
                shared[COMMON_V], shared[COMMON_AMPS] = np.nan, amps
                return
            total = change**2 * shared[RESISTANCE_VAR] + noise**2
            gain = change * shared[RESISTANCE_VAR] / total
            limit = _MOST * np.sqrt(total)
            shared[RESISTANCE] += gain * min(max(miss, -limit), limit)
            shared[RESISTANCE] = max(shared[RESISTANCE], 0.1 * facts.resistance_ohm)
            shared[RESISTANCE_VAR] *= 1.0 - gain * change
        else:
            found = min(abs(miss) * 1.2533141373155001, 4.0 * noise)
            shared[COMMON_STEP_V] = max(
                noise + (1.0 - _STEPS_KEPT) * (found - noise), 0.2 * facts.least_noise_v
            )
    shared[COMMON_V], shared[COMMON_AMPS] = now, amps
    gain_of = state.tilt_var[at] * tilt_v / var * healthy**2
    state.tilt[at] -= gain_of * held(surprise, _MOST * sd)
    state.tilt_var[at] = state.tilt_var[at] * (1.0 - gain_of * tilt_v) + _TILT_WANDER
