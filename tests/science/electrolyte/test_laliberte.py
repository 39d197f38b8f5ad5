import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrolyte.laliberte import (
    LALIBERTE_RANGES,
    density_from_shares_kg_m3,
    density_kg_m3,
    kinematic_viscosity_m2_s,
    mass_shares,
    viscosity_from_shares_pa_s,
    viscosity_pa_s,
)
from server.science.electrolyte.laliberte_fits import SALT_FITS
from server.science.electrolyte.water import water_density_kg_m3, water_viscosity_pa_s
from server.science.errors import OutOfRange, UnknownName, WrongShape

BATH = {"CuSO4": 100.0, "NiSO4": 30.0, "H2SO4": 180.0}
# What each salt was measured at, kept to temperatures at which a tankhouse works.
TESTED = {
    formula: (max(warm.low, 288.15), min(warm.high, 338.15), rich.high)
    for formula, (warm, rich) in LALIBERTE_RANGES["density"].items()
}


@st.composite
def single_salts(draw):
    """A salt, a temperature and two shares of it, all within its data."""
    formula = draw(st.sampled_from(sorted(SALT_FITS)))
    cold, hot, richest = TESTED[formula]
    kelvin = draw(st.floats(cold, hot))
    less = draw(st.floats(0.0, richest - 0.01))
    more = draw(st.floats(less + 0.005, richest))
    return formula, kelvin, less, more


@given(single_salts())
def test_density_rises_with_every_salt_within_its_data(salt):
    formula, kelvin, less, more = salt

    lighter, heavier = density_from_shares_kg_m3({formula: [less, more]}, kelvin)

    assert heavier > lighter


@given(
    copper=st.floats(0.0, 150.0),
    acid=st.floats(0.0, 250.0),
    kelvin=st.floats(288.15, 333.15),
    more=st.floats(1.0, 50.0),
)
def test_a_bath_grows_denser_with_copper_and_with_acid(copper, acid, kelvin, more):
    bath = density_kg_m3({"CuSO4": copper, "H2SO4": acid}, kelvin)

    assert density_kg_m3({"CuSO4": copper + more, "H2SO4": acid}, kelvin) > bath
    assert density_kg_m3({"CuSO4": copper, "H2SO4": acid + more}, kelvin) > bath


@given(kelvin=st.floats(288.15, 343.15), warmer=st.floats(1.0, 20.0))
def test_a_warmer_bath_is_lighter_and_thinner(kelvin, warmer):
    assert density_kg_m3(BATH, kelvin + warmer) < density_kg_m3(BATH, kelvin)
    assert viscosity_pa_s(BATH, kelvin + warmer) < viscosity_pa_s(BATH, kelvin)


@pytest.mark.parametrize("formula", sorted(SALT_FITS))
def test_every_salt_thickens_water(formula):
    _, richest = LALIBERTE_RANGES["viscosity"][formula]
    shares = np.linspace(0.03, richest.high, 20)

    found = viscosity_from_shares_pa_s({formula: shares}, 298.15)

    assert (np.diff(found) > 0).all()
    assert found[0] > water_viscosity_pa_s(298.15)


@given(
    shares=st.dictionaries(
        st.sampled_from(sorted(SALT_FITS)), st.floats(0.0, 0.05), min_size=1, max_size=5
    ),
    kelvin=st.floats(288.15, 338.15),
)
def test_grams_per_litre_and_shares_give_one_density(shares, kelvin):
    density = density_from_shares_kg_m3(shares, kelvin)

    grams_l = {formula: share * density for formula, share in shares.items()}
    assert density_kg_m3(grams_l, kelvin) == pytest.approx(density, rel=1e-9)
    back = mass_shares(grams_l, kelvin)
    assert {formula: float(share) for formula, share in back.items()} == pytest.approx(shares)


