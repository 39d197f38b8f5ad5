"""Which voltages are not to be believed: each against what its cell should have shown.

What a cell should show is the median of its last believed readings, referred to one current with
its differential resistance, moved by what all cells of the round moved, and turned back to the
current of the moment.
"""

import numpy as np
from sqlalchemy.orm import Session

from server.intake.checks import Suspicions, suspicions
from server.intake.explain import Suspicion
from server.intake.history import (
    LAST_READINGS,
    Numbers,
    Readings,
    Tails,
    Whole,
    Yes,
    by_cell,
    by_round,
    medians_before,
)
from server.intake.row_slip import LOG_RATIO, MOST_FROM_ONE, SHORTEST, row_slip
from server.intake.verdicts import Given
from server.intake.yardstick import Currents, Yardstick, is_working, yardstick
from server.science.uncertainty.propagation import standard_from_limit
from server.storage.plant import SectionPlan
from server.storage.walk import walking_order

_LEAST_IN_A_ROUND = 3
"""Readings of which a common movement can be told from one cell's own."""

_LEAST_OF_A_CELL = 12
"""Readings from which a cell's own noise is told; with fewer, the section's is taken."""

_USUAL_DECIMALS, _NEARLY_ALL, _DUST = 3, 0.9, 1e-6
"""Meters show millivolts; some plants write down less. By chance one reading in ten ends in a
zero, so that nine in ten have to."""

_LARGEST_FALL, _LARGEST_RISE = -0.75, 0.5
"""A section that is cut to a quarter of its current loses less than three quarters of its
voltage, even where all of it follows the current; none is driven half above its usual one."""

_MAD_TO_STANDARD = 1.4826
"""For normal noise the standard deviation is 1.4826 times the median absolute deviation."""

_WORTH_A_LOOK = 0.8 * LOG_RATIO
"""Rounds whose best stretch comes this near to a row slip are looked at in full."""


class Belief:
    """Judges the readings of one delivery, chunk after chunk."""

    def __init__(self, given: Given) -> None:
        self._tails: dict[int, Tails] = {}
        self._currents = Currents(given.max_hold_ms)

    def doubts(
        self, session: Session, plan: SectionPlan, number: Whole, at_ms: Whole, volts: Numbers
    ) -> dict[int, Suspicion]:
        """Doubts about readings of one section, by place; cells by number, then by time."""
        if plan.id not in self._tails:
            self._tails[plan.id] = Tails(plan)
        tails = self._tails[plan.id]
        readings = tails.with_former(session, number, at_ms, volts)
        terms = yardstick(plan, readings.at_ms)
        amps = self._currents.amps(session, plan, readings.at_ms)
        working = is_working(session, plan, readings, amps, terms.rated_amps)
        judgement = _Judgement(readings, terms, amps, working)
        doubts = judgement.doubts()
        doubts |= judgement.slipped_rows(plan)
        believed = working.copy()
        believed[list(doubts)] = False
        tails.follow(readings, believed)
        # Places among the new readings, which lie in the same order as they were given.
        rank = np.cumsum(readings.is_new) - 1
        return {
            int(rank[place]): doubts[place] for place in sorted(doubts) if readings.is_new[place]
        }


