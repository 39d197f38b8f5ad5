"""Short circuits in copper cells, as a ladder of parallel plate resistances.

Status: computed, in a library of reference values made apart from this program; its inputs are
typical, not measured. The arithmetic of the ladder is written out here once more.
"""

import math

import numpy as np
import pytest

from server.science.constants import COPPER
from server.science.losses.ladder import ladder_cell, ladder_short_ohm, ladder_volts
from server.science.losses.shorts import (
    lost_metal_kg,
    share_of_many_shorts,
    short_energy_ratio,
    short_from_volts,
)

# Back voltage V, pair and short in ohm; then V, A, share, V and the ratio of energies.
REFINING = (0.0, 0.5e-3, 0.25e-3, 0.288462, 1153.85, 0.038462, -0.01154, 1.0)
WINNING = (1.5, 0.833333e-3, 2.0e-3, 1.98347, 991.736, 0.033058, -0.01653, 1.02564)
BOTH = [pytest.param(REFINING, id="refining"), pytest.param(WINNING, id="winning")]


def one_short(back_volts, pair_ohm, short_ohm):
    shorts = np.full(50, math.inf)
    shorts[20] = short_ohm
    return ladder_cell(30e3, back_volts, np.full(50, pair_ohm), shorts)


@pytest.mark.parametrize("case", BOTH)
def test_cell_voltage(case):
    back, pair, short, volts, *_ = case

    assert one_short(back, pair, short).cell_volts == pytest.approx(volts, rel=1e-5)
    assert ladder_volts(30e3, back, pair, 50, short) == pytest.approx(volts, rel=1e-5)


@pytest.mark.parametrize("case", BOTH)
def test_current_of_the_short_and_its_share(case):
    back, pair, short, _, amps, share, *_ = case

    cell = one_short(back, pair, short)

    assert cell.short_a[20] == pytest.approx(amps, rel=1e-5)
    assert cell.loss_share == pytest.approx(share, abs=5e-7)


@pytest.mark.parametrize("case", BOTH)
def test_fall_of_the_voltage(case):
    back, pair, short, *_, fall, _ = case

    assert one_short(back, pair, short).deviation_v == pytest.approx(fall, abs=5e-6)


@pytest.mark.parametrize("case", BOTH)
def test_energy_for_each_kilogram(case):
    back, pair, short, *_, share, _, ratio = case
    resistive = 30e3 * pair / 50 / (back + 30e3 * pair / 50)

    assert one_short(back, pair, short).energy_ratio == pytest.approx(ratio, abs=5e-6)
    assert short_energy_ratio(share, resistive) == pytest.approx(ratio, abs=5e-6)


@pytest.mark.parametrize("case", BOTH)
def test_the_short_is_found_from_the_voltage(case):
    back, pair, short, volts, amps, _, fall, _ = case

    assert ladder_short_ohm(volts, 30e3, back, pair, 50) == pytest.approx(short, rel=1e-3)
    assert short_from_volts(fall, pair / 50).value == pytest.approx(amps, rel=1e-3)


def test_one_short_by_hand():
    # (30000 + 50 x 1.5 / 0.000833333) / (50 / 0.000833333 + 1 / 0.002).
    by_hand = (30_000 + 75 / 0.000833333) / (50 / 0.000833333 + 500)

    assert ladder_volts(30e3, 1.5, 0.833333e-3, 50, 2e-3) == pytest.approx(by_hand, rel=1e-12)


def test_copper_that_a_day_of_a_thousand_amperes_would_have_made():
    # 63.546 / (2 x 26.8014811454) g/Ah x 24 kAh.
    assert lost_metal_kg(1000.0, 86_400, COPPER) == pytest.approx(28.4519, abs=5e-5)
    assert 63.546 / (2 * 26.8014811454) * 24 == pytest.approx(28.4519, abs=5e-5)


@pytest.mark.parametrize(("volts", "watts"), [(0.30, 300.0), (2.0, 2000.0)])
def test_heat_of_a_short_of_a_thousand_amperes(volts, watts):
    # Alone in its cell, so that it carries all of the current.
    cell = ladder_cell(1000.0, volts, [1e3], volts / 1000.0)

    assert cell.heat_w[0] == pytest.approx(watts, rel=1e-6)


def test_two_cathodes_in_a_hundred_shorted():
    # 0.02 x 1.5 / (1 + 0.02 x 1.5) = 0.03 / 1.03.
    assert share_of_many_shorts(0.02, 1.5) == pytest.approx(0.029126, abs=5e-7)
    assert share_of_many_shorts(0.02, 1.5) == pytest.approx(0.03 / 1.03, rel=1e-12)


def test_two_cathodes_in_a_hundred_as_a_ladder():
    # 200 of 10 000 pairs; each short carries 1.5 times what a healthy plate carries then.
    shorts = np.full(10_000, math.inf)
    shorts[::50] = 0.5e-3 / 1.5

    cell = ladder_cell(6e6, 0.0, np.full(10_000, 0.5e-3), shorts)

    assert cell.short_a[0] / cell.plating_a[1] == pytest.approx(1.5)
    assert cell.loss_share == pytest.approx(0.029126, abs=5e-7)
