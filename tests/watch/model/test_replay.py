"""What is remembered is enough: a replay in parts is the replay at once, bit for bit."""

import numpy as np
import pytest

from server.watch.model.state import unpacked
from tests.watch.model.sections import (
    DAY_MS,
    NOISE_V,
    RATED_AMPS,
    facts,
    flags,
    made_up,
    pull_every_week,
)


@pytest.fixture(scope="module")
def eventful():
    """Shorts, pulls (some during a walk), cuts, gaps, doubts and a bypass, over 30 days."""
    rng = np.random.default_rng(8)
    amps = RATED_AMPS * np.where(np.arange(90) % 3 == 2, 0.8, 1.0)
    section = made_up(seed=8, rounds=90, cells=24, amps=amps)
    pull_every_week(section, crop_v=0.002)
    for place, begins, ends in ((3, 10, 19), (8, 22, 60), (15, 40, 90), (16, 41, 43)):
        section.volts[begins:ends, place] -= 6 * NOISE_V
    section.pulls += [(int(section.at_ms[turn, 12]) + 1_000, 8) for turn in (30, 60)]
    section.volts[rng.random(section.volts.shape) < 0.04] = np.nan
    section.volts[50:56, 20] = np.nan
    section.volts[47] = np.nan
    for turn, place in ((12, 2), (33, 9), (47, 5), (70, 1)):
        section.doubted += [(int(section.at_ms[turn, place]) + 500, place)]
    section.stays.append((20, int(section.at_ms[50, 0]), int(section.at_ms[53, 0])))
    return section


def test_the_test_has_events_of_every_kind(eventful):
    kinds = {one.kind for one in eventful.replayed().book.raised}

    assert kinds >= {"short", "no reading", "suspect reading"}


@pytest.mark.parametrize("turn", [1, 13, 31, 47, 48, 61, 89])
def test_two_halves_give_the_same_as_the_whole_at_once(eventful, turn):
    whole = eventful.replayed()
    cut_ms = int(eventful.at_ms[turn, 0])
    first = eventful.replayed(until_ms=cut_ms, is_newest=False)
    doubted, eventful.doubted = (
        eventful.doubted,
        [one for one in eventful.doubted if one[0] > first.last_ms],
    )
    readings = eventful.readings()
    later = readings.part(int(np.searchsorted(readings.at_ms, cut_ms)), len(readings.at_ms))

    second = eventful.replayed(
        readings=later, state=unpacked(first.state.packed()), last_ms=first.last_ms
    )
    eventful.doubted = doubted

    assert second.state.packed() == whole.state.packed()
    assert len(first.outcomes) + len(second.outcomes) == len(whole.outcomes)
    for once, twice in zip(whole.outcomes, first.outcomes + second.outcomes, strict=True):
        for name in ("expected_v", "band_v", "probability", "short_amps", "lasting_v"):
            assert (getattr(once, name) == getattr(twice, name)).all(), name
    told = {(one.place, one.kind, one.raised_ms): one for one in whole.book.raised}
    parts = [*first.book.raised, *second.book.raised]
    assert [(one.place, one.kind, one.raised_ms) for one in parts] == list(told)
    for one in parts:
        key = (one.place, one.kind, one.raised_ms)
        ended_ms = second.book.ended.get(key) if one.ended_ms is None else one.ended_ms
        assert ended_ms == told[key].ended_ms
        tier = "act" if key in second.book.acting else one.tier
        assert tier == told[key].tier


def test_a_replay_leaves_the_state_it_starts_from_as_it_was(eventful):
    first = eventful.replayed(until_ms=int(eventful.at_ms[30, 0]), is_newest=False)
    before = first.state.packed()

    eventful.replayed(state=first.state, last_ms=first.last_ms)

    assert first.state.packed() == before


def test_what_is_remembered_of_a_day_is_the_state_before_its_first_round(eventful):
    day_ms = int(eventful.at_ms[30, 0]) // DAY_MS * DAY_MS

    ((day, last_ms, state),) = eventful.replayed(keeps=lambda ms: ms == day_ms).states

    turn = int(np.flatnonzero(eventful.at_ms[:, 0] >= day_ms)[0])
    before = eventful.replayed(until_ms=int(eventful.at_ms[turn, 0]), is_newest=False)
    assert (day, last_ms) == (day_ms, before.last_ms)
    assert state.packed() == before.state.packed()


def test_rounds_that_begin_later_are_left_to_the_next_replay(eventful):
    until_ms = int(eventful.at_ms[40, 12])

    replayed = eventful.replayed(until_ms=until_ms)

    # A round that has begun is heard to its end.
    assert replayed.last_ms == np.nanmax(
        np.where(np.isfinite(eventful.volts[40]), eventful.at_ms[40], 0)
    )


def test_cells_that_are_added_leave_the_others_as_they_were():
    section = made_up(rounds=30)
    section.volts[10:, 7] -= 8 * NOISE_V
    first = section.replayed()
    more = made_up(seed=2, rounds=60, cells=42)
    more.volts[30:, :40] = np.vstack([section.volts[10:], section.volts[10:20]])
    more.volts[:30] = np.nan

    second = more.replayed(state=first.state, last_ms=first.last_ms)

    assert len(second.state.known) == 42
    assert not [flag for flag in flags(second) if flag[0] == 7]
    assert second.outcomes[0].probability[7] > 0.99
    assert second.state.known[:3].tolist() == [60.0] * 3
    assert second.state.known[40:].tolist() == [30.0] * 2


def test_flags_of_cells_that_are_gone_end_at_the_next_round():
    section = made_up(rounds=30)
    section.volts[10:, 39] -= 8 * NOISE_V
    first = section.replayed()
    fewer = made_up(rounds=31, cells=38)
    fewer.volts[:30] = np.nan

    second = fewer.replayed(state=first.state, last_ms=first.last_ms)

    ((raised_ms, _),) = [flag[1:] for flag in flags(first) if flag[0] == 39]
    assert second.book.ended[39, "short", raised_ms] == fewer.at_ms[30, 0]
    assert len(second.state.known) == 38


def test_cells_of_another_make_are_learned_anew_and_keep_their_flags():
    section = made_up(rounds=60)
    section.volts[10:, 7] -= 8 * NOISE_V
    section.volts[30:] += np.random.default_rng(3).normal(0, 0.05, 40)
    readings = section.readings()
    half = int(np.searchsorted(readings.at_ms, section.at_ms[30, 0]))
    first = section.replayed(readings=readings.part(0, half))

    second = section.replayed(
        facts(),
        readings=readings.part(half, len(readings.at_ms)),
        state=first.state,
        last_ms=first.last_ms,
        is_same_make=False,
    )

    assert second.state.known.tolist() == [30.0] * 40
    assert len(flags(second)) < 0.01 * 30 * 40
    (raised_ms,) = [flag[1] for flag in flags(first) if flag[0] == 7]
    assert second.state.raised_ms[7, 0] == raised_ms or (7, "short", raised_ms) in second.book.ended
