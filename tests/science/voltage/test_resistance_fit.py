"""Resistance out of readings: right, unmoved by shorts, silent where the readings are."""

import numpy as np
import pytest
import statsmodels.api as sm
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange, WrongShape
from server.science.voltage.resistance_fit import (
    TOO_FEW_ROUNDS,
    TOO_STEADY_A_CURRENT,
    resistance_from_rounds,
)

TRUE_OHM = 14e-6


def rounds_of(rounds, cells, noise_v=0.003, seed=20250301):
    """Currents of a section and readings of healthy cells."""
    rng = np.random.default_rng(seed)
    amps = rng.uniform(27e3, 31e3, rounds)
    volts = 1.6 + TRUE_OHM * amps[:, None] + rng.normal(0.0, noise_v, (rounds, cells))
    return amps, volts


def test_a_line_without_noise_is_found_to_its_digits():
    amps, volts = rounds_of(12, 3, noise_v=0.0)

    found = resistance_from_rounds(amps, volts)

    assert found.ohm.tolist() == pytest.approx([TRUE_OHM] * 3, rel=1e-9)
    assert found.reason.tolist() == [""] * 3
    assert found.rounds.tolist() == [12] * 3


def test_a_meter_is_never_better_than_its_last_digit():
    amps, volts = rounds_of(12, 1, noise_v=0.0)

    found = resistance_from_rounds(amps, volts, floor_v=0.002)

    assert found.noise_v.tolist() == [0.002]
    # By hand: the floor over the root of the sum of squares of the current.
    width = np.sqrt(((amps - amps.mean()) ** 2).sum())
    assert found.standard_uncertainty_ohm.tolist() == pytest.approx([0.002 / width])


