import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from server.watch.model.rounds import PAUSE_MS, ordered, round_starts, rounds_of

MINUTE_MS = 60_000


def readings(*pairs):
    """Readings of (minute, place), whatever their order."""
    at_ms, place = np.array(pairs, np.int64).reshape(-1, 2).T
    return ordered(at_ms * MINUTE_MS, place, 2.0 + place / 100, np.full(len(place), 36e3))


def walks(*pairs):
    return [walk.place.tolist() for walk in rounds_of(readings(*pairs))]


def test_no_readings_are_no_round():
    assert round_starts(readings()) == []
    assert walks() == []


def test_a_pause_of_more_than_ninety_minutes_ends_a_round():
    assert walks((0, 0), (90, 1), (181, 2)) == [[0, 1], [2]]


def test_a_cell_that_comes_again_begins_the_next_round():
    assert walks((0, 0), (1, 1), (2, 2), (3, 1), (4, 0), (5, 2), (6, 2)) == [
        [0, 1, 2],
        [1, 0, 2],
        [2],
    ]


def test_readings_are_put_into_the_order_of_time_and_cell():
    found = readings((5, 2), (0, 3), (5, 1))

    assert found.place.tolist() == [3, 1, 2]
    assert found.volts.tolist() == pytest.approx([2.03, 2.01, 2.02])


@settings(deadline=None)
@given(st.lists(st.tuples(st.integers(0, 3000), st.integers(0, 6)), unique=True, max_size=60))
def test_rounds_lose_nothing_and_hold_each_cell_once(pairs):
    whole = readings(*pairs)
    found = list(rounds_of(whole))

    assert [at for walk in found for at in walk.at_ms] == whole.at_ms.tolist()
    assert [cell for walk in found for cell in walk.place] == whole.place.tolist()
    for walk in found:
        assert len(set(walk.place.tolist())) == len(walk.place)
        assert (np.diff(walk.at_ms) <= PAUSE_MS).all()


@settings(deadline=None)
@given(
    st.lists(st.tuples(st.integers(0, 3000), st.integers(0, 6)), unique=True, min_size=1),
    st.data(),
)
def test_cutting_at_the_end_of_a_round_changes_no_later_round(pairs, data):
    whole = readings(*pairs)
    starts = round_starts(whole)
    start = data.draw(st.sampled_from(starts))

    rest = whole.part(start, len(whole.at_ms))

    assert [start + at for at in round_starts(rest)] == [at for at in starts if at >= start]
