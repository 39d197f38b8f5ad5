"""Nernst's equation at given activities: slopes, potentials, oxygen, a Daniell cell.

W. Nernst, Z. Phys. Chem. 4 (1889) 129. Status of the figures: computed, in a library of reference
values made apart from this program, from R, F, the temperature and the tabulated standard
potentials (kept at 25 degC); those marked "by hand" are computed here, the arithmetic written out.
"""

import math

import pytest

from server.science.constants import COPPER, NICKEL, SILVER, ZINC
from server.science.equilibrium.potential import (
    metal_potential_v,
    nernst_slope_v,
    oxygen_potential_v,
    reversible_volts,
)
from server.science.processes import PROCESSES
from server.science.units import kelvin_from_degc

# ln(10) R / F, V/K, from the exact constants.
SLOPE_PER_KELVIN = math.log(10) * 8.31446261815324 / 96485.33212331


@pytest.mark.parametrize(
    ("degc", "volts"),
    [
        pytest.param(25.0, 0.05915935, id="25 degC, recomputed"),
        pytest.param(60.0, 0.0661041, id="60 degC, recomputed"),
        # ln(10) R (40 + 273.15) / F.
        pytest.param(40.0, SLOPE_PER_KELVIN * 313.15, id="40 degC, by hand"),
    ],
)
def test_the_slope_of_one_electron(degc, volts):
    assert nernst_slope_v(kelvin_from_degc(degc)) == pytest.approx(volts, abs=5e-8)


@pytest.mark.parametrize(
    ("known", "activity", "degc", "volts"),
    [
        pytest.param(COPPER, 0.001, 25.0, 0.253161, id="copper, recomputed"),
        pytest.param(ZINC, 0.01, 25.0, -0.8209593, id="zinc, recomputed"),
        pytest.param(SILVER, 0.1, 25.0, 0.7404407, id="silver, recomputed"),
        pytest.param(NICKEL, 0.05, 60.0, -0.3000017, id="nickel, recomputed"),
        # Two decades of a two-electron slope at 333.15 K below 0.3419 V.
        pytest.param(
            COPPER, 0.01, 60.0, 0.3419 - SLOPE_PER_KELVIN * 333.15, id="copper at 60 degC, by hand"
        ),
        # log10(0.04) = -1.39794 decades of a two-electron slope at 311.15 K.
        pytest.param(
            ZINC,
            0.04,
            38.0,
            -0.7618 - 1.39794 * SLOPE_PER_KELVIN * 311.15 / 2,
            id="zinc at 38 degC, by hand",
        ),
    ],
)
def test_a_metal_at_an_activity(known, activity, degc, volts):
    found = metal_potential_v(known, activity, kelvin_from_degc(degc))

    assert found == pytest.approx(volts, abs=1e-6)


@pytest.mark.parametrize(
    ("ph", "volts"),
    [
        pytest.param(0.0, 1.229, id="pH 0, recomputed"),
        pytest.param(7.0, 0.8148846, id="pH 7, recomputed"),
        # One decade, one slope.
        pytest.param(1.0, 1.229 - SLOPE_PER_KELVIN * 298.15, id="pH 1, by hand"),
    ],
)
def test_oxygen_over_water(ph, volts):
    assert oxygen_potential_v(10.0**-ph) == pytest.approx(volts, abs=1e-6)


def test_a_daniell_cell():
    volts = metal_potential_v(COPPER, 0.1) - metal_potential_v(ZINC, 0.01)

    assert volts == pytest.approx(1.13328, abs=1e-5)


def test_copper_electrowinning_at_working_activities():
    # By hand, a(Cu) 0.02, a(H) 0.8, 318.15 K, 1 bar: log10(0.8) = -0.09691, log10(0.02) = -1.69897.
    slope = SLOPE_PER_KELVIN * 318.15
    volts = (1.229 - 0.09691 * slope) - (0.3419 - 1.69897 * slope / 2)

    found = reversible_volts(
        PROCESSES["copper electrowinning"],
        metal_activity=0.02,
        acid_activity=0.8,
        temperature_k=kelvin_from_degc(45.0),
    )

    assert found == pytest.approx(volts, abs=1e-6)