@pytest.mark.parametrize("formula", sorted(SALT_FITS))
def test_a_salt_at_zero_changes_nothing(formula):
    others = {known: g_l for known, g_l in BATH.items() if known != formula}
    with_it = {**others, formula: 0.0}

    assert density_kg_m3(with_it, 318.15) == density_kg_m3(others, 318.15)
    assert viscosity_pa_s(with_it, 318.15) == viscosity_pa_s(others, 318.15)


def test_the_order_of_the_salts_does_not_matter():
    turned = dict(reversed(BATH.items()))

    assert density_kg_m3(turned, 318.15) == pytest.approx(density_kg_m3(BATH, 318.15), rel=1e-14)


@pytest.mark.parametrize("empty", [{}, {"MnSO4": 0.0}, {"CuSO4": 0.0, "H2SO4": 0.0}])
def test_a_bath_without_salt_is_water(empty):
    assert density_kg_m3(empty, 298.15) == water_density_kg_m3(298.15)
    assert viscosity_pa_s(empty, 298.15) == pytest.approx(water_viscosity_pa_s(298.15), rel=1e-14)


@pytest.mark.parametrize("property_of", [density_kg_m3, viscosity_pa_s, kinematic_viscosity_m2_s])
def test_missing_numbers_stay_missing_and_spare_their_neighbours(property_of):
    copper = [100.0, math.nan, 100.0, 100.0]
    acid = [180.0, 180.0, math.nan, 180.0]
    kelvin = [318.15, 318.15, 318.15, math.nan]

    found = property_of({"CuSO4": copper, "H2SO4": acid}, kelvin)

    assert np.isnan(found).tolist() == [False, True, True, True]
    assert found[0] == property_of({"CuSO4": 100.0, "H2SO4": 180.0}, 318.15)


def test_shapes_are_spread_over_each_other():
    found = density_kg_m3({"CuSO4": np.full((3, 1), 100.0), "H2SO4": [150.0, 180.0]}, 318.15)

    assert found.shape == (3, 2)
    assert found[0, 1] == density_kg_m3({"CuSO4": 100.0, "H2SO4": 180.0}, 318.15)


def test_kinematic_viscosity_is_viscosity_over_density():
    found = kinematic_viscosity_m2_s(BATH, 318.15)

    expected = viscosity_pa_s(BATH, 318.15) / density_kg_m3(BATH, 318.15)
    assert found == pytest.approx(expected, rel=1e-14)


def test_where_a_fit_has_no_value_there_is_none():
    # Copper's divisor 1 - 2125.99 S^9.17 falls below zero beyond S = 0.4337.
    found = viscosity_from_shares_pa_s({"CuSO4": 0.05, "H2SO4": [0.30, 0.40]}, 298.15)

    assert np.isnan(found).tolist() == [False, True]


def test_more_salt_than_any_density_fits_is_refused():
    with pytest.raises(OutOfRange, match="all salts together") as caught:
        density_kg_m3({"CuSO4": [100.0, 900.0]}, 298.15)

    assert caught.value.found == 900.0


def test_an_unknown_salt_is_named_with_near_ones():
    with pytest.raises(UnknownName, match="CuSO4"):
        density_kg_m3({"CuSO": 10.0}, 298.15)


@pytest.mark.parametrize(
    ("salts", "quantity"), [({"CuSO4": -1.0}, "CuSO4_g_l"), ({"H2SO4": math.inf}, "H2SO4_g_l")]
)
def test_an_impossible_concentration_is_named(salts, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        density_kg_m3(salts, 298.15)


@pytest.mark.parametrize("property_of", [density_from_shares_kg_m3, viscosity_from_shares_pa_s])
def test_shares_that_leave_no_water_are_refused(property_of):
    with pytest.raises(OutOfRange, match="dissolved_share"):
        property_of({"CuSO4": 0.4, "H2SO4": [0.1, 0.6]}, 298.15)


def test_shapes_that_do_not_fit_are_refused():
    with pytest.raises(WrongShape, match="salts"):
        density_kg_m3({"CuSO4": [1.0, 2.0], "H2SO4": [1.0, 2.0, 3.0]}, 298.15)
