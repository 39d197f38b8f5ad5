"""The readings that a new one is held against: the last few of each cell, and its round."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.plant import SectionPlan
from server.storage.readings_before import last_believed

Numbers = NDArray[np.float64]
Whole = NDArray[np.int64]
Yes = NDArray[np.bool_]

LAST_READINGS = 5
"""A median of five stands firm against two wrong ones, and follows a crop within two days."""

REACH_MS = 10 * 86_400_000
"""Older readings tell little: another crop hangs in the cell."""

ROUND_GAP_MS = 45 * 60_000
"""Whoever walks a section stops for less than this; a longer pause is the end of a round."""

_SPARSE = 4
"""Groups are laid out as a table unless it would be this much larger than what is in it."""

_SHORT_SPAN_MS = 2 * 86_400_000
_NEVER_MS = -(2**62)


@dataclass(frozen=True, slots=True)
class Readings:
    """Readings of one section by cell and time; `is_new` tells those that are to be judged."""

    number: Whole
    at_ms: Whole
    volts: Numbers
    is_new: Yes

    def __len__(self) -> int:
        return len(self.at_ms)


class Tails:
    """The last believed readings of each cell of a section, as a delivery goes on."""

    def __init__(self, plan: SectionPlan) -> None:
        cells = len(plan.cell_ids)
        self._plan = plan
        self._at_ms = np.full((cells, LAST_READINGS), _NEVER_MS)
        self._volts = np.full((cells, LAST_READINGS), np.nan)
        self._is_known = np.zeros(cells, bool)

    def with_former(
        self, session: Session, number: Whole, at_ms: Whole, volts: Numbers
    ) -> Readings:
        """Put the new readings, given by cell and time, behind what is known from before.

        The cells that are read anew are looked up where need be. Of the section's other
        cells, which belong to the same rounds, what is at hand is taken; they are looked up
        only when the new readings are those of a few rounds.
        """
        first = np.append(True, np.diff(number) != 0)
        read, first_ms = number[first] - 1, at_ms[first]
        before_ms = np.full(len(self._is_known), int(at_ms.min()))
        before_ms[read] = first_ms
        newest = self._at_ms.max(axis=1)
        is_wanted = np.zeros(len(newest), bool)
        is_wanted[read] = ~self._is_known[read] | (newest[read] >= first_ms)
        if int(at_ms.max()) - int(at_ms.min()) < _SHORT_SPAN_MS:
            is_wanted |= ~self._is_known
        self._look_up(session, np.flatnonzero(is_wanted), before_ms)
        is_former = (self._at_ms < before_ms[:, None]) & (
            self._at_ms >= before_ms[:, None] - REACH_MS
        )
        cells, _ = np.nonzero(is_former)
        every = np.concatenate((cells + 1, number))
        # What is known of a cell lies before what is new of it, and is in order itself.
        order = np.argsort(every, kind="stable")
        return Readings(
            every[order],
            np.concatenate((self._at_ms[is_former], at_ms))[order],
            np.concatenate((self._volts[is_former], volts))[order],
            np.concatenate((np.zeros(len(cells), bool), np.ones(len(number), bool)))[order],
        )

    def follow(self, readings: Readings, is_believed: Yes) -> None:
        """Keep the last believed readings of each cell."""
        number, at_ms = readings.number[is_believed], readings.at_ms[is_believed]
        volts = readings.volts[is_believed]
        if not len(number):
            return
        ends = np.append(np.flatnonzero(np.diff(number)), len(number) - 1)
        starts = np.append(0, ends[:-1] + 1)
        cells = number[ends] - 1
        places = ends[:, None] - np.arange(LAST_READINGS - 1, -1, -1)
        is_own = places >= starts[:, None]
        places = np.maximum(places, 0)
        self._at_ms[cells] = np.where(is_own, at_ms[places], _NEVER_MS)
        self._volts[cells] = np.where(is_own, volts[places], np.nan)
        self._is_known[cells] = True

    def _look_up(self, session: Session, cells: Whole, before_ms: Whole) -> None:
        if not len(cells):
            return
        ids = [self._plan.cell_ids[cell] for cell in cells.tolist()]
        wanted = list(zip(ids, before_ms[cells].tolist(), strict=True))
        cell_id, at_ms, microvolts = last_believed(session, wanted, REACH_MS, LAST_READINGS)
        self._at_ms[cells] = _NEVER_MS
        self._volts[cells] = np.nan
        self._is_known[cells] = True
        if not len(cell_id):
            return
        first = np.append(True, np.diff(cell_id) != 0)
        place = np.arange(len(cell_id)) - np.maximum.accumulate(
            np.where(first, np.arange(len(cell_id)), 0)
        )
        by_id = np.argsort(ids)
        row = cells[by_id[np.searchsorted(np.array(ids)[by_id], cell_id)]]
        self._at_ms[row, place] = at_ms
        self._volts[row, place] = microvolts / 1e6


def medians_before(
    readings: Readings, values: Numbers, is_usable: Yes, places: Whole | None = None
) -> Numbers:
    """For each reading the median of the cell's last usable values before it; NaN for none.

    With `places`, only for the readings there.
    """
    asked = np.arange(len(readings)) if places is None else places
    usable = np.flatnonzero(is_usable)
    if not len(usable) or not len(asked):
        return np.full(len(asked), np.nan)
    before: Whole = np.cumsum(is_usable) - is_usable
    starts = np.append(True, np.diff(readings.number) != 0)
    since = np.maximum.accumulate(np.where(starts, before, 0))
    before, since, at_ms = before[asked], since[asked], readings.at_ms[asked]
    kept_v, kept_ms = values[usable], readings.at_ms[usable]
    answer = np.full(len(asked), np.nan)
    # Where the oldest of a whole window is there and near, so are the others.
    oldest = before - LAST_READINGS
    is_whole = oldest >= since
    is_whole &= at_ms - kept_ms[np.maximum(oldest, 0)] <= REACH_MS
    whole = oldest[is_whole]
    answer[is_whole] = _median_of_five([kept_v[whole + k] for k in range(LAST_READINGS)])
    some = np.flatnonzero(~is_whole & (before > since))
    former = before[some, None] - 1 - np.arange(LAST_READINGS)
    is_there = former >= since[some, None]
    former = np.maximum(former, 0)
    is_there &= at_ms[some, None] - kept_ms[former] <= REACH_MS
    window = np.where(is_there, kept_v[former], np.inf)
    answer[some] = _middles(window, np.count_nonzero(is_there, axis=1), 1)
    return answer


def _median_of_five(of: list[Numbers]) -> Numbers:
    """Median of five arrays, place by place, in ten comparisons instead of a sort."""
    a, b, c, d, e = of
    low = np.maximum(np.minimum(a, b), np.minimum(c, d))
    high = np.minimum(np.maximum(a, b), np.maximum(c, d))
    middle: Numbers = np.maximum(np.minimum(e, low), np.minimum(np.maximum(e, low), high))
    return middle


def _middles(window: Numbers, count: Whole, least: int) -> Numbers:
    """Median of the first `count` numbers of each row in order of size, the rest infinite."""
    window.sort(axis=1)
    row = np.arange(len(window))
    low = window[row, np.maximum(count - 1, 0) // 2]
    high = window[row, np.minimum(count // 2, window.shape[1] - 1)]
    # Rows without enough numbers may hold infinities, whose mean is of no concern.
    is_enough = count >= max(least, 1)
    return np.where(
        is_enough, (np.where(is_enough, low, 0) + np.where(is_enough, high, 0)) / 2, np.nan
    )


class Groups:
    """Readings in groups: the rounds of a section, or its cells."""

    def __init__(self, group: Whole, order: Whole) -> None:
        """Take the group of each reading, and an order that puts the groups one by one."""
        self.group = group
        self.order = order
        self.size: Whole = np.bincount(group)
        self.start: Whole = np.cumsum(self.size) - self.size

    def medians(self, values: Numbers, least: int) -> Numbers:
        """Median of the finite values of each group, NaN where there are fewer than `least`."""
        if not len(values):
            return np.empty(0)
        ordered, group = values[self.order], self.group[self.order]
        is_finite = np.isfinite(ordered)
        count = np.bincount(group[is_finite], minlength=len(self.size))
        width = int(self.size.max())
        if width * len(self.size) <= _SPARSE * len(values):
            window = np.full((len(self.size), width), np.inf)
            within = np.arange(len(ordered)) - self.start[group]
            window[group[is_finite], within[is_finite]] = ordered[is_finite]
            return _middles(window, count, least)
        kept, numbers = ordered[is_finite], group[is_finite]
        kept = kept[np.lexsort((kept, numbers))]
        start = np.cumsum(count) - count
        answer = np.full(len(self.size), np.nan)
        is_enough = count >= max(least, 1)
        low = start[is_enough] + (count[is_enough] - 1) // 2
        high = start[is_enough] + count[is_enough] // 2
        answer[is_enough] = (kept[low] + kept[high]) / 2
        return answer


def by_cell(readings: Readings) -> Groups:
    """The readings of each cell; the group is the cell's number."""
    return Groups(readings.number, np.arange(len(readings)))


def by_round(readings: Readings) -> Groups:
    """The readings of each round.

    A round ends with a long pause, or where a cell is read again.
    """
    in_time = np.argsort(readings.at_ms, kind="stable")
    rank = np.empty(len(in_time), np.int64)
    rank[in_time] = np.arange(len(in_time))
    former = np.full(len(in_time), -1)
    is_again = np.flatnonzero(np.diff(readings.number) == 0) + 1
    former[rank[is_again]] = rank[is_again - 1]
    repeats = np.maximum.accumulate(former)
    places = np.arange(len(in_time))
    pauses = np.append(
        np.flatnonzero(np.diff(readings.at_ms[in_time]) > ROUND_GAP_MS) + 1, len(in_time)
    )
    end = np.minimum(
        np.searchsorted(repeats, places), pauses[np.searchsorted(pauses, places, side="right")]
    ).tolist()
    starts = []
    place = 0
    while place < len(end):
        starts.append(place)
        place = end[place]
    is_start = np.zeros(len(end), np.int64)
    is_start[starts] = 1
    group = np.empty(len(end), np.int64)
    group[in_time] = np.cumsum(is_start) - 1
    return Groups(group, in_time)
