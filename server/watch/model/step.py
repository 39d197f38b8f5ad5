"""One round of a section taken in: what its cells share, and what each says of itself.

The model of a reading, referred to rated current: what the cells share that round, plus the
cell's level since its last pull, plus the effect of the deposit's age, less what a short takes,
plus noise. For each cell the shorts of every size on a grid are weighed against none (a Gaussian
sum: under each of them the cell's level is a normal distribution of its own), so that a short
that stands does not become the cell's level, and a level that is not known yet does not become a
short. With the onset of a short as likely as it is in practice this is Shiryaev's procedure, the
quickest there is for a given share of false calls (Theory Probab. Appl. 8 (1963) 22).
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from server.watch.model.ages import (
    OVERDUE,
    age_effect_v,
    age_of,
    age_variance,
    crop_variance,
    learn_ages,
    youth_variance,
)
from server.watch.model.centre import ENOUGH, broken, centre, held, middle
from server.watch.model.drift import gather
from server.watch.model.facts import Facts
from server.watch.model.learn import (
    learn_noise,
    learn_onsets,
    learn_resistance,
    onsets_per_crop,
)
from server.watch.model.rounds import Readings
from server.watch.model.sizes import sizes
from server.watch.model.state import (
    COMMON_STEP_V,
    ECHO_COUNT,
    ECHO_SUM,
    RESISTANCE,
    RESISTANCE_VAR,
    ROUNDS,
    SPREAD_V,
    State,
)

Numbers = NDArray[np.float64]
Truths = NDArray[np.bool_]

# Share of readings that are wrong in a way that nobody noticed, and how far those scatter.
_WRONG, _WRONG_SPREAD = 1e-3, 10.0

# How far a level wanders between two rounds, in noises.
_WANDER = 0.02

# Levels are moved by no more than this at once, in standard deviations.
_MOST_Z = 3.5

# Relative standard deviation of sizes spread evenly over a step of the grid.
_STEP_DOUBT = float(np.log(sizes().shares[1] / sizes().shares[0]) / np.sqrt(12.0))

# Share of a jump of the current within a walk by which readings after it are unsure, and readings
# on either side of it that may have been taken while it went on.
_ON_ITS_WAY, _NEAR = 0.1, 2

# How likely healthy a cell must be when it is pulled to teach anything of the next crop.
_SOUND = 0.8

# Least and most of what the deposit's age makes of the likelihood of a new short.
_LEAST_AGE, _MOST_AGE = 0.1, 3.0

_DAY_MS = 86_400_000.0


@dataclass(frozen=True)
class Outcome:
    """What a round said, by reading of the round."""

    readings: Readings
    expected_v: Numbers
    """What the cell would have read if it were healthy, at the current of the moment."""
    band_v: Numbers
    """Standard uncertainty of that, the noise of a reading included."""
    deviation_v: Numbers
    """At rated current."""
    probability: Numbers
    """That the cell has a short."""
    short_amps: Numbers
    """Expected short current: the mean over all sizes, none included."""
    given_amps: Numbers
    """The same, given that there is a short."""
    u_given_amps: Numbers
    lasting_v: Numbers
    """How far the cell has lately been from what it used to be."""
    u_lasting_v: Numbers


def pulled(state: State, facts: Facts, places: NDArray[np.int64], hung_ms: Numbers) -> None:
    """Cathodes were pulled and hung: the cell's shorts are gone, and its level is near the old."""
    weight, level, var = state.weight[places], state.level_v[places], state.level_var[places]
    mean = (weight * level).sum(axis=1)
    spread = (weight * (var + (level - mean[:, None]) ** 2)).sum(axis=1)
    is_known = state.known[places] > 0
    learn_onsets(state, weight[:, 1:], is_known.astype(float))
    crop_var = crop_variance(state, facts)
    state.weight[places] = 0.0
    state.weight[places, 0] = 1.0
    state.level_v[places] = mean[:, None]
    before = (hung_ms - state.hung_ms[places]) / facts.crop_ms
    before = np.where(before <= OVERDUE, np.clip(before, 0.0, 2.0), np.nan)
    unsure = crop_var + age_variance(state, facts, np.where(np.isfinite(before), before, 0.0))
    level_var = np.where(is_known, spread + unsure, state.shared[SPREAD_V] ** 2)
    state.level_var[places] = level_var[:, None]
    is_sound = is_known & np.isfinite(before) & (weight[:, 0] > _SOUND)
    state.fresh[places] = np.where(is_sound, before, 0.0)
    state.before_v[places], state.before_var[places] = mean, spread
    state.hung_ms[places] = hung_ms