@pytest.mark.parametrize("rounds", [10, 25, 80])
def test_the_fit_is_that_of_a_general_library(rounds):
    amps, volts = rounds_of(rounds, 1, seed=rounds)
    volts[: rounds // 6] -= 0.03
    design = sm.add_constant((amps - amps.mean()) / 1e3)
    huber = sm.RLM(volts[:, 0], design, M=sm.robust.norms.HuberT(1.345))
    start = huber.fit(tol=1e-13, maxiter=500, conv="coefs").params
    bisquare = sm.RLM(volts[:, 0], design, M=sm.robust.norms.TukeyBiweight(4.685))
    theirs = bisquare.fit(tol=1e-13, maxiter=500, conv="coefs", start_params=start)

    ours = resistance_from_rounds(amps, volts, floor_v=1e-9)

    assert ours.ohm[0] * 1e3 == pytest.approx(theirs.params[1], rel=1e-6)
    assert ours.standard_uncertainty_ohm[0] * 1e3 == pytest.approx(theirs.bse[1], rel=1e-6)


def test_the_stated_uncertainty_is_the_scatter_that_comes_out():
    amps, volts = rounds_of(40, 2000)

    found = resistance_from_rounds(amps, volts)

    stated = np.sqrt((found.standard_uncertainty_ohm**2).mean())
    assert found.ohm.std() == pytest.approx(stated, rel=0.06)
    assert found.ohm.mean() == pytest.approx(TRUE_OHM, abs=3 * stated / np.sqrt(2000))


def test_shorts_at_low_current_do_not_pass_for_resistance():
    amps, volts = rounds_of(40, 200)
    lowest = np.argsort(amps)[:6]
    shorted = volts.copy()
    shorted[lowest] -= 0.05

    found = resistance_from_rounds(amps, shorted)
    plain = np.polyfit(amps, shorted, 1)[0]

    stated = np.sqrt((found.standard_uncertainty_ohm**2).mean() / 200)
    assert found.ohm.mean() == pytest.approx(TRUE_OHM, abs=4 * stated)
    assert plain.mean() > 1.5 * TRUE_OHM


def test_cells_do_not_touch_each_other():
    amps, volts = rounds_of(20, 4)
    alone = resistance_from_rounds(amps, volts[:, 2])
    volts[:, 1] = np.nan
    volts[5:, 3] = np.nan

    together = resistance_from_rounds(amps, volts)

    assert together.ohm[2] == pytest.approx(float(alone.ohm), rel=1e-6)
    assert together.reason.tolist() == ["", TOO_FEW_ROUNDS, "", TOO_FEW_ROUNDS]
    assert np.isnan(together.ohm).tolist() == [False, True, False, True]
    assert np.isnan(together.standard_uncertainty_ohm).tolist() == [False, True, False, True]
    assert alone.ohm.shape == ()


def test_missing_readings_are_left_out():
    amps, volts = rounds_of(20, 1)
    gaps = volts.copy()
    gaps[[3, 7]] = np.nan
    holes = amps.copy()
    holes[11] = np.nan
    kept = [place for place in range(20) if place not in (3, 7, 11)]

    found = resistance_from_rounds(holes, gaps)
    short = resistance_from_rounds(amps[kept], volts[kept])

    assert found.rounds.tolist() == [17]
    assert found.ohm.tolist() == pytest.approx(short.ohm.tolist(), rel=1e-9)


def test_a_steady_current_gives_no_slope():
    _, volts = rounds_of(20, 2)

    found = resistance_from_rounds(30e3 + np.arange(20.0), volts)

    assert found.reason.tolist() == [TOO_STEADY_A_CURRENT] * 2
    assert np.isnan(found.ohm).all()


def test_one_odd_round_is_no_spread():
    amps, volts = np.full(20, 30e3), rounds_of(20, 1)[1]
    amps[4] = 15e3

    found = resistance_from_rounds(amps, volts)

    assert found.reason.tolist() == [TOO_STEADY_A_CURRENT]
    assert found.spread_share.tolist() == pytest.approx([0.0], abs=1e-6)


def test_two_set_points_are_enough():
    rng = np.random.default_rng(seed=7)
    amps = np.where(np.arange(24) < 12, 28e3, 30e3)
    volts = 1.6 + TRUE_OHM * amps + rng.normal(0.0, 0.001, 24)

    found = resistance_from_rounds(amps, volts)

    assert found.ohm == pytest.approx(TRUE_OHM, abs=3 * float(found.standard_uncertainty_ohm))
    assert found.standard_uncertainty_ohm < 0.05 * TRUE_OHM


def test_each_cell_may_have_its_own_current():
    amps, volts = rounds_of(12, 2, noise_v=0.0)
    own = np.column_stack([amps, amps[::-1]])
    volts[:, 1] = volts[::-1, 1]

    found = resistance_from_rounds(own, volts)

    assert found.ohm.tolist() == pytest.approx([TRUE_OHM] * 2, rel=1e-9)


@given(
    shift_v=st.floats(-0.5, 0.5), times=st.floats(0.2, 5.0), order=st.permutations(list(range(15)))
)
def test_level_scale_and_order_of_readings_change_nothing_else(shift_v, times, order):
    amps, volts = rounds_of(15, 1)
    plain = resistance_from_rounds(amps, volts[:, 0], floor_v=1e-9)

    moved = resistance_from_rounds(amps[order], times * (volts[order, 0] + shift_v), floor_v=1e-9)

    assert moved.ohm == pytest.approx(times * float(plain.ohm), rel=1e-5)


@pytest.mark.parametrize(
    ("amps", "volts", "options", "error"),
    [
        ([-1.0] * 8, [2.0] * 8, {}, OutOfRange),
        ([1.0] * 8, [np.inf] * 8, {}, OutOfRange),
        ([1.0] * 8, [2.0] * 8, {"floor_v": 0.0}, OutOfRange),
        ([1.0] * 8, [2.0] * 8, {"least_rounds": 3}, OutOfRange),
        ([1.0] * 8, [2.0] * 7, {}, WrongShape),
        ([[1.0, 1.0]] * 8, [[2.0] * 3] * 8, {}, WrongShape),
        (1.0, 2.0, {}, WrongShape),
    ],
)
def test_what_does_not_belong_together_is_refused(amps, volts, options, error):
    with pytest.raises(error):
        resistance_from_rounds(amps, volts, **options)