class _Judgement:
    """The readings of one section in one chunk, against what they should have shown."""

    def __init__(self, readings: Readings, terms: Yardstick, amps: Numbers, working: Yes) -> None:
        self._readings = readings
        self._terms = terms
        self._working = working
        self._volts = np.where(working, readings.volts, np.nan)
        self._decimals = _decimals_of(readings.volts)
        self._rounds = by_round(readings)
        known_amps = np.where(np.isnan(amps), terms.rated_amps, amps)
        self._follows_v = terms.resistance_ohm * known_amps
        self._level_v = readings.volts - self._follows_v
        own = medians_before(readings, self._level_v, working)
        self._common_v = self._common(own)
        self._expected_v = own + self._common_v + self._follows_v
        self._noise_v = self._noise()
        self._previous_v = self._previous()

    def _common(self, own: Numbers) -> Numbers:
        """What the cells of each reading's round moved together.

        A movement that no section makes, such as a whole round in millivolts, is none.
        """
        away = np.where(self._working, self._level_v - own, np.nan)
        moved = self._rounds.medians(away, _LEAST_IN_A_ROUND)
        size = self._rounds.medians(own + self._follows_v, _LEAST_IN_A_ROUND)
        is_possible = (moved > _LARGEST_FALL * size) & (moved < _LARGEST_RISE * size)
        return np.where(is_possible, moved, 0.0)[self._rounds.group]

    def _noise(self) -> Numbers:
        """Standard deviation of an honest reading of each cell.

        At the least it is the meter's own, and that of rounding to the digits written down.
        """
        size = np.abs(self._volts - self._expected_v)
        is_known = np.isfinite(size)
        of_section = float(np.median(size[is_known])) if is_known.any() else 0.0
        of_cell = by_cell(self._readings).medians(size, _LEAST_OF_A_CELL)
        spread = np.where(np.isnan(of_cell), of_section, of_cell) * _MAD_TO_STANDARD
        rounding = standard_from_limit(0.5 / 10.0**self._decimals)
        least = np.maximum(self._terms.meter_u_v, rounding)
        return np.maximum(spread[self._readings.number], least)

    def _previous(self) -> Numbers:
        """The cell's reading before each, referred to the current and the round of this one."""
        former = np.full(len(self._readings), np.nan)
        again = np.flatnonzero(np.diff(self._readings.number) == 0) + 1
        level = np.where(self._working, self._level_v - self._common_v, np.nan)
        former[again] = level[again - 1]
        return former + self._common_v + self._follows_v

    def doubts(self) -> dict[int, Suspicion]:
        """Readings that are not to be believed by themselves, by place."""
        every = np.arange(len(self._readings))
        first = self._suspicions(every)
        doubts = {place: first.at(place) for place in first.found.tolist()}
        if not doubts:
            return doubts
        # What is doubted is no yardstick for the readings after it: they are judged again.
        usable = self._working.copy()
        usable[first.found] = False
        after = first.found[:, None] + np.arange(1, LAST_READINGS + 1)
        after = np.unique(after[after < len(every)])
        own = medians_before(self._readings, self._level_v, usable, after)
        self._expected_v[after] = own + self._common_v[after] + self._follows_v[after]
        second = self._suspicions(after)
        for i, place in enumerate(after.tolist()):
            doubts.pop(place, None)
            if second.codes[i]:
                doubts[place] = second.at(i)
        return doubts

    def _suspicions(self, places: Whole) -> Suspicions:
        terms = self._terms
        return suspicions(
            self._volts[places],
            self._expected_v[places],
            self._noise_v[places],
            terms.low_volts[places],
            terms.high_volts[places],
            previous_volts=self._previous_v[places],
            decimals=self._decimals,
            resistive_share=terms.resistive_share[places],
        )

    def slipped_rows(self, plan: SectionPlan) -> dict[int, Suspicion]:
        """Readings that were entered one line up or down, by place."""
        walk = np.empty(len(plan.cell_ids) + 1, np.int64)
        largest = max(plan.terms, key=lambda terms: (terms.cells, terms.from_ms))
        walk[list(walking_order(largest))] = np.arange(len(plan.cell_ids))
        position = walk[self._readings.number]
        order = np.lexsort((position, self._rounds.group))
        doubts: dict[int, Suspicion] = {}
        for places in self._rounds_worth_a_look(order, position):
            if not self._readings.is_new[places].any():
                continue
            slip = row_slip(*self._in_walking_order(places, position[places] - position[places[0]]))
            if slip is not None:
                offset = position[places] - position[places[0]]
                for place, i in zip(places.tolist(), offset.tolist(), strict=True):
                    if slip.mask[i]:
                        doubts[place] = slip.at(i)
        return doubts

    def _in_walking_order(self, places: Whole, offset: Whole) -> tuple[Numbers, Numbers, Numbers]:
        """Readings, expectations and noises of one round, NaN where a cell was not read."""
        length = int(offset[-1]) + 1
        volts, expected = np.full(length, np.nan), np.full(length, np.nan)
        noise = np.full(length, np.nan)
        volts[offset] = self._volts[places]
        expected[offset] = self._expected_v[places]
        noise[offset] = self._noise_v[places]
        return volts, expected, noise

    def _rounds_worth_a_look(self, order: Whole, position: Whole) -> list[Whole]:
        """Places of the readings of each round in which some stretch may have slipped.

        The best stretch of every round is found at once: the largest sum of a run, by running
        sums and running minima that start anew with each round.
        """
        group, volts = self._rounds.group[order], self._volts[order]
        expected, noise = self._expected_v[order], self._noise_v[order]
        size, starts = self._rounds.size, self._rounds.start
        own = _misfit(volts, expected, noise)
        is_wanted = np.zeros(len(size), bool)
        for shift in (1, -1):
            neighbour = np.full(len(order), np.nan)
            is_next = (np.diff(group) == 0) & (np.diff(position[order]) == 1)
            here, there = (slice(None, -1), slice(1, None))
            if shift < 0:
                here, there = there, here
            neighbour[here] = np.where(is_next, expected[there], np.nan)
            gain = np.nan_to_num((own - _misfit(volts, neighbour, noise)) / 2)
            is_wanted[group[_best_run_sums(group, gain) >= _WORTH_A_LOOK]] = True
        is_wanted &= size >= SHORTEST
        return [
            order[starts[number] : starts[number] + size[number]]
            for number in np.flatnonzero(is_wanted).tolist()
        ]


def _decimals_of(volts: Numbers) -> int:
    """How many decimals are written down, as nearly all of the readings show."""
    if len(volts) >= _LEAST_OF_A_CELL:
        for decimals in range(1, _USUAL_DECIMALS):
            scaled = volts * 10.0**decimals
            if np.mean(np.abs(scaled - np.rint(scaled)) < _DUST) > _NEARLY_ALL:
                return decimals
    return _USUAL_DECIMALS


def _misfit(volts: Numbers, expected: Numbers, noise: Numbers) -> Numbers:
    squared: Numbers = np.minimum(((volts - expected) / noise) ** 2, 2 * MOST_FROM_ONE)
    return squared


def _best_run_sums(group: Whole, gain: Numbers) -> Numbers:
    """Largest sum of a run that ends at each place and lies within its group."""
    total = np.cumsum(gain)
    # Each group is set lower than all before it, so that a running minimum starts anew.
    step = float(np.abs(gain).max(initial=0.0)) * len(gain) + 1.0
    lowered = total - step * group
    before = lowered - gain
    return lowered - np.minimum.accumulate(before)
