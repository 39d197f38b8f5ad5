"""Wilke, Eisenberg and Tobias, J. Electrochem. Soc. 100 (1953) 513: copper on vertical plates.

Looked up in a public research repository that quotes the pages: Nu' = 0.673 (Sc Gr)^(1/4), eq. XV;
delta' = 1.48 (Sc Gr)^(-1/4), eq. XVII, which differ by 0.4 %; 0.01 to 0.74 M copper sulfate in
about 1.5 M acid, plates of 0.25 to 3.0 inches; that a tenfold density difference moves the film
1.8 times, and one of 0.078 in place of 0.00316 makes it 2.2 times thinner. The turbulent law,
Sh = 0.31 (Sc Gr)^0.28, and the ranges: Fouad and Ibl 1960, from memory.
"""

import pytest

from server.science.electrode.convection import (
    LAMINAR_RANGE,
    grashof,
    natural_film_m,
    schmidt,
    sherwood,
)

PRODUCTS = [1e6, 1e9, 1e12]


def film_m(height_m, density_share):
    """The laminar film in water-thin solution."""
    product = schmidt(1.0e-6, 7.0e-10) * grashof(density_share, height_m, 1.0e-6)
    return natural_film_m(height_m, product, "laminar")


@pytest.mark.parametrize("product", PRODUCTS)
def test_the_film_has_the_coefficient_printed(product):
    assert natural_film_m(1.0, product) * product**0.25 == pytest.approx(1.48, abs=0.005)


@pytest.mark.parametrize("product", PRODUCTS)
def test_the_transfer_number_agrees_with_the_other_equation(product):
    number = sherwood(1.0, natural_film_m(1.0, product))

    assert number == pytest.approx(0.673 * product**0.25, rel=0.005)


def test_a_tenfold_density_difference_moves_the_film():
    assert film_m(0.02, 1e-3) / film_m(0.02, 1e-2) == pytest.approx(1.8, abs=0.05)


def test_a_concentrated_solution_makes_it_thinner():
    assert film_m(0.02, 3.16e-3) / film_m(0.02, 0.078) == pytest.approx(2.2, abs=0.05)


def test_their_experiments_lie_in_the_laminar_range():
    # Their thinnest solution on the lowest plate and their thickest on the highest. A mole of
    # copper sulfate a litre makes a solution about a seventh heavier, viscosity and diffusion
    # rounded.
    for density_share, height_m in ((0.0015, 0.00635), (0.11, 0.0762)):
        product = schmidt(1.4e-6, 6.0e-10) * grashof(density_share, height_m, 1.4e-6)
        assert LAMINAR_RANGE.holds(product)


def test_a_turbulent_metre_by_hand():
    # (1e14)^0.28 = 10^3.92 = 8317.64; times 0.31 is 2578.47, and a metre over that 0.38783 mm.
    assert natural_film_m(1.0, 1e14) == pytest.approx(0.38783e-3, rel=1e-4)
