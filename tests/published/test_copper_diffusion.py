"""How fast copper diffuses: activation energies of refining electrolytes.

M. S. Moats, J. B. Hiskey and co-workers, Hydrometallurgy 56 (2000) 255: 19.2 kJ/mol, with 35 to
70 g/L copper, 160 to 250 g/L acid, 40 to 65 degC. J. Appl. Electrochem. 37 (2007) 1093: 26.8 kJ/mol
in industrial electrolytes, 20 to 60 degC. Both looked up in the abstracts. The ratio of the first
was computed in a library of reference values made apart from this program; the second is computed
here by hand.
"""

import math

import pytest

from server.science.electrolyte.diffusion import (
    COPPER_ACTIVATION_J_MOL,
    COPPER_DIFFUSION_RANGES,
    INDUSTRIAL_COPPER_ACTIVATION_J_MOL,
    copper_diffusivity_m2_s,
    copper_diffusivity_with_doubt,
)


def test_activation_energies_as_printed():
    assert COPPER_ACTIVATION_J_MOL == 19.2e3
    assert INDUSTRIAL_COPPER_ACTIVATION_J_MOL == 26.8e3


def test_from_40_to_65_degrees():
    ratio = copper_diffusivity_m2_s(338.15) / copper_diffusivity_m2_s(313.15)

    assert ratio == pytest.approx(1.7249, abs=5e-5)


def test_industrial_electrolytes_from_20_to_60_degrees():
    # By hand: 26 800 / 8.314462618 x (1/293.15 - 1/333.15) = 3223.3 x 4.0957e-4 = 1.32017.
    industrial = {"activation_j_mol": INDUSTRIAL_COPPER_ACTIVATION_J_MOL}

    ratio = copper_diffusivity_m2_s(333.15, **industrial) / copper_diffusivity_m2_s(
        293.15, **industrial
    )

    assert ratio == pytest.approx(math.exp(1.32017), rel=1e-4)


def test_what_was_measured():
    assert [str(known) for known in COPPER_DIFFUSION_RANGES] == [
        "metal_g_l 35 to 70",
        "acid_g_l 160 to 250",
        "temperature_k 313.15 to 338.15",
    ]


def test_the_order_of_magnitude_at_60_degrees():
    # 6 to 10 times 1e-10 m2/s, from memory: the interval is the rectangle behind the doubt.
    value, doubt = copper_diffusivity_with_doubt(333.15)

    assert value - doubt * math.sqrt(3) == pytest.approx(6e-10, rel=0.005)
    assert value + doubt * math.sqrt(3) == pytest.approx(10e-10, rel=0.005)
