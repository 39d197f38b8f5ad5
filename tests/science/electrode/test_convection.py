"""Free convection on a plate: each law in its range, and a film that joins them."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrode.convection import (
    LAMINAR_RANGE,
    TURBULENT_RANGE,
    grashof,
    natural_film_m,
    natural_flow,
    schmidt,
    sherwood,
)
from server.science.errors import OutOfRange, UnknownName


def test_the_laws_are_used_as_they_are_within_their_ranges():
    for product in (LAMINAR_RANGE.low, 1e9, LAMINAR_RANGE.high):
        assert natural_film_m(0.5, product) == natural_film_m(0.5, product, "laminar")
    for product in (TURBULENT_RANGE.low, 2e14, TURBULENT_RANGE.high):
        assert natural_film_m(0.5, product) == natural_film_m(0.5, product, "turbulent")


def test_beyond_the_ranges_the_nearer_law_goes_on():
    assert natural_film_m(0.5, 1e2) == natural_film_m(0.5, 1e2, "laminar")
    assert natural_film_m(0.5, 1e18) == natural_film_m(0.5, 1e18, "turbulent")


def test_the_film_has_no_step_between_the_laws():
    edges = np.array([LAMINAR_RANGE.high, TURBULENT_RANGE.low])

    below, above = (natural_film_m(1.0, edges * factor) for factor in (1 - 1e-9, 1 + 1e-9))

    np.testing.assert_allclose(below, above, rtol=1e-8)


def test_halfway_between_is_halfway_on_logarithmic_paper():
    ends = natural_film_m(1.0, [LAMINAR_RANGE.high, TURBULENT_RANGE.low])

    middle = natural_film_m(1.0, np.sqrt(LAMINAR_RANGE.high * TURBULENT_RANGE.low))

    assert middle == pytest.approx(np.sqrt(ends[0] * ends[1]))


def test_more_lift_always_makes_a_thinner_film():
    films_m = natural_film_m(1.0, np.logspace(3, 17, 200))

    assert (np.diff(films_m) < 0.0).all()


@given(st.floats(1e-6, 0.2), st.floats(0.01, 1.5), st.floats(5e-7, 3e-6), st.floats(2e-10, 2e-9))
def test_laminar_films_grow_with_the_fourth_root_of_the_height(share, height, viscosity, diffusion):
    films_m = [
        natural_film_m(
            metres, schmidt(viscosity, diffusion) * grashof(share, metres, viscosity), "laminar"
        )
        for metres in (height, 16 * height)
    ]

    assert films_m[1] == pytest.approx(2 * films_m[0])


def test_the_flow_is_told_by_the_product():
    flows = natural_flow([1e9, 5e12, 1e14, np.nan])

    assert flows.tolist() == ["laminar", "between", "turbulent", "unknown"]


def test_a_cathode_of_a_tankhouse_is_turbulent():
    # 45 g/L of copper, 60 degC, a metre: density falls by about a tenth at the limiting current.
    product = schmidt(7.6e-7, 1.0e-9) * grashof(0.1, 1.0, 7.6e-7)

    assert natural_flow(product) == "turbulent"


def test_the_sherwood_number_is_that_of_the_film():
    assert sherwood(1.0, natural_film_m(1.0, 1e14)) == pytest.approx(0.31 * 1e14**0.28)


@pytest.mark.parametrize("flow", ["by number", "laminar", "turbulent"])
def test_a_missing_value_leaves_its_neighbours_alone(flow):
    films_m = natural_film_m(1.0, [1e10, np.nan, 1e14], flow)

    assert np.isnan(films_m).tolist() == [False, True, False]
    assert films_m[2] == natural_film_m(1.0, 1e14, flow)


def test_an_unknown_flow_is_refused_with_the_near_name():
    with pytest.raises(UnknownName, match="turbulent"):
        natural_film_m(1.0, 1e14, "turbulant")


def test_a_solution_that_does_not_rise_has_no_number():
    with pytest.raises(OutOfRange, match="density_difference_share"):
        grashof([0.01, 0.0], 1.0, 1e-6)
    with pytest.raises(OutOfRange, match="schmidt_grashof"):
        natural_film_m(1.0, -1.0)
