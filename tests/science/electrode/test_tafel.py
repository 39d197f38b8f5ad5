"""Tafel's law both ways, its slope, and a line through measured points."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrode.rates import butler_volmer_overpotential_v
from server.science.electrode.tafel import (
    tafel_current_a_m2,
    tafel_exchange_a_m2,
    tafel_line,
    tafel_overpotential_v,
    tafel_slope_v,
    transfer_from_slope,
)
from server.science.errors import OutOfRange, WrongShape

slopes = st.floats(0.02, 0.3)
exchanges = st.floats(-12.0, 3.0).map(lambda decade: 10.0**decade)


def test_two_electrons_halve_the_slope():
    assert tafel_slope_v(0.5, 318.15, electrons=2) == pytest.approx(tafel_slope_v(1.0, 318.15))


@given(st.floats(0.05, 4.0), st.floats(273.15, 373.15))
def test_the_coefficient_of_a_slope_is_the_one_it_came_from(transfer, kelvin):
    assert transfer_from_slope(tafel_slope_v(transfer, kelvin), kelvin) == pytest.approx(transfer)


def test_ten_times_the_current_costs_one_slope():
    volts = tafel_overpotential_v([30.0, 300.0], 1e-4, 0.100)

    assert np.diff(volts) == pytest.approx([0.100])


@given(st.floats(-0.5, 1.5), exchanges, slopes)
def test_the_overpotential_of_a_current_is_the_one_it_came_from(volts, exchange, slope):
    current = tafel_current_a_m2(volts, exchange, slope)

    assert tafel_overpotential_v(current, exchange, slope) == pytest.approx(volts, abs=1e-12)
    assert tafel_exchange_a_m2(current, volts, slope) == pytest.approx(exchange, rel=1e-9)


def test_it_meets_butler_volmer_far_from_equilibrium():
    slope = tafel_slope_v(0.5, 318.15)

    tafel = tafel_overpotential_v(3000.0, 1.0, slope)

    exact = -butler_volmer_overpotential_v(-3000.0, 1.0, 1.5, 0.5, 318.15)
    assert tafel == pytest.approx(exact, rel=1e-9)


def test_no_current_has_no_answer_and_leaves_its_neighbours_alone():
    volts = tafel_overpotential_v([0.0, 300.0, np.nan], 1.0, 0.118)

    assert np.isnan(volts).tolist() == [True, False, True]
    assert volts[1] == tafel_overpotential_v(300.0, 1.0, 0.118)


def test_a_negative_current_is_refused():
    with pytest.raises(OutOfRange, match="current_a_m2"):
        tafel_overpotential_v([300.0, -300.0], 1.0, 0.118)


def test_a_current_beyond_any_float_is_refused_without_a_warning():
    with pytest.raises(OutOfRange, match="found inf"):
        tafel_current_a_m2(100.0, 1.0, 0.1)


def test_a_line_finds_the_law_behind_its_points():
    volts = np.array([0.3, 0.4, 0.5, 0.6])

    line = tafel_line(volts, tafel_current_a_m2(volts, 2e-3, 0.120))

    assert line.slope_v == pytest.approx(0.120)
    assert line.exchange_a_m2 == pytest.approx(2e-3)
    assert line.slope_u_v == pytest.approx(0.0, abs=1e-7)


def test_the_errors_of_a_line_cover_the_truth_as_often_as_they_should():
    rng = np.random.default_rng(seed=20240305)
    volts = np.linspace(0.3, 0.6, 12)
    misses = []
    for _ in range(400):
        noise = 10.0 ** rng.normal(0.0, 0.02, volts.size)
        line = tafel_line(volts, noise * tafel_current_a_m2(volts, 2e-3, 0.120))
        misses.append((line.slope_v - 0.120) / line.slope_u_v)

    # Student's t with 10 degrees of freedom: standard deviation sqrt(10 / 8) = 1.118.
    assert np.std(misses) == pytest.approx(math.sqrt(10 / 8), rel=0.12)


def test_points_that_miss_a_reading_are_left_out():
    volts = [0.3, 0.4, np.nan, 0.5, 0.6]
    currents = [1.0, 7.0, 3.0, 50.0, np.nan]

    assert tafel_line(volts, currents) == tafel_line([0.3, 0.4, 0.5], [1.0, 7.0, 50.0])


@pytest.mark.parametrize(
    ("volts", "currents"),
    [
        ([0.3, 0.4, 0.5], [1.0, 10.0]),
        ([0.3, 0.4], [1.0, 10.0]),
        ([0.3, 0.3, 0.4], [1.0, 1.1, 10.0]),
        ([[0.3, 0.4, 0.5]], [[1.0, 10.0, 90.0]]),
    ],
)
def test_too_few_or_unequal_points_are_refused(volts, currents):
    with pytest.raises(WrongShape):
        tafel_line(volts, currents)
