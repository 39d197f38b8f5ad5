"""Energy of a cell against brute force in fine steps."""

import numpy as np
import pytest

from server.science.energy import (
    joined_volts,
    moments_of_current,
    referred_volts,
    straight_energy_j,
)
from server.science.errors import OutOfRange

RESISTANCE = 11e-6
RATED = 36e3


def test_a_reading_referred_to_its_own_current_stays_as_it_is():
    assert referred_volts(2.01, RATED, RATED, RESISTANCE) == pytest.approx(2.01)


def test_a_missing_current_gives_no_referred_voltage():
    assert np.isnan(referred_volts(2.01, np.nan, RATED, RESISTANCE))


def test_a_negative_resistance_is_refused():
    with pytest.raises(OutOfRange, match="resistance_ohm"):
        referred_volts(2.0, RATED, RATED, -1e-6)


def test_readings_of_one_cell_say_nothing_about_another():
    volts = joined_volts([1, 1, 3], [0, 10, 5], [2.0, 2.1, 3.0], [1, 2, 3], [5, 5, 5], 100)

    assert volts[0] == pytest.approx(2.05)
    assert np.isnan(volts[1])
    assert volts[2] == 3.0


@pytest.mark.parametrize(
    ("at_s", "volts"), [(-50, 2.0), (0, 2.0), (10, 2.1), (50, 2.1), (-101, np.nan), (111, np.nan)]
)
def test_a_reading_is_held_as_far_as_it_reaches(at_s, volts):
    found = joined_volts([1, 1], [0, 10], [2.0, 2.1], 1, [at_s], 100)

    assert found[0] == pytest.approx(volts, nan_ok=True)


def test_readings_out_of_each_others_reach_are_held_and_not_joined():
    found = joined_volts([1, 1], [0, 300], [2.0, 3.0], 1, [90, 150, 210], 100)

    assert found == pytest.approx([2.0, np.nan, 3.0], nan_ok=True)


@pytest.mark.parametrize("seed", range(5))
def test_energy_agrees_with_a_sum_of_seconds(seed):
    rng = np.random.default_rng(seed)
    edge_s = np.concatenate(([0.0], np.sort(rng.integers(1, 28_800, 20)).astype(float)))
    edge_s = np.unique(edge_s)
    amps = rng.uniform(0, RATED, edge_s.size)
    start_v, end_v = 1.98, 2.05
    charge, square, first = moments_of_current(edge_s, amps, [0.0, 28_800.0])

    energy_j = straight_energy_j(
        start_v,
        end_v,
        28_800.0,
        np.diff(charge)[0],
        np.diff(square)[0],
        np.diff(first)[0],
        RATED,
        RESISTANCE,
    )

    middle_s = np.arange(28_800) + 0.5
    current = amps[np.searchsorted(edge_s, middle_s, side="right") - 1]
    volts = start_v + (end_v - start_v) * middle_s / 28_800 + RESISTANCE * (current - RATED)
    assert energy_j == pytest.approx(float(np.sum(volts * current)), rel=1e-9)


def test_a_moment_before_the_record_is_refused():
    with pytest.raises(OutOfRange, match="at_s"):
        moments_of_current([10.0], [1.0], [5.0])


def test_a_stretch_of_no_length_takes_no_energy():
    assert straight_energy_j(2.0, 2.0, 0.0, 0.0, 0.0, 0.0, RATED, RESISTANCE) == 0