def step(state: State, facts: Facts, readings: Readings, days: float) -> Outcome:
    """Take a round in, `days` after the last; changes the state."""
    grid = sizes()
    at = readings.place
    shared = state.shared
    resistance = shared[RESISTANCE]
    age, youth = age_of(state, facts, at, readings.at_ms)
    is_overdue = ~(readings.at_ms - state.hung_ms[at] <= OVERDUE * facts.crop_ms)
    _pass_time(state, at, age, is_overdue, facts, days)
    lift = facts.rated_amps - readings.amps
    aged_v = age_effect_v(state, facts, age, youth)
    referred = readings.volts + resistance * (1.0 + state.tilt[at]) * lift - aged_v
    noise_v = state.noise_v[at] * _STANDARD
    tilt_v = resistance * lift
    known = state.known[at] > 0
    if np.count_nonzero(known) < ENOUGH:
        _begin(state, at, referred, known)
    spread = np.sqrt(state.level_var[at, 0] + noise_v**2 + tilt_v**2 * state.tilt_var[at])
    rest = referred - state.level_v[at, 0]
    common, common_var = _common(state, rest, spread, state.weight[at, 0])
    # A cell that is new to the section starts from what the others read.
    drops = resistance * facts.rated_amps * np.concatenate(([0.0], grid.shares))
    level_var = state.level_var[at]
    base_var = noise_v**2 + common_var + tilt_v**2 * state.tilt_var[at]
    base_var += youth_variance(state, facts, youth)
    var = level_var + base_var[:, None]
    sd = np.sqrt(var)
    surprise = (referred - common)[:, None] - state.level_v[at] + drops
    z = surprise / sd
    weight = _weighed(state.weight[at], z, sd, temper(state))
    healthy = weight[:, 0]
    gain = level_var / var
    state.weight[at] = weight
    moved = state.level_v[at] + gain * held(z, _MOST_Z) * sd
    state.level_v[at] = moved
    state.level_var[at] = level_var * (1.0 - gain)
    first, first_sd = surprise[:, 0], sd[:, 0]
    learn_noise(state, facts, at, first, base_var, var[:, 0], healthy)
    learn_ages(state, facts, at, age, youth, referred - common, base_var, healthy)
    learn_resistance(
        state, facts, at, readings, common, first, first_sd, healthy, tilt_v, var[:, 0]
    )
    _echo(state, at, z[:, 0], healthy)
    lasting, u_lasting = gather(state, facts, at, referred - common, healthy, noise_v, base_var)
    state.known[at] += 1.0
    state.missed[at] = 0.0
    shared[ROUNDS] += 1.0
    return _outcome(
        readings, first, first_sd, weight, grid.shares, state, facts, lasting, u_lasting
    )


# Standard deviation of a normal distribution over its mean absolute deviation: root of pi / 2.
_STANDARD = 1.2533141373155001


def temper(state: State) -> float:
    """How much of a reading's evidence counts, where a cell's deviations echo the last ones."""
    count = float(state.shared[ECHO_COUNT])
    if count < 50.0:
        return 1.0
    echo = min(max(float(state.shared[ECHO_SUM]) / count, 0.0), 0.8)
    return (1.0 - echo) / (1.0 + echo)


def _pass_time(
    state: State,
    at: NDArray[np.int64],
    age: Numbers,
    is_overdue: Truths,
    facts: Facts,
    days: float,
) -> None:
    """Let shorts begin, grow and heal, and levels wander, in the time since the last round."""
    grid = sizes()
    weight, level, var = state.weight[at], state.level_v[at], state.level_var[at]
    lasts = min(max(days, 1.0 / 24.0), 2.0)
    crops = lasts * _DAY_MS / facts.crop_ms
    begin = onsets_per_crop(state)
    onset = 1.0 - np.exp(-begin.sum() * crops)
    into = np.concatenate(([-1.0], begin / begin.sum()))
    begun = np.minimum(onset * np.minimum(np.maximum(2.0 * age, _LEAST_AGE), _MOST_AGE), 0.5)
    # Under each size: how likely, and the level and its square times that.
    arrives = np.empty((3, *weight.shape))
    arrives[0] = weight
    np.multiply(weight, level, out=arrives[1])
    np.multiply(weight, var + level**2, out=arrives[2])
    began = arrives[:, :, :1] * begun[:, None]
    after = arrives @ grid.passing
    after += began * into
    wander = (_WANDER * state.noise_v[at] * _STANDARD) ** 2
    if is_overdue.any():
        # As many are pulled unseen as there are crops in that time, and their shorts with them.
        unseen = np.where(is_overdue, min(crops, 0.5), 0.0)
        learn_onsets(state, after[0, :, 1:], unseen)
        gone = after[:, :, 1:] * unseen[:, None]
        after[:, :, 1:] -= gone
        after[:, :, 0] += gone.sum(axis=2)
        wander = wander + crop_variance(state, facts) * unseen
    floor = np.maximum(after[0], 1e-300)
    # The level under each size is that of the mixture which arrives there.
    mean = after[1] / floor
    state.weight[at] = after[0]
    state.level_v[at] = mean
    state.level_var[at] = np.maximum(after[2] / floor - mean**2, 1e-12) + wander[:, None]


