"""Drops in electrolyte, contacts and bars: Ohm's law, and copper that warms."""

import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.voltage.drops import bar_drop_v, contact_drop_v, electrolyte_drop_v


def test_the_electrolyte_by_hand():
    # 500 A/m2 x 0.035 m / 43.5 S/m = 17.5 / 43.5.
    assert electrolyte_drop_v(500.0, 0.035, 43.5) == pytest.approx(17.5 / 43.5, rel=1e-12)


def test_no_gap_costs_nothing_and_twice_the_gap_twice():
    drops = electrolyte_drop_v(300.0, [0.0, 0.02, 0.04], 60.0)

    assert drops.tolist() == pytest.approx([0.0, 0.1, 0.2])


def test_contacts_of_cells_of_any_size_compare():
    # 100 microohm between bar and cathode of 1 m2, 50 of 2 m2: at 250 A/m2 both 25 mV.
    assert contact_drop_v(250.0, 100e-6 * 1.0) == pytest.approx(0.025)
    assert contact_drop_v(250.0, 50e-6 * 2.0) == pytest.approx(0.025)


def test_a_bar_of_one_square_millimetre_is_the_definition_of_the_standard():
    assert bar_drop_v(1.0, 58.0, 1e-6) == pytest.approx(1.0, rel=1e-12)


def test_a_warm_bar_and_one_of_aluminium_take_more():
    cold = bar_drop_v(30e3, 10.0, 0.03)

    assert bar_drop_v(30e3, 10.0, 0.03, 303.15) / cold == pytest.approx(1.0393)
    assert bar_drop_v(30e3, 10.0, 0.03, share_of_annealed=0.6) / cold == pytest.approx(1 / 0.6)


def test_a_missing_number_stays_one_and_its_neighbours_do_not():
    drops = electrolyte_drop_v([300.0, np.nan, 300.0], 0.04, [60.0, 60.0, np.nan])

    assert drops[0] == pytest.approx(0.2)
    assert np.isnan(drops[1:]).all()


@pytest.mark.parametrize(
    ("drop", "arguments", "quantity"),
    [
        (electrolyte_drop_v, (300.0, -0.01, 60.0), "gap_m"),
        (electrolyte_drop_v, (300.0, 0.01, 0.0), "conductivity_s_m"),
        (electrolyte_drop_v, (np.inf, 0.01, 60.0), "current_density_a_m2"),
        (contact_drop_v, (300.0, -1e-6), "contact_ohm_m2"),
        (bar_drop_v, (300.0, 1.0, 0.0), "section_m2"),
        (bar_drop_v, (300.0, -1.0, 0.1), "length_m"),
    ],
)
def test_an_impossible_quantity_is_named(drop, arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        drop(*arguments)
