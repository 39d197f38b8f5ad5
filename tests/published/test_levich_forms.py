"""The Levich equation as an encyclopaedia prints it, "Levich equation" (stored copies).

Looked up: 0.620 for radians per second, 0.201 for turns per minute and 1.554 for turns per second;
0.51 for the flow towards the disc, from which the coefficient follows. That the film is 1.61
D^(1/3) nu^(1/6) omega^(-1/2): public course code.
"""

import math

import pytest

from server.science.constants import FARADAY_C_MOL
from server.science.electrode.film import LEVICH_COEFFICIENT, levich_film_m, levich_limiting_a_m2

DIFFUSIVITY_M2_S, VISCOSITY_M2_S, MOL_M3 = 7.0e-10, 1.0e-6, 100.0
SCALE = FARADAY_C_MOL * MOL_M3 * DIFFUSIVITY_M2_S ** (2 / 3) * VISCOSITY_M2_S ** (-1 / 6)


@pytest.mark.parametrize(
    ("turns_per_second", "speed", "coefficient", "half_digit"),
    [
        pytest.param(10.0, 10.0 * 2 * math.pi, 0.620, 0.0005, id="radians per second"),
        pytest.param(10.0, 600.0, 0.201, 0.0005, id="turns per minute"),
        pytest.param(10.0, 10.0, 1.554, 0.0005, id="turns per second"),
    ],
)
def test_the_coefficient_is_the_one_printed(turns_per_second, speed, coefficient, half_digit):
    limit = levich_limiting_a_m2(
        1, DIFFUSIVITY_M2_S, VISCOSITY_M2_S, MOL_M3, turns_per_second * 2 * math.pi
    )

    assert limit / SCALE / math.sqrt(speed) == pytest.approx(coefficient, abs=half_digit)


def test_the_film_has_the_coefficient_printed():
    film_m = levich_film_m(DIFFUSIVITY_M2_S, VISCOSITY_M2_S, 100.0)
    scale_m = DIFFUSIVITY_M2_S ** (1 / 3) * VISCOSITY_M2_S ** (1 / 6) / 10.0

    assert film_m / scale_m == pytest.approx(1.61, abs=0.005)


def test_the_coefficient_follows_from_the_flow():
    # Convective diffusion with v = -0.51 omega^(3/2) nu^(-1/2) y^2 integrates to (0.51 / 3)^(1/3)
    # over Gamma(4/3) = 0.892980; by hand 0.553966 / 0.892980 = 0.62036.
    assert (0.51 / 3) ** (1 / 3) / math.gamma(4 / 3) == pytest.approx(LEVICH_COEFFICIENT, abs=5e-4)
