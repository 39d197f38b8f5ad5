"""Activities of metal and acid from what the plant measures."""

import numpy as np
import pytest

from server.science.constants import COBALT, COPPER, NICKEL, ZINC
from server.science.equilibrium.activities import (
    SULFATE_FITS,
    acid_coefficient,
    molality_mol_kg,
    sulfate_activities,
    sulfate_coefficient,
)
from server.science.equilibrium.potential import reversible_volts
from server.science.errors import OutOfRange, UnknownName
from server.science.processes import PROCESSES


@pytest.mark.parametrize("symbol", SULFATE_FITS)
def test_without_salt_the_coefficient_is_one(symbol):
    assert sulfate_coefficient(symbol, 0.0) == 1.0


@pytest.mark.parametrize("symbol", SULFATE_FITS)
def test_thin_solutions_follow_the_limiting_law(symbol):
    # ln of the coefficient is -4 x 3 x 0.3915 x root of the ionic strength, 4 m, for thin ones.
    found = np.log(sulfate_coefficient(symbol, 1e-8))

    assert found == pytest.approx(-12 * 0.3915 * np.sqrt(4e-8), rel=0.01)


@pytest.mark.parametrize("symbol", SULFATE_FITS)
def test_the_coefficient_falls_to_a_few_hundredths(symbol):
    found = sulfate_coefficient(symbol, np.linspace(0.01, 1.4, 50))

    assert (np.diff(found) < 0).all()
    assert 0.03 < found[-1] < 0.05


def test_the_fit_says_how_far_it_goes():
    assert SULFATE_FITS["Cu"].molality_range.outside([1.0, 1.5]).tolist() == [False, True]


def test_acid_is_read_between_its_entries():
    between = acid_coefficient(0.6)

    assert 0.1417 < between < 0.1557


def test_acid_beyond_the_table_keeps_its_last_entry():
    assert acid_coefficient([0.01, 6.0]).tolist() == pytest.approx([0.2655, 0.1422])


def test_less_water_makes_a_stronger_solution():
    assert molality_mol_kg(900.0, [1000.0, 900.0]).tolist() == [0.9, 1.0]


def test_the_pair_gives_the_voltage_of_the_mean_activities():
    # By hand, 40 g/L copper and 180 g/L acid in 910 kg of water: m = 0.69173 and 2.01690;
    # a(H2SO4) = 4 m3 g3 and a(CuSO4) = m2 g2 share their sulfate, so the voltage goes with
    # (2 m)2 g_acid3 / (m g_salt2).
    salt, acid = float(sulfate_coefficient("Cu", 0.69173)), float(acid_coefficient(2.01690))
    ratio = (2 * 2.01690) ** 2 * acid**3 / (0.69173 * salt**2)
    by_hand = 1.229 - 0.3419 + 8.314462618 * 298.15 / (2 * 96485.33212) * np.log(ratio)

    found = sulfate_activities(COPPER, 40.0, 180.0, water_kg_m3=910.0)

    volts = reversible_volts(PROCESSES["copper electrowinning"], found.metal, found.acid)
    assert volts == pytest.approx(by_hand, abs=1e-5)
    # Common practice puts the reversible voltage of such a cell at 0.89 to 0.95 V.
    assert 0.89 < volts < 0.95


def test_a_zinc_cell_lies_in_the_band_of_practice():
    found = sulfate_activities(ZINC, 55.0, 170.0, water_kg_m3=900.0)

    assert 1.99 < reversible_volts(PROCESSES["zinc electrowinning"], found.metal, found.acid) < 2.05


def test_missing_stays_missing_and_leaves_neighbours_alone():
    found = sulfate_activities(NICKEL, [70.0, np.nan, 70.0], [40.0, 40.0, np.nan])

    assert np.isnan(found.metal).tolist() == [False, True, False]
    assert np.isnan(found.acid).tolist() == [False, True, True]


def test_a_metal_without_coefficients_is_refused():
    with pytest.raises(UnknownName, match="Co"):
        sulfate_activities(COBALT, 40.0, 10.0)


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [
        ((0.0, 180.0), "metal_g_l"),
        ((40.0, -1.0), "acid_g_l"),
        ((40.0, 180.0, 0.0), "water_kg_m3"),
    ],
)
def test_what_cannot_be_is_named(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        sulfate_activities(COPPER, *arguments)
