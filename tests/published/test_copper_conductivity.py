"""D. C. Price and W. G. Davenport, Metall. Trans. B 12B (1981) 639: acid copper electrolytes.

Status: the coefficients are from memory; the two baths were computed with them in a library of
reference values made apart from this program. So the first test holds the arithmetic, not the
article. That conductivity falls with copper, nickel and arsenic and rises with acid and warmth is
looked up: T. Kalliomaki, J. Aromaa and M. Lundstrom, Minerals 6 (2016) 59, abstract.
"""

import pytest

from server.science.electrolyte.conductivity import (
    CONDUCTIVITIES,
    conductivity_s_m,
    conductivity_with_doubt,
)
from server.science.electrolyte.laliberte import density_kg_m3
from server.science.electrolyte.salts import bath_g_l
from server.science.electrolyte.sulfuric_acid import acid_conductivity_s_m

COPPER = CONDUCTIVITIES["Cu"]


@pytest.mark.parametrize(
    ("copper_g_l", "kelvin", "s_cm"), [(40.0, 318.15, 0.6315), (45.0, 333.15, 0.6776)]
)
def test_two_baths_with_the_recalled_coefficients(copper_g_l, kelvin, s_cm):
    found = conductivity_s_m(COPPER, copper_g_l, 180.0, kelvin) / 100

    assert found == pytest.approx(s_cm, abs=5e-5)


@pytest.mark.parametrize(
    ("copper_g_l", "degc", "g_cm3"), [(40.0, 45.0, 1.1845), (45.0, 60.0, 1.1867)]
)
def test_their_recalled_density_lies_half_a_per_cent_below_the_model(copper_g_l, degc, g_cm3):
    # 1.022 + 0.00224 Cu + 0.000555 H2SO4 - 0.0006 t, from memory.
    by_hand = 1.022 + 0.00224 * copper_g_l + 0.000555 * 180.0 - 0.0006 * degc

    found = density_kg_m3(bath_g_l({"Cu": copper_g_l}, 180.0), degc + 273.15) / 1000

    assert by_hand == pytest.approx(g_cm3, abs=5e-5)
    assert found == pytest.approx(g_cm3, rel=0.006)


@pytest.mark.parametrize("acid_g_l", [165.0, 180.0, 200.0, 223.0])
@pytest.mark.parametrize("degc", [45.0, 50.0, 60.0, 70.0])
def test_without_copper_it_is_sulfuric_acid(acid_g_l, degc):
    # Two recollections that have nothing to do with each other agree within 3.5 %.
    found = conductivity_s_m(COPPER, 0.0, acid_g_l, degc + 273.15)

    assert found == pytest.approx(acid_conductivity_s_m(acid_g_l, degc + 273.15), rel=0.035)


def test_signs_of_a_refinery_over_its_whole_range():
    bath = conductivity_s_m(COPPER, 40.0, 160.0, 323.15)

    assert conductivity_s_m(COPPER, 60.0, 160.0, 323.15) < bath
    assert conductivity_s_m(COPPER, 40.0, 160.0, 323.15, {"Ni": 20.0}) < bath
    assert conductivity_s_m(COPPER, 40.0, 160.0, 323.15, {"As": 30.0}) < bath
    assert conductivity_s_m(COPPER, 40.0, 220.0, 323.15) > bath
    assert conductivity_s_m(COPPER, 40.0, 160.0, 343.15) > bath


def test_the_round_figure_of_lessons_lies_within_the_doubt():
    # 60 S/m is the figure of many worked examples of copper winning (common practice).
    value, doubt = conductivity_with_doubt(COPPER, 40.0, 180.0, 318.15)

    assert abs(value - 60.0) < doubt
