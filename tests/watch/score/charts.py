"""Scores become flags: raised above a limit, ended well below it or with the cathodes.

A score of a reading is the higher the more it speaks for a short. Every detector but the watch
itself is used in this way, and its limit set so that it raises as many flags falsely as asked for.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tests.watch.plants.plant import Numbers, Plant, Truths
from tests.watch.score.watched import Flag

FALSE_SHARE = 2e-3
"""Flags raised falsely for each reading."""

IN_A_ROW = 2
"""Readings in a row that end a flag."""


@dataclass(frozen=True)
class Scored:
    """Scores of a plant's readings, NaN where there is none.

    `over` of a limit answers the score below which a reading speaks for the end of a flag.
    """

    plant: Plant
    scores: Numbers
    over: Callable[[float], float]
    act: float = np.inf
    """Score from which a flag says to act."""


def standing(scored: Scored, limit: float) -> Truths:
    """At which readings a flag stands, rounds by cells."""
    scores, crop_of = scored.scores, scored.plant.crop_of
    least = scored.over(limit)
    stands = np.zeros(scores.shape, bool)
    is_open = np.zeros(scores.shape[1], bool)
    calm = np.zeros(scores.shape[1], np.int64)
    is_high, is_low, is_there = scores >= limit, scores < least, np.isfinite(scores)
    for number in range(len(scores)):
        if number:
            is_open &= crop_of[number] == crop_of[number - 1]
        calm = np.where(is_low[number], calm + 1, np.where(is_there[number], 0, calm))
        is_open = (is_open & (calm < IN_A_ROW)) | is_high[number]
        calm[~is_open] = 0
        stands[number] = is_open
    return stands


def raises(scored: Scored, stands: Truths) -> Truths:
    """At which readings a flag is raised: where one stands that did not, or of other cathodes."""
    crop_of = scored.plant.crop_of
    before = np.zeros(stands.shape, bool)
    before[1:] = stands[:-1] & (crop_of[1:] == crop_of[:-1])
    return stands & ~before


def has_cause(plant: Plant) -> Truths:
    """Whether the cell had, at the reading, what lowers a voltage: a short or a narrowed gap."""
    cause = plant.has_short.copy()
    for drift in plant.drifts:
        if drift.sense < 0:
            column = plant.at_ms[:, drift.cell - 1]
            cause[:, drift.cell - 1] |= (column >= drift.from_ms) & (column < drift.to_ms)
    return cause


def limit_for(scored: Sequence[Scored], low: float, high: float) -> float:
    """The limit at which plants together raise the share asked for falsely, by halving.

    Plants that were made for one measure alone have no say, unless there are no others.
    """
    of_usual = [one for one in scored if not one.plant.scenario.only_steps]
    scored = of_usual or scored
    readings = sum(int(one.plant.is_read.sum()) for one in scored)
    causes = [has_cause(one.plant) for one in scored]
    for _ in range(14):
        middle = 0.5 * (low + high)
        count = sum(
            int((raises(one, standing(one, middle)) & ~cause).sum())
            for one, cause in zip(scored, causes, strict=True)
        )
        low, high = (middle, high) if count > FALSE_SHARE * readings else (low, middle)
    return high


def flags_of(scored: Scored, limit: float, amps: Numbers | None = None) -> tuple[Flag, ...]:
    """The flags, with the short current at the reading that raised each, where it is said."""
    plant = scored.plant
    stands = standing(scored, limit)
    raised = raises(scored, stands)
    flags = []
    for number, place in np.argwhere(raised).tolist():
        end = _end(stands[:, place], raised[:, place], number)
        flags.append(
            Flag(
                cell=place + 1,
                kind="short",
                tier="act" if (scored.scores[number:end, place] >= scored.act).any() else "look",
                raised_ms=int(plant.at_ms[number, place]),
                ended_ms=None if end is None else _ended_ms(plant, end, place, number),
                short_amps=None if amps is None else float(amps[number, place]),
            )
        )
    return tuple(flags)


def _end(stands: NDArray[np.bool_], raised: NDArray[np.bool_], number: int) -> int | None:
    """The round in which a flag no longer stands, or another one does."""
    later = np.flatnonzero(~stands[number + 1 :] | raised[number + 1 :])
    return number + 1 + int(later[0]) if later.size else None


def _ended_ms(plant: Plant, end: int, place: int, number: int) -> int:
    """When a flag ended: with the cathodes if they were pulled, else at the reading."""
    is_pulled = plant.crop_of[end, place] != plant.crop_of[end - 1, place]
    if is_pulled:
        return max(int(plant.hung_ms[end, place]), int(plant.at_ms[number, place]) + 1)
    return int(plant.at_ms[end, place])
