"""When a flag is raised, when it says to act, and when it ends."""

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from server.watch.model.state import KINDS, LOOK_ODDS, State
from server.watch.model.step import Outcome

Places = NDArray[np.int64]
Truths = NDArray[np.bool_]

SHORT, HIGH, LOW, UNREAD, SUSPECT = range(len(KINDS))

# Raised falsely among 1,000 readings: what is asked for, with some room for what the model does
# not know.
_FALSE_SHARE = 1.7e-3

# The probability of a short from which a cell is watched is moved until its own expected share of
# false flags is that asked for: by so much (log odds) for each flag too many, between two bounds.
_STEP_ODDS, _LEAST_ODDS, _MOST_ODDS = 0.25, -0.9, 1.5

# Probability from which somebody is sent.
ACT = 0.99

# Probability below which a reading speaks for the end of a short.
_OVER = 0.10

# How far a cell is from what it used to read, in standard deviations of chance.
_DRIFT_LOOK, _DRIFT_ACT, _DRIFT_OVER = 3.35, 5.5, 1.2

# Noises of a reading that a drift must have come to before somebody is sent for it.
_MATERIAL = 2.0

# Readings of a cell before its drifts are judged.
_ENOUGH_FOR_DRIFTS = 30

# Readings in a row that end a flag.
_IN_A_ROW = 2

# Standard deviations by which one reading leaves no doubt.
_PLAIN = 4.5

# Readings after the end of a flag at which the same is not raised again: it would chatter.
_RESTS = 4.0

# Rounds in a row that a cell may be left out.
_MOST_MISSED = 3


@dataclass
class Raised:
    """A flag as the model raised it."""

    place: int
    kind: str
    raised_ms: int
    tier: str
    ended_ms: int | None
    outcome: Outcome | None
    """The round that raised it; None for a cell that was not read."""
    at: int
    """Place of the cell's reading in that round."""


@dataclass
class Book:
    """Flags of a replay: those raised in it, and what became of those open before it."""

    raised: list[Raised] = field(default_factory=list)
    open: dict[tuple[int, int], Raised] = field(default_factory=dict)
    ended: dict[tuple[int, str, int], int] = field(default_factory=dict)
    """(place, kind, raised) of flags open before: when they ended."""
    acting: set[tuple[int, str, int]] = field(default_factory=set)
    """(place, kind, raised) of flags open before that came to say act."""


def end_at_pull(state: State, book: Book, places: Places, pulled_ms: NDArray[np.int64]) -> None:
    """A pull ends a cell's shorts, and the wait for a reading of the cathodes that are gone."""
    for place, at_ms in zip(places.tolist(), pulled_ms.tolist(), strict=True):
        if state.raised_ms[place, SHORT] > 0:
            _end(state, book, place, SHORT, at_ms)
        state.calm[place, SHORT] = 0.0


def end_all(state: State, book: Book, first: int, at_ms: int) -> None:
    """End every flag of the cells from a place on: they are not there any more."""
    for place, kind in np.argwhere(state.raised_ms[first:] > 0).tolist():
        _end(state, book, first + place, kind, at_ms)


