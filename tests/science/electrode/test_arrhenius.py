"""Arrhenius: the same temperature, there and back, and a missing value."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrode.arrhenius import activation_j_mol, arrhenius_at, arrhenius_ratio
from server.science.errors import OutOfRange

energies = st.floats(-80_000.0, 200_000.0)
kelvins = st.floats(273.15, 373.15)


@given(energies, kelvins)
def test_at_the_same_temperature_nothing_changes(energy, kelvin):
    assert arrhenius_ratio(energy, kelvin, kelvin) == 1.0


@given(energies, kelvins, kelvins)
def test_there_and_back_is_the_value_it_came_from(energy, here, there):
    value = arrhenius_at(arrhenius_at(7e-10, energy, here, there), energy, there, here)

    assert value == pytest.approx(7e-10, rel=1e-12)


@given(energies, st.floats(273.15, 320.0), st.floats(1.0, 50.0))
def test_the_energy_of_a_ratio_is_the_one_it_came_from(energy, kelvin, warmer):
    ratio = arrhenius_ratio(energy, kelvin, kelvin + warmer)

    found = activation_j_mol(ratio, kelvin, kelvin + warmer)

    assert found == pytest.approx(energy, rel=1e-9, abs=1e-6)


def test_a_negative_energy_falls_as_it_warms():
    assert arrhenius_ratio(-15_000.0, 298.15, 333.15) < 1.0


def test_a_missing_value_leaves_its_neighbours_alone():
    values = arrhenius_at([7e-10, np.nan], 19_200.0, 313.15, 338.15)

    assert np.isnan(values).tolist() == [False, True]
    assert values[0] == arrhenius_at(7e-10, 19_200.0, 313.15, 338.15)


def test_one_temperature_tells_no_energy():
    with pytest.raises(OutOfRange, match="two different temperatures"):
        activation_j_mol(2.0, [300.0, 310.0], [310.0, 310.0])


@pytest.mark.parametrize("place", [1, 2])
def test_a_temperature_below_zero_is_refused(place):
    inputs = [19_200.0, 313.15, 338.15]
    inputs[place] = -10.0

    with pytest.raises(OutOfRange, match="_k"):
        arrhenius_ratio(*inputs)


def test_a_result_beyond_any_float_is_refused_without_a_warning():
    with pytest.raises(OutOfRange, match="arrhenius_ratio"):
        arrhenius_ratio(1e9, 300.0, 400.0)
    with pytest.raises(OutOfRange, match="arrhenius_at"):
        arrhenius_at(1.7e308, 19_200.0, 313.15, 338.15)
