"""The watch kept up to date in the books: rounds, what is remembered between them, and flags."""

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.doubts import reasons_between
from server.storage.flag_rows import end_flag, flags_touching, replace_flags, retier_flag
from server.storage.lots import crops_pulled
from server.storage.plant import SectionPlan, SectionTerms
from server.storage.readings import Series
from server.storage.watch_rows import (
    OF_A_CELL,
    forget_states,
    keep_states,
    replace_rounds,
    state_before,
    thin_states,
)
from server.watch.evidence import Doubt, flag_of
from server.watch.loaded import Heard
from server.watch.model.facts import facts_of
from server.watch.model.raising import Raised
from server.watch.model.replay import Doubted, Pulls, Replayed, Stays, replay
from server.watch.model.rounds import PAUSE_MS, ordered
from server.watch.model.state import KINDS, State, is_readable, unpacked
from server.watch.model.step import Outcome

_DAY_MS = 86_400_000

_EVERY_MS = 32 * _DAY_MS
"""Of what is remembered at the starts of days, these stay for good."""

_RECENT_MS = 8 * _DAY_MS
"""And of these days before the newest reading all: late rounds are of the last days as a rule."""

_LONGEST_ROUND_MS = _DAY_MS // 2

Hear = Callable[[int, int], Heard]


