"""What a house can do without a model: limits, three sigma of a cell's own past, EWMA, CUSUM.

Each answers scores; their limits are set as those of every detector here, for the same share of
false flags.
"""

import numpy as np

from server.science.statistics.cusum import cusum, cusum_start, restarted
from server.science.statistics.ewma import EwmaState, ewma, ewma_start
from server.science.statistics.spread import median, robust_sd
from tests.watch.plants.plant import Numbers, Plant
from tests.watch.score.charts import Scored

WINDOW = 30
"""Readings of a cell's own past."""
ENOUGH = 8
WEIGHT = 0.25
"""Of the newest reading in the EWMA."""
REFERENCE = 0.75
"""Of the CUSUM, in standard deviations: it is made for shifts of one and a half."""


def fixed_limits(plant: Plant) -> Scored:
    """How far a reading, referred to rated current, lies under the middle of the target, V."""
    return Scored(plant, plant.scenario.trade.volts - _referred_v(plant), over=lambda limit: limit)


def three_sigma(plant: Plant) -> Scored:
    """How far it lies under the mean of the cell's own past, in its own standard deviations."""
    referred_v = _referred_v(plant)
    past = _past(referred_v)
    count = np.isfinite(past).sum(axis=-1)
    mean = np.nansum(past, axis=-1) / np.maximum(count, 1)
    square = np.nansum((past - mean[..., None]) ** 2, axis=-1) / np.maximum(count - 1, 1)
    sd = np.maximum(np.sqrt(square), 1e-4)
    scores = np.where(count >= ENOUGH, (mean - referred_v) / sd, np.nan)
    return Scored(plant, scores, over=lambda limit: 0.5 * limit)


def own_ewma(plant: Plant) -> Scored:
    """EWMA of the distance from the round's median and from the cell's own level."""
    z = _standardised(plant)
    scores = np.full(z.shape, np.nan)
    state = ewma_start(plant.cells)
    for number, row in enumerate(z):
        state = EwmaState(np.where(_pulled(plant, number), 0.0, state.averages), state.readings)
        state = ewma(row[None, :], WEIGHT, state).state
        scores[number] = np.where(np.isfinite(row), -state.averages, np.nan)
    return Scored(plant, scores, over=lambda limit: 0.5 * limit)


def own_cusum(plant: Plant) -> Scored:
    """One-sided CUSUM of the same distance."""
    z = _standardised(plant)
    scores = np.full(z.shape, np.nan)
    state = cusum_start(plant.cells)
    for number, row in enumerate(z):
        state = restarted(state, _pulled(plant, number))
        state = cusum(row[None, :], REFERENCE, -1, state).state
        scores[number] = np.where(np.isfinite(row), state.sums, np.nan)
        # A sum that stands far above its limit would take weeks to say that a short is over.
        state = restarted(state, state.sums > MOST_SUM, MOST_SUM)
    return Scored(plant, scores, over=lambda limit: 0.5 * limit)


MOST_SUM = 20.0


def _pulled(plant: Plant, number: int) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
    """Cells whose cathodes were pulled between the round before and this one."""
    if number == 0:
        return np.zeros(plant.cells, bool)
    return np.asarray(plant.crop_of[number] != plant.crop_of[number - 1])


def logged_amps(plant: Plant) -> Numbers:
    """The current that the logger says flowed at each reading."""
    place = np.searchsorted(plant.logged_ms, plant.at_ms, side="right") - 1
    return plant.logged_amps[np.maximum(place, 0)]


def _referred_v(plant: Plant) -> Numbers:
    """Readings referred to rated current with the trade's usual resistance."""
    trade = plant.scenario.trade
    amps = logged_amps(plant)
    ohm = trade.resistive_v / trade.rated_amps
    is_used = np.isfinite(plant.volts) & (amps >= 0.2 * trade.rated_amps)
    is_used &= plant.is_read  # slips of the pen are held back before anybody looks
    return np.where(is_used, plant.volts + ohm * (trade.rated_amps - amps), np.nan)


def _past(values: Numbers) -> Numbers:
    """The values before each, shape (rounds, cells, window), NaN where there are none yet."""
    padded = np.concatenate((np.full((WINDOW, values.shape[1]), np.nan), values[:-1]))
    return np.asarray(np.lib.stride_tricks.sliding_window_view(padded, WINDOW, axis=0))


def _standardised(plant: Plant) -> Numbers:
    """Distance from the round's median, less the cell's own usual one, in its own deviations."""
    referred_v = _referred_v(plant)
    residual_v = referred_v - median(referred_v, axis=1)[:, None]
    past = _past(residual_v)
    count = np.isfinite(past).sum(axis=-1)
    sd = np.maximum(robust_sd(past), 0.3 * plant.scenario.noise_v)
    z = (residual_v - median(past)) / np.where(count >= ENOUGH, sd, np.nan)
    return np.clip(z, -10.0, 10.0)
