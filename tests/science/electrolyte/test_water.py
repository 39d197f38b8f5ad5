import math

import numpy as np
import pytest

from server.science.electrolyte.water import (
    liquid_k,
    water_density_kg_m3,
    water_viscosity_pa_s,
)
from server.science.errors import OutOfRange

WARMING_K = np.linspace(283.15, 368.15, 50)


def test_water_is_lighter_and_thinner_when_warm():
    assert (np.diff(water_density_kg_m3(WARMING_K)) < 0).all()
    assert (np.diff(water_viscosity_pa_s(WARMING_K)) < 0).all()


def test_water_is_densest_near_four_degrees():
    kelvin = np.linspace(273.15, 283.15, 1001)

    assert kelvin[np.argmax(water_density_kg_m3(kelvin))] == pytest.approx(277.13, abs=0.1)


@pytest.mark.parametrize("property_of", [water_density_kg_m3, water_viscosity_pa_s])
def test_a_missing_temperature_stays_missing_alone(property_of):
    found = property_of([293.15, math.nan, 313.15])

    assert np.isnan(found).tolist() == [False, True, False]


@pytest.mark.parametrize("kelvin", [250.0, 430.0, 0.0, -1.0, math.inf])
def test_a_temperature_at_which_no_bath_is_liquid_is_refused(kelvin):
    with pytest.raises(OutOfRange, match="temperature_k"):
        liquid_k([298.15, kelvin])


def test_degrees_celsius_by_mistake_are_refused():
    with pytest.raises(OutOfRange, match="temperature_k"):
        water_density_kg_m3(45.0)