def _begin(state: State, at: NDArray[np.int64], referred: Numbers, known: Truths) -> None:
    """Take the spread of the cells from the first round."""
    if len(at) < ENOUGH:
        return
    spread = 1.4826 * middle(np.abs(referred - middle(referred)))
    if spread > 0.0:
        state.shared[SPREAD_V] = max(spread, middle(state.noise_v))
        state.level_var[state.known == 0] = state.shared[SPREAD_V] ** 2


def _common(
    state: State, rest: Numbers, spread: Numbers, trust: Numbers
) -> tuple[Numbers, Numbers]:
    """What the cells share, at each reading, and its variance."""
    parts = _parts(rest, spread)
    common, var = np.empty(len(rest)), np.empty(len(rest))
    for start, end in parts:
        cut = slice(start, end)
        if end - start >= ENOUGH:
            common[cut], var[cut] = centre(rest[cut], spread[cut], trust[cut])
        else:
            common[cut] = middle(rest[cut])
            var[cut] = state.shared[COMMON_STEP_V] ** 2
    if len(parts) > 1:
        var += _unsteadiness(parts, rest, spread, common)
    return common, var


def _unsteadiness(
    parts: list[tuple[int, int]], rest: Numbers, spread: Numbers, common: Numbers
) -> Numbers:
    """What the jumps of a walk make unsure: the current was not what the log says, for a while.

    The longest part is taken to be the plain one. In the others, and next to a jump, the current
    may still have been on its way.
    """
    longest = max(parts, key=lambda part: part[1] - part[0])
    plain = common[longest[0]]
    unsure = np.zeros(len(rest))
    for first, last in parts:
        cut = slice(first, last)
        jump = abs(float(common[first]) - float(plain))
        wide = 1.4826 * middle(np.abs(rest[cut] - common[cut]))
        more = max(wide**2 - float(middle(spread[cut])) ** 2, 0.0)
        unsure[cut] = more + (_ON_ITS_WAY * jump) ** 2
        if jump > 0.0:
            for edge in (first, last):
                near = slice(max(edge - _NEAR, 0), edge + _NEAR)
                unsure[near] = np.maximum(unsure[near], (0.5 * jump) ** 2)
    return unsure


def _parts(rest: Numbers, spread: Numbers) -> list[tuple[int, int]]:
    """Parts of the walk within which what the cells share did not jump."""
    open_parts = [(0, len(rest))]
    found: list[tuple[int, int]] = []
    while open_parts:
        start, end = open_parts.pop()
        place = broken(rest[start:end], spread[start:end])
        if place and len(found) + len(open_parts) < 4:
            open_parts += [(start, start + place), (start + place, end)]
        else:
            found.append((start, end))
    return found


def _weighed(before: Numbers, z: Numbers, sd: Numbers, power: float) -> Numbers:
    """How likely each size is after the reading."""
    right = np.exp(-0.5 * z**2) * ((1.0 - _WRONG) / sd)
    wrong = np.exp(-0.5 * (z / _WRONG_SPREAD) ** 2) * (_WRONG / _WRONG_SPREAD / sd)
    likely = right + wrong
    likely /= likely.max(axis=1, keepdims=True)
    if power < 1.0:
        likely **= power
    after = before * likely
    after /= after.sum(axis=1, keepdims=True)
    return np.asarray(after)


def _echo(state: State, at: NDArray[np.int64], z: Numbers, healthy: Numbers) -> None:
    """Gather how much deviations of healthy cells resemble those of the round before."""
    before = state.last_z[at]
    now = held(z, _MOST_Z)
    use = np.isfinite(before) & (healthy > 0.9)
    if use.any():
        fade = 0.98
        state.shared[ECHO_SUM] = fade * state.shared[ECHO_SUM] + float((before * now)[use].mean())
        state.shared[ECHO_COUNT] = fade * state.shared[ECHO_COUNT] + 1.0
    state.last_z[at] = np.where(healthy > 0.9, now, np.nan)


def _outcome(
    readings: Readings,
    surprise: Numbers,
    sd: Numbers,
    weight: Numbers,
    shares: Numbers,
    state: State,
    facts: Facts,
    lasting: Numbers,
    u_lasting: Numbers,
) -> Outcome:
    some = weight[:, 1:]
    probability = some.sum(axis=1)
    share = some @ shares
    floor = np.maximum(probability, 1e-12)
    given = share / floor
    # Sizes between two steps of the grid are as likely as those on it.
    given_var = np.maximum((some @ shares**2) / floor - given**2, 0.0) + (given * _STEP_DOUBT) ** 2
    relative = state.shared[RESISTANCE_VAR] / state.shared[RESISTANCE] ** 2
    given_amps = given * facts.rated_amps
    return Outcome(
        readings=readings,
        expected_v=readings.volts - surprise,
        band_v=sd,
        deviation_v=surprise,
        probability=probability,
        short_amps=share * facts.rated_amps,
        given_amps=given_amps,
        u_given_amps=np.sqrt(given_var * facts.rated_amps**2 + given_amps**2 * relative),
        lasting_v=lasting,
        u_lasting_v=u_lasting,
    )
