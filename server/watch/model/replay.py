"""The rounds of a section worked off in order, from a remembered state on."""

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from server.watch.model.facts import Facts
from server.watch.model.raising import Book, doubt, end_all, end_at_pull, judge, miss
from server.watch.model.rounds import Readings, rounds_of
from server.watch.model.state import State, fresh_state, refitted
from server.watch.model.step import Outcome, pulled, step

Whole = NDArray[np.int64]

_DAY_MS = 86_400_000

# A round counts as one in which a cell was left out when this share of the others was read.
_MOST_CELLS = 0.7


@dataclass(frozen=True)
class Pulls:
    """Cathodes pulled, in the order of time: which cell and when."""

    place: Whole
    at_ms: Whole


@dataclass(frozen=True)
class Stays:
    """When cells carried no current of the section: bypassed, from and to."""

    place: Whole
    from_ms: Whole
    to_ms: Whole

    def away(self, cells: int, at_ms: int) -> NDArray[np.bool_]:
        """Which cells are bypassed at a moment."""
        is_away = np.zeros(cells, bool)
        place = self.place[(self.from_ms <= at_ms) & (at_ms < self.to_ms)]
        is_away[place[place < cells]] = True
        return is_away


@dataclass(frozen=True)
class Doubted:
    """Readings that are not believed, in the order of time."""

    place: Whole
    at_ms: Whole


@dataclass
class Replayed:
    """What came of it."""

    state: State
    last_ms: int | None
    """When the last round ended."""
    outcomes: list[Outcome] = field(default_factory=list)
    book: Book = field(default_factory=Book)
    states: list[tuple[int, int, State]] = field(default_factory=list)
    """(day, last round, state): what was remembered at the starts of days that were asked for."""


def replay(
    facts: Facts,
    readings: Readings,
    pulls: Pulls,
    stays: Stays,
    doubted: Doubted,
    until_ms: int = 2**60,
    state: State | None = None,
    last_ms: int | None = None,
    keeps: Callable[[int], bool] = lambda day_ms: False,
    is_same_make: bool = True,
    is_newest: bool = True,
) -> Replayed:
    """Work off the rounds that begin before a moment, given what was remembered before them.

    `last_ms` is when the last round before ended: pulls and doubts up to then are in the state.
    `keeps` says at which starts of a day the state is wanted. Cells of another make than those
    of the state are learned anew from the first round on. What is doubted after the last round is
    raised only where nothing follows.
    """
    found = Replayed(state.copy() if state else fresh_state(facts), last_ms)
    if state is None and len(readings.at_ms):
        # Cathodes hang from the first record on until a pull says otherwise.
        found.state.hung_ms[:] = readings.at_ms[0]
    behind = 0 if last_ms is None else int(np.searchsorted(pulls.at_ms, last_ms, side="right"))
    unheard = 0
    is_fitted = state is None
    for walk in rounds_of(readings):
        if walk.at_ms[0] >= until_ms:
            break
        _keep(found, walk, keeps)
        first_ms, end_ms = int(walk.at_ms[0]), int(walk.at_ms[-1])
        if not is_fitted:
            _fit(found, facts, first_ms, is_same_make)
            is_fitted = True
        ahead = int(np.searchsorted(pulls.at_ms, end_ms, side="right"))
        heard = int(np.searchsorted(doubted.at_ms, end_ms, side="right"))
        is_past = _before_reading(walk, pulls.place[behind:ahead], pulls.at_ms[behind:ahead])
        is_heard = _before_reading(walk, doubted.place[unheard:heard], doubted.at_ms[unheard:heard])
        _pull(found, facts, pulls, behind, is_past)
        _doubt(found, doubted, unheard, is_heard)
        days = 1.0 / 3.0 if found.last_ms is None else (first_ms - found.last_ms) / _DAY_MS
        outcome = step(found.state, facts, walk, days)
        found.outcomes.append(outcome)
        judge(found.state, found.book, outcome)
        _pull(found, facts, pulls, behind, ~is_past)
        _doubt(found, doubted, unheard, ~is_heard)
        _miss(found, stays, walk, end_ms, doubted.place[unheard:heard])
        found.last_ms = end_ms
        behind, unheard = ahead, heard
    if is_newest:
        _doubt(found, doubted, unheard, np.ones(len(doubted.at_ms) - unheard, bool))
    return found


def _fit(found: Replayed, facts: Facts, at_ms: int, is_same_make: bool) -> None:
    """Go on with the cells that there are from a moment on."""
    end_all(found.state, found.book, facts.cells, at_ms)
    found.state = refitted(found.state, facts, is_same_make)


def _before_reading(walk: Readings, place: Whole, at_ms: Whole) -> NDArray[np.bool_]:
    """Which of the events of a round came before the cell's own reading, or without one."""
    if not len(place):
        return np.zeros(0, bool)
    own = (walk.place == place[:, None]) & (walk.at_ms < at_ms[:, None])
    return np.asarray(~own.any(axis=1))


def _doubt(found: Replayed, doubted: Doubted, start: int, which: NDArray[np.bool_]) -> None:
    """Raise some of what is not believed, from a place on."""
    if not which.any():
        return
    for at in (start + np.flatnonzero(which)).tolist():
        place = int(doubted.place[at])
        if place < len(found.state.known):
            doubt(found.state, found.book, place, int(doubted.at_ms[at]))


def _pull(
    found: Replayed, facts: Facts, pulls: Pulls, start: int, which: NDArray[np.bool_]
) -> None:
    """Pull some of the cells that are due from a place on."""
    if not which.any():
        return
    at = start + np.flatnonzero(which)
    at = at[pulls.place[at] < facts.cells][::-1]
    # Of several pulls of one cell the last counts.
    places, last = np.unique(pulls.place[at], return_index=True)
    at_ms = pulls.at_ms[at][last]
    end_at_pull(found.state, found.book, places, at_ms)
    pulled(found.state, facts, places, at_ms.astype(np.float64))


def _miss(found: Replayed, stays: Stays, walk: Readings, end_ms: int, doubted: Whole) -> None:
    cells = len(found.state.known)
    if len(walk.place) == cells:
        return
    is_there = (found.state.known > 0) & ~stays.away(cells, end_ms)
    is_read = np.zeros(cells, bool)
    is_read[walk.place] = True
    is_read[doubted[doubted < cells]] = True
    if np.count_nonzero(is_read) >= _MOST_CELLS * np.count_nonzero(is_there | is_read):
        miss(found.state, found.book, np.flatnonzero(is_there & ~is_read), end_ms)


def _keep(found: Replayed, walk: Readings, keeps: Callable[[int], bool]) -> None:
    """Remember the state at the start of the day that this round is the first of."""
    day_ms = int(walk.at_ms[0]) // _DAY_MS * _DAY_MS
    if found.last_ms is not None and found.last_ms < day_ms and keeps(day_ms):
        found.states.append((day_ms, found.last_ms, found.state.copy()))