def judge(state: State, book: Book, outcome: Outcome) -> None:
    """Raise and end flags by what a round said."""
    at, at_ms = outcome.readings.place, outcome.readings.at_ms
    before = len(book.raised)
    probability = outcome.probability
    away = outcome.lasting_v / outcome.u_lasting_v
    is_material = np.abs(outcome.lasting_v) >= _MATERIAL * outcome.band_v
    is_known = state.known[at] > _ENOUGH_FOR_DRIFTS
    is_likely = probability >= 0.5
    look = look_probability(state)
    # What nobody would take for noise is raised even where the same has just ended.
    is_plain = (probability >= ACT) & (outcome.deviation_v < -_PLAIN * outcome.band_v)
    for kind, is_raised, is_acting, is_over in (
        (SHORT, probability >= look, probability >= ACT, probability < _OVER),
        (
            HIGH,
            is_known & (away >= _DRIFT_LOOK),
            (away >= _DRIFT_ACT) & is_material,
            away < _DRIFT_OVER,
        ),
        (
            LOW,
            is_known & (away <= -_DRIFT_LOOK) & ~is_likely,
            (away <= -_DRIFT_ACT) & is_material,
            (away > -_DRIFT_OVER) | is_likely,
        ),
    ):
        is_open = state.raised_ms[at, kind] > 0
        if not (is_raised | is_open | (state.calm[at, kind] < 0.0)).any():
            continue
        is_ready = (state.calm[at, kind] >= 0.0) | is_plain
        for spot in np.flatnonzero(is_raised & ~is_open & is_ready).tolist():
            _raise(
                state,
                book,
                int(at[spot]),
                kind,
                int(at_ms[spot]),
                bool(is_acting[spot]),
                outcome,
                spot,
            )
        for spot in np.flatnonzero(is_open & is_acting & (state.acting[at, kind] == 0)).tolist():
            _act(state, book, int(at[spot]), kind)
        former = state.calm[at, kind]
        rested = np.minimum(former + 1.0, 0.0)
        calm = np.where(is_open, np.where(is_over, former + 1.0, 0.0), rested)
        state.calm[at, kind] = calm
        for spot in np.flatnonzero(is_open & (calm >= _IN_A_ROW)).tolist():
            _end(state, book, int(at[spot]), kind, int(at_ms[spot]))
            state.calm[int(at[spot]), kind] = -_RESTS
    _hold_rate(state, book, outcome, before)
    for kind in (UNREAD, SUSPECT):
        since = state.raised_ms[at, kind]
        if not since.any():
            continue
        for spot in np.flatnonzero((since > 0) & (since < at_ms)).tolist():
            _end(state, book, int(at[spot]), kind, int(at_ms[spot]))


def look_probability(state: State) -> float:
    """The probability of a short from which a cell is watched at present."""
    return float(1.0 / (1.0 + np.exp(-state.shared[LOOK_ODDS])))


def _hold_rate(state: State, book: Book, outcome: Outcome, before: int) -> None:
    """Move the probability that raises a flag towards the share of false ones asked for."""
    expected = sum(
        1.0 - float(outcome.probability[flag.at])
        for flag in book.raised[before:]
        if flag.kind == KINDS[SHORT]
    )
    excess = expected - _FALSE_SHARE * len(outcome.probability)
    odds = state.shared[LOOK_ODDS] + _STEP_ODDS * excess
    state.shared[LOOK_ODDS] = min(max(odds, _LEAST_ODDS), _MOST_ODDS)


def miss(state: State, book: Book, unread: Places, at_ms: int) -> None:
    """Count a round in which cells in service were left out while most others were read."""
    state.missed[unread] += 1.0
    for place in unread.tolist():
        if state.missed[place] >= _MOST_MISSED and state.raised_ms[place, UNREAD] == 0:
            _raise(state, book, place, UNREAD, at_ms, False, None, -1)


def doubt(state: State, book: Book, place: int, at_ms: int) -> None:
    """A reading that is not believed; the next that is ends the flag."""
    state.missed[place] = 0.0
    if state.raised_ms[place, SUSPECT] == 0:
        _raise(state, book, place, SUSPECT, at_ms, False, None, -1)


def _raise(
    state: State,
    book: Book,
    place: int,
    kind: int,
    at_ms: int,
    is_acting: bool,
    outcome: Outcome | None,
    spot: int,
) -> None:
    flag = Raised(place, KINDS[kind], at_ms, "act" if is_acting else "look", None, outcome, spot)
    book.raised.append(flag)
    book.open[place, kind] = flag
    state.raised_ms[place, kind] = at_ms
    state.acting[place, kind] = 1.0 if is_acting else 0.0
    state.calm[place, kind] = 0.0


def _act(state: State, book: Book, place: int, kind: int) -> None:
    state.acting[place, kind] = 1.0
    flag = book.open.get((place, kind))
    if flag is not None:
        flag.tier = "act"
    else:
        book.acting.add((place, KINDS[kind], int(state.raised_ms[place, kind])))


def _end(state: State, book: Book, place: int, kind: int, at_ms: int) -> None:
    flag = book.open.pop((place, kind), None)
    if flag is not None:
        flag.ended_ms = at_ms
    else:
        book.ended[place, KINDS[kind], int(state.raised_ms[place, kind])] = at_ms
    state.raised_ms[place, kind] = 0.0
    state.acting[place, kind] = 0.0
    state.calm[place, kind] = 0.0
