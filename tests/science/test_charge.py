"""Charge from samples of current, outages and counters."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.charge import (
    ESTIMATED,
    MEASURED,
    UNRECORDED,
    charge_between,
    counter_charge_c,
    held_current,
    without_outages,
)
from server.science.errors import OutOfRange

DAY_S = 86_400
KAH_C = 3.6e6


@pytest.fixture
def uneven_current():
    """A day of rectifier current read 500 times at uneven moments, with one trip to zero."""
    rng = np.random.default_rng(seed=20240305)
    at_s = np.concatenate(([0.0], np.sort(rng.uniform(0, DAY_S, 498)), [DAY_S]))
    amps = rng.normal(20_000, 150, 500)
    amps[200:240] = 0.0
    return at_s, amps


@pytest.mark.parametrize("cut_s", [0.0, 1.0, 28_800.0, 51_234.5, DAY_S])
def test_the_parts_of_a_day_add_up_to_the_day(uneven_current, cut_s):
    at_s, amps = uneven_current

    whole_c = charge_between(at_s, amps, 0.0, DAY_S)
    parts_c = charge_between(at_s, amps, 0.0, cut_s) + charge_between(at_s, amps, cut_s, DAY_S)

    assert parts_c == pytest.approx(whole_c, rel=1e-12)


SAMPLES = st.lists(
    st.tuples(st.floats(1.0, 7200.0), st.floats(0.0, 450_000.0)), min_size=1, max_size=30
)


@given(samples=SAMPLES, cuts=st.lists(st.floats(0.0, 1.0), min_size=1, max_size=8))
def test_the_parts_of_any_charge_add_up(samples, cuts):
    at_s = np.cumsum([gap_s for gap_s, _ in samples])
    amps = [one for _, one in samples]
    ends_s = sorted([0.0, *(cut * 2.0 * at_s[-1] for cut in cuts), 2.0 * at_s[-1]])

    parts_c = [
        charge_between(at_s, amps, start_s, end_s)
        for start_s, end_s in zip(ends_s[:-1], ends_s[1:], strict=True)
    ]

    whole_c = charge_between(at_s, amps, ends_s[0], ends_s[-1])
    assert sum(parts_c) == pytest.approx(whole_c, rel=1e-9, abs=1e-3)


@given(samples=SAMPLES, factor=st.floats(0.0, 100.0))
def test_charge_is_linear_in_the_current(samples, factor):
    at_s = np.cumsum([gap_s for gap_s, _ in samples])
    amps = np.array([one for _, one in samples])

    scaled_c = charge_between(at_s, factor * amps, 0.0, 1e6)

    assert scaled_c == pytest.approx(factor * charge_between(at_s, amps, 0.0, 1e6), rel=1e-9)


def test_samples_within_the_hold_are_a_plain_staircase():
    edge_s, amps, basis = held_current([0, 3600, 7200], [10.0, 20.0, 30.0], 7200)

    assert edge_s.tolist() == [0, 3600, 7200, 14_400]
    assert amps.tolist() == [10, 20, 30, 0]
    assert basis.tolist() == [MEASURED, MEASURED, MEASURED, UNRECORDED]


def test_a_gap_carries_the_mean_of_its_ends_once_the_hold_is_over():
    edge_s, amps, basis = held_current([0, 36_000], [10.0, 30.0], 7200)

    assert charge_between(edge_s, amps, 0, 36_000) == 10 * 7200 + 20 * 28_800
    assert basis.tolist() == [MEASURED, ESTIMATED, MEASURED, UNRECORDED]


def test_nothing_is_counted_long_after_the_last_sample():
    edge_s, amps, _ = held_current([0], [10.0], 7200)

    assert charge_between(edge_s, amps, 0, 10 * DAY_S) == 72_000


def test_no_samples_give_no_steps():
    assert all(array.size == 0 for array in held_current([], [], 7200))


def test_samples_that_go_back_in_time_are_refused():
    with pytest.raises(OutOfRange, match="at_s"):
        held_current([0, 3600, 3600], [1.0, 1.0, 1.0], 7200)


def test_an_outage_counts_as_zero_whatever_the_samples_say():
    steps = held_current(np.arange(24) * 3600, np.full(24, 100.0), 7200)

    edge_s, amps, _ = without_outages(*steps, [[5000, 9000], [8000, 12_000]])

    assert charge_between(edge_s, amps, 0, 24 * 3600) == 100 * (24 * 3600 - 7000)


def test_an_outage_in_a_gap_is_known_and_not_estimated():
    steps = held_current([0, 36_000], [100.0, 100.0], 7200)

    edge_s, amps, basis = without_outages(*steps, [[10_000, 20_000]])

    inside = (edge_s >= 10_000) & (edge_s < 20_000)
    assert amps[inside].tolist() == [0]
    assert basis[inside].tolist() == [MEASURED]


def test_an_outage_beyond_the_record_adds_nothing_to_it():
    steps = held_current([0], [100.0], 7200)

    edge_s, _, _ = without_outages(*steps, [[3600, 9e15]])

    assert edge_s.tolist() == [0, 3600, 7200]


def test_an_outage_that_ends_before_it_begins_is_refused():
    with pytest.raises(OutOfRange, match="off_s"):
        without_outages([0, 10], [1.0, 0.0], [0, 2], [[5, 4]])


def test_an_ordinary_step_of_the_counter_is_its_difference():
    charge_c, what = counter_charge_c([1000 * KAH_C], [1200 * KAH_C], [201 * KAH_C])

    assert charge_c[0] / KAH_C == pytest.approx(200)
    assert what.tolist() == [0]


@pytest.mark.parametrize("digits", [3, 5, 6])
def test_a_counter_rolls_over_at_a_power_of_ten(digits):
    modulus = 10.0 ** (digits + 3) * 3600  # ampere-hours of that many digits of kAh

    charge_c, what = counter_charge_c([modulus - 50 * KAH_C], [150 * KAH_C], [198 * KAH_C])

    assert charge_c[0] / KAH_C == pytest.approx(200)
    assert what.tolist() == [1]


@pytest.mark.parametrize(("before", "after"), [(90_000, 12), (100, 40_000)])
def test_an_exchanged_counter_has_no_charge_of_its_own(before, after):
    charge_c, what = counter_charge_c([before * KAH_C], [after * KAH_C], [200 * KAH_C])

    assert np.isnan(charge_c[0])
    assert what.tolist() == [2]


def test_a_negative_counter_is_refused():
    with pytest.raises(OutOfRange, match="before_c"):
        counter_charge_c([-1.0], [2.0], [3.0])
