import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrolyte.diffusion import (
    COPPER_DIFFUSION_RANGES,
    COPPER_REFERENCE_K,
    COPPER_REFERENCE_M2_S,
    ION_DIFFUSIVITIES_M2_S,
    copper_diffusivity_m2_s,
    copper_diffusivity_with_doubt,
    ion_diffusivity_m2_s,
)
from server.science.electrolyte.laliberte import viscosity_pa_s
from server.science.electrolyte.water import water_viscosity_pa_s
from server.science.errors import OutOfRange, UnknownName
from server.science.ranges import outside


@pytest.mark.parametrize("ion", sorted(ION_DIFFUSIVITIES_M2_S))
def test_in_pure_water_at_25_degrees_it_is_the_tables(ion):
    assert ion_diffusivity_m2_s(ion, 298.15) == pytest.approx(ION_DIFFUSIVITIES_M2_S[ion])


def test_it_is_slower_in_a_thicker_bath_in_proportion():
    thin = ion_diffusivity_m2_s("Zn2+", 311.15, 0.8e-3)

    assert ion_diffusivity_m2_s("Zn2+", 311.15, 1.6e-3) == pytest.approx(thin / 2.0)


def test_pure_water_is_what_is_meant_without_a_viscosity():
    water = water_viscosity_pa_s(311.15)

    assert ion_diffusivity_m2_s("Zn2+", 311.15) == ion_diffusivity_m2_s("Zn2+", 311.15, water)


@given(kelvin=st.floats(288.15, 343.15), warmer=st.floats(0.5, 20.0))
def test_all_diffusion_grows_with_warmth(kelvin, warmer):
    assert ion_diffusivity_m2_s("Fe3+", kelvin + warmer) > ion_diffusivity_m2_s("Fe3+", kelvin)
    assert copper_diffusivity_m2_s(kelvin + warmer) > copper_diffusivity_m2_s(kelvin)


@pytest.mark.parametrize("degc", [45.0, 55.0, 65.0])
def test_both_ways_to_copper_agree_within_their_doubt(degc):
    bath = viscosity_pa_s({"CuSO4": 113.0, "H2SO4": 180.0}, degc + 273.15)

    by_viscosity = ion_diffusivity_m2_s("Cu2+", degc + 273.15, bath)

    value, doubt = copper_diffusivity_with_doubt(degc + 273.15)
    assert abs(by_viscosity - value) < 2 * math.hypot(doubt, 0.20 * by_viscosity)


def test_at_the_reference_copper_has_the_reference_value():
    value, doubt = copper_diffusivity_with_doubt(COPPER_REFERENCE_K)

    assert value == COPPER_REFERENCE_M2_S
    # By hand: (10 - 6) / 2 / sqrt 3 = 1.155, in 1e-10 m2/s.
    assert doubt == pytest.approx(1.155e-10, rel=0.003)


def test_the_doubt_grows_with_the_distance_from_the_reference():
    value, doubt = copper_diffusivity_with_doubt([333.15, 323.15, 313.15, 303.15])

    assert (np.diff(doubt / value) > 0).all()


def test_a_plants_own_value_takes_the_place_of_the_recalled_one():
    value, doubt = copper_diffusivity_with_doubt(318.15, 5.5e-10, 318.15, 0.05)

    assert (value, doubt) == (pytest.approx(5.5e-10), pytest.approx(0.05 * 5.5e-10))


def test_the_measured_baths_are_known():
    left = outside(COPPER_DIFFUSION_RANGES, metal_g_l=30.0, acid_g_l=180.0, temperature_k=333.15)

    assert [str(known) for known in left] == ["metal_g_l 35 to 70"]


def test_missing_numbers_stay_missing_and_spare_their_neighbours():
    kelvin = [318.15, math.nan, 318.15]

    assert np.isnan(copper_diffusivity_with_doubt(kelvin)).tolist() == [[False, True, False]] * 2
    by_viscosity = ion_diffusivity_m2_s("Cu2+", kelvin, [1e-3, 1e-3, math.nan])
    assert np.isnan(by_viscosity).tolist() == [False, True, True]


def test_an_unknown_ion_is_named_with_near_ones():
    with pytest.raises(UnknownName, match=r"Cu2\+"):
        ion_diffusivity_m2_s("Cu", 298.15)


@pytest.mark.parametrize(
    ("quantity", "arguments"),
    [
        ("viscosity_pa_s", ("Cu2+", 298.15, 0.0)),
        ("temperature_k", ("Cu2+", 45.0)),
    ],
)
def test_impossible_numbers_are_named(quantity, arguments):
    with pytest.raises(OutOfRange, match=quantity):
        ion_diffusivity_m2_s(*arguments)


def test_impossible_numbers_of_copper_are_named():
    with pytest.raises(OutOfRange, match="reference_m2_s"):
        copper_diffusivity_m2_s(318.15, -1e-10)
    with pytest.raises(OutOfRange, match="reference_u_share"):
        copper_diffusivity_with_doubt(318.15, reference_u_share=-0.1)
