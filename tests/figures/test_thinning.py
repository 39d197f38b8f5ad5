import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.figures.thinning import points_kept, thinned, with_gaps


@pytest.fixture
def walk():
    """Twenty thousand minutes of a random walk with two spikes."""
    rng = np.random.default_rng(20260303)
    at_ms = np.arange(20_000, dtype=np.int64) * 60_000
    values = rng.normal(0, 0.01, at_ms.size).cumsum()
    values[7_001] = 40.0
    values[13_333] = -40.0
    return at_ms, values


def test_a_short_series_stays_as_it_is():
    at_ms, values = thinned([0, 10, 20], [1.0, np.nan, 3.0], buckets=2)

    assert at_ms.tolist() == [0, 10, 20]
    np.testing.assert_array_equal(values, [1.0, np.nan, 3.0])


def test_both_extremes_stay_where_they_were(walk):
    at_ms, values = thinned(*walk, buckets=300)

    assert at_ms[np.argmax(values)] == 7_001 * 60_000
    assert at_ms[np.argmin(values)] == 13_333 * 60_000


def test_each_stretch_keeps_its_least_and_its_greatest(walk):
    at_ms, values = walk
    edges = np.linspace(0, at_ms[-1], 101)

    kept_at_ms, kept = thinned(at_ms, values, buckets=100)

    for left, right in zip(edges[:-1], edges[1:], strict=True):
        whole = values[(at_ms >= left) & (at_ms < right)]
        part = kept[(kept_at_ms >= left) & (kept_at_ms < right)]
        assert (part.min(), part.max()) == (whole.min(), whole.max())


def test_the_first_and_the_last_point_stay(walk):
    kept = points_kept(*walk, buckets=50)

    assert kept[0] == 0
    assert kept[-1] == 19_999


def test_two_points_a_stretch_are_enough(walk):
    assert thinned(*walk, buckets=100)[0].size <= 202


def test_a_long_gap_stays_exactly_as_long(walk):
    at_ms, values = walk
    values[5_003:6_017] = np.nan

    kept_at_ms, kept = thinned(at_ms, values, buckets=100)

    finite_at_ms = kept_at_ms[np.isfinite(kept)]
    widest = np.argmax(np.diff(finite_at_ms))
    assert finite_at_ms[widest] == 5_002 * 60_000
    assert finite_at_ms[widest + 1] == 6_017 * 60_000
    assert np.isnan(kept[(kept_at_ms > 5_002 * 60_000) & (kept_at_ms < 6_017 * 60_000)]).all()


def test_a_gap_of_one_reading_still_breaks_the_line(walk):
    at_ms, values = walk
    values[9_000] = np.nan

    kept_at_ms, kept = thinned(at_ms, values, buckets=100)

    assert kept_at_ms[np.isnan(kept)].tolist() == [9_000 * 60_000]


def test_a_series_of_nothing_stays_nothing():
    assert np.isnan(thinned(range(1000), [np.nan] * 1000, buckets=10)[1]).all()


def test_a_crowd_at_one_moment_is_thinned_to_its_extremes():
    at_ms, values = thinned([5] * 100, range(100), buckets=10)

    assert values.tolist() == [0.0, 99.0]
    assert at_ms.tolist() == [5, 5]


@given(
    st.lists(
        st.tuples(
            st.integers(0, 10_000),
            st.one_of(st.just(float("nan")), st.floats(-1e6, 1e6)),
        ),
        max_size=400,
    ),
    st.integers(1, 20),
)
def test_whatever_comes_no_extreme_is_lost_and_order_stays(points, buckets):
    at_ms = np.sort(np.array([at for at, _value in points], dtype=np.int64))
    values = np.array([value for _at, value in points], dtype=np.float64)

    kept_at_ms, kept = thinned(at_ms, values, buckets)

    assert np.all(np.diff(kept_at_ms) >= 0)
    assert kept.size <= max(7 * buckets + 2, 2 * buckets)
    assert np.isnan(values).any() == np.isnan(kept).any()
    finite = values[np.isfinite(values)]
    if finite.size:
        assert (np.nanmin(kept), np.nanmax(kept)) == (finite.min(), finite.max())


def test_distance_in_time_becomes_a_gap():
    at_ms, values = with_gaps([0, 10, 100, 110], [1.0, 2.0, 3.0, 4.0], gap_ms=50)

    assert at_ms.tolist() == [0, 10, 11, 100, 110]
    np.testing.assert_array_equal(values, [1.0, 2.0, np.nan, 3.0, 4.0])


def test_lists_of_two_lengths_are_refused():
    with pytest.raises(ValueError, match="one length"):
        thinned([1, 2], [1.0], buckets=3)


def test_no_stretch_at_all_is_refused():
    with pytest.raises(ValueError, match="one stretch"):
        thinned([1], [1.0], buckets=0)