def rewatch(
    session: Session, section: SectionPlan, from_ms: int, to_ms: int, newest_ms: int, hear: Hear
) -> None:
    """Work off anew the rounds of a section that begin in [from_ms, to_ms).

    Starts from what was remembered before them, and writes what they said, what is remembered
    since and the flags. What follows is not touched: the caller has marked it.
    """
    kept = state_before(session, section.id, from_ms - PAUSE_MS)
    if kept and not is_readable(kept[2]):
        # Another release remembered otherwise: the section is worked off from its start.
        kept = None
    start_ms = kept[1] + 1 if kept else 0
    heard = hear(start_ms, to_ms + _LONGEST_ROUND_MS)
    forget_states(session, section.id, kept[0] if kept else -1)
    parts = _replayed(session, section, heard, kept, to_ms, newest_ms)
    ended_ms = max([to_ms, *(part.last_ms + 1 for part in parts if part.last_ms is not None)])
    replace_rounds(
        session,
        section.id,
        start_ms,
        to_ms,
        [_row(outcome, len(part.state.known)) for part in parts for outcome in part.outcomes],
    )
    keep_states(
        session,
        section.id,
        [(day, last, state.packed()) for part in parts for day, last, state in part.states],
    )
    thin_states(session, section.id, _EVERY_MS, newest_ms // _DAY_MS * _DAY_MS - _RECENT_MS)
    before = unpacked(kept[2]) if kept else None
    _flags(session, section, parts, before, start_ms, ended_ms, heard.doubted)


def _replayed(
    session: Session,
    section: SectionPlan,
    heard: Heard,
    kept: tuple[int, int, bytes] | None,
    to_ms: int,
    newest_ms: int,
) -> list[Replayed]:
    """The rounds of each stretch with the same terms, one after the other."""
    state = unpacked(kept[2]) if kept else None
    last_ms = kept[1] if kept else None
    loaded = heard.loaded
    ids = np.array(section.cell_ids, np.int64)
    recent_ms = newest_ms // _DAY_MS * _DAY_MS - _RECENT_MS
    # What was remembered at the day it started from is there already.
    known_day = kept[0] if kept else -1

    def keeps(day_ms: int) -> bool:
        is_wanted = day_ms >= recent_ms or day_ms % _EVERY_MS == 0
        return is_wanted and day_ms > known_day

    # Earlier pulls are in what is remembered.
    since_ms = 0 if last_ms is None else last_ms + 1
    crops = crops_pulled(session, section.id, since_ms, to_ms + _LONGEST_ROUND_MS)
    parts: list[Replayed] = []
    # What is remembered is of the cells that there were in the last round before.
    former = None if last_ms is None else section.terms_at(last_ms)
    for terms, start_ms, end_ms in _stretches(section):
        stretch = (max(start_ms, 0 if last_ms is None else last_ms + 1), min(end_ms, to_ms))
        if stretch[0] >= stretch[1]:
            continue
        facts = facts_of(section, terms)
        # A round that begins before the end is heard to its end.
        series = loaded.series
        until_ms = min(end_ms, stretch[1] + _LONGEST_ROUND_MS)
        place = np.searchsorted(ids, series.cell_id)
        use = (series.at_ms >= stretch[0]) & (series.at_ms < until_ms) & (place < terms.cells)
        readings = ordered(series.at_ms[use], place[use], series.volts[use], loaded.amps[use])
        doubted = heard.doubted.within(0 if last_ms is None else last_ms + 1, stretch[1])
        order = np.lexsort((doubted.cell_id, doubted.at_ms))
        part = replay(
            facts,
            readings,
            Pulls(np.searchsorted(ids, crops["cell_id"]), crops["pulled_ms"].astype(np.int64)),
            _stays(ids, heard.bypasses),
            Doubted(
                np.searchsorted(ids, doubted.cell_id[order]),
                doubted.at_ms[order],
            ),
            stretch[1],
            None if last_ms is None else state,
            last_ms,
            keeps,
            former is None or _make(former) == _make(terms),
            end_ms >= to_ms,
        )
        if part.outcomes:
            former = terms
        state, last_ms = part.state, part.last_ms
        parts.append(part)
    return parts


def _make(terms: SectionTerms) -> tuple[object, ...]:
    """What makes the cells others than they were: their voltages have to be learned anew."""
    return (
        terms.cathodes_per_cell,
        terms.cathode_area_m2,
        terms.electrode_gap_m,
        terms.differential_resistance_ohm,
    )


def _stretches(section: SectionPlan) -> list[tuple[SectionTerms, int, int]]:
    """The terms of a section with the time in which each holds."""
    ends = [terms.from_ms for terms in section.terms[1:]] + [2**60]
    return [(terms, terms.from_ms, end) for terms, end in zip(section.terms, ends, strict=True)]


def _stays(ids: NDArray[np.int64], bypasses: list[tuple[int, int, int]]) -> Stays:
    rows = np.array(bypasses, np.int64).reshape(-1, 3)
    return Stays(np.searchsorted(ids, rows[:, 0]), rows[:, 1], rows[:, 2])


def _row(outcome: Outcome, cells_there: int) -> tuple[int, int, float, bytes]:
    readings = outcome.readings
    cells = np.zeros(cells_there, OF_A_CELL)
    own = np.zeros(len(readings.at_ms), OF_A_CELL)
    own["at_ms"] = readings.at_ms
    own["expected_v"] = outcome.expected_v
    own["short_amps"] = outcome.short_amps
    own["u_short_amps"] = outcome.u_given_amps
    own["deviation_v"] = np.clip(readings.volts - outcome.expected_v, -6e4, 6e4)
    own["band_v"] = outcome.band_v
    own["probability"] = outcome.probability
    cells[readings.place] = own
    amps = float(np.median(readings.amps))
    return int(readings.at_ms[0]), int(readings.at_ms[-1]), amps, cells.tobytes()


def _flags(
    session: Session,
    section: SectionPlan,
    parts: list[Replayed],
    before: State | None,
    start_ms: int,
    ended_ms: int,
    doubted: Series,
) -> None:
    """Write the flags raised since, and what became of those that were open."""
    raised = [flag for part in parts for flag in part.book.raised]
    ended = {key: at for part in parts for key, at in part.book.ended.items()}
    acting = {key for part in parts for key in part.book.acting}
    _carry(parts, raised, ended, acting)
    reasons = (
        reasons_between(session, section.id, start_ms, ended_ms)
        if any(flag.kind == "suspect reading" for flag in raised)
        else {}
    )
    rows = [flag_of(section, flag, _doubt(section, flag, doubted, reasons)) for flag in raised]
    for flag in flags_touching(session, start_ms, 2**60, section.id):
        session.expunge(flag)
        if flag.raised_ms >= start_ms:
            continue
        key = (section.number_of(flag.cell_id) - 1, flag.kind, flag.raised_ms)
        end = ended.get(key)
        was_acting = before is not None and before.acting[key[0], KINDS.index(flag.kind)] > 0
        tier = "act" if was_acting or key in acting else "look"
        if end != flag.ended_ms:
            end_flag(session, flag.cell_id, flag.kind, flag.raised_ms, end)
        if tier != flag.tier:
            retier_flag(session, flag.cell_id, flag.kind, flag.raised_ms, tier)
    replace_flags(session, section.id, start_ms, ended_ms, rows)


def _carry(
    parts: list[Replayed],
    raised: list[Raised],
    ended: dict[tuple[int, str, int], int],
    acting: set[tuple[int, str, int]],
) -> None:
    """What a later stretch made of flags that an earlier one raised."""
    if len(parts) < 2:
        return
    for flag in raised:
        key = (flag.place, flag.kind, flag.raised_ms)
        if flag.ended_ms is None and key in ended:
            flag.ended_ms = ended[key]
        if key in acting:
            flag.tier = "act"


def _doubt(
    section: SectionPlan,
    flag: Raised,
    doubted: Series,
    reasons: dict[tuple[int, int], str],
) -> Doubt | None:
    if flag.kind != "suspect reading":
        return None
    cell_id = section.cell_ids[flag.place]
    own = (doubted.cell_id == cell_id) & (doubted.at_ms == flag.raised_ms)
    reason = reasons.get((cell_id, flag.raised_ms), "The reading is not believed.")
    return Doubt(float(doubted.volts[own][0]), reason) if own.any() else None
