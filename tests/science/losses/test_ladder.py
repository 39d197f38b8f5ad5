import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp

from server.science.errors import OutOfRange, WrongShape
from server.science.losses.ladder import ladder_cell, ladder_short_ohm, ladder_volts

AMPS = st.floats(100.0, 200e3)
BACK = st.floats(0.0, 3.0)
PAIR_OHM = st.floats(1e-5, 1e-2)
SHORT_OHM = st.floats(1e-5, 1e-1)
CONTACT_OHM = st.floats(0.0, 1e-3)
PAIRS = 12


@st.composite
def ladders(draw):
    """Arguments of a ladder of twelve unequal pairs with some shorts and contacts."""
    pair = draw(hnp.arrays(float, PAIRS, elements=PAIR_OHM))
    short = draw(hnp.arrays(float, PAIRS, elements=st.one_of(SHORT_OHM, st.just(math.inf))))
    contact = draw(hnp.arrays(float, PAIRS, elements=CONTACT_OHM))
    return draw(AMPS), draw(BACK), pair, short, contact


@given(ladders())
def test_currents_of_pairs_and_shorts_add_up_to_that_of_the_cell(ladder):
    cell = ladder_cell(*ladder)

    assert cell.plating_a.sum() + cell.short_a.sum() == pytest.approx(ladder[0], rel=1e-9)


@given(ladders())
def test_a_short_never_carries_current_backwards(ladder):
    cell = ladder_cell(*ladder)

    assert (cell.short_a >= 0.0).all()
    assert (cell.heat_w >= 0.0).all()
    assert (cell.pair_volts > 0.0).all()
    assert cell.loss_share >= 0.0


@given(ladders())
def test_shorts_lower_the_voltage(ladder):
    cell = ladder_cell(*ladder)

    assert cell.deviation_v <= 1e-12 * cell.healthy_volts
    assert cell.cell_volts > 0.0


@given(ladders(), st.integers(0, PAIRS - 1), SHORT_OHM)
def test_one_more_short_lowers_it_more(ladder, where, ohm):
    amps, back, pair, short, contact = ladder
    assume(math.isinf(short[where]))
    more = short.copy()
    more[where] = ohm

    before = ladder_cell(amps, back, pair, short, contact)
    after = ladder_cell(amps, back, pair, more, contact)

    assert after.cell_volts < before.cell_volts
    assert after.loss_share > before.loss_share


@given(ladders())
def test_every_pair_obeys_ohm_and_kirchhoff(ladder):
    _, back, pair, _, contact = ladder

    cell = ladder_cell(*ladder)

    behind = cell.pair_volts + contact * (cell.plating_a + cell.short_a)
    # Amperes are differences of volts over small resistances, so volts are compared.
    assert behind == pytest.approx(np.full(PAIRS, cell.cell_volts), rel=1e-9)
    assert cell.pair_volts == pytest.approx(back + cell.plating_a * pair, rel=1e-9)


@given(AMPS, BACK, PAIR_OHM, st.integers(2, 80), SHORT_OHM)
def test_equal_pairs_with_one_short_have_the_closed_form(amps, back, pair, pairs, short):
    shorts = np.full(pairs, math.inf)
    shorts[0] = short

    cell = ladder_cell(amps, back, np.full(pairs, pair), shorts)

    assert ladder_volts(amps, back, pair, pairs, short) == pytest.approx(
        float(cell.cell_volts), rel=1e-9
    )


@given(AMPS, BACK, PAIR_OHM, st.integers(2, 80), SHORT_OHM)
def test_the_short_comes_back_from_the_voltage(amps, back, pair, pairs, short):
    volts = ladder_volts(amps, back, pair, pairs, short)
    # A short that takes less than a millionth of the current is lost in the digits of a float.
    carried = amps + pairs * back / pair
    assume(volts / short > 1e-6 * carried)

    found = ladder_short_ohm(volts, amps, back, pair, pairs)

    assert found == pytest.approx(short, rel=1e-8)


@pytest.mark.parametrize("above_v", [0.0, 0.01])
def test_no_short_explains_a_voltage_that_is_not_low(above_v):
    # 50 pairs of half a milliohm carry 25 kA at 0.25 V, and the floats meet it exactly.
    found = ladder_short_ohm(0.25 + above_v, 25e3, 0.0, 0.5e-3, 50)

    assert np.isnan(found)


def test_shorts_in_one_pair_count_by_their_conductance():
    pairs = np.full(4, 1e-3)

    one = ladder_cell(1000.0, 1.5, pairs, [1e-3, np.inf, np.inf, np.inf])
    two = ladder_cell(1000.0, 1.5, pairs, [2e-3, 2e-3, np.inf, np.inf])

    assert one.cell_volts == pytest.approx(two.cell_volts)


def test_a_contact_keeps_the_short_from_its_neighbours():
    pairs, short = np.full(10, 1e-3), np.array([1e-4] + [np.inf] * 9)

    bare = ladder_cell(6000.0, 0.0, pairs, short)
    held = ladder_cell(6000.0, 0.0, pairs, short, 2e-4)

    assert held.short_a[0] < bare.short_a[0]
    assert held.deviation_v > bare.deviation_v
    assert held.pair_volts[0] < held.pair_volts[1]


def test_a_hard_short_behind_a_contact_makes_its_pair_run_backwards():
    cell = ladder_cell(6000.0, 1.5, np.full(10, 1e-3), [1e-4] + [np.inf] * 9, 1e-3)

    assert cell.runs_backwards[0]
    assert not cell.runs_backwards[1:].any()


def test_refining_loses_metal_and_no_energy_for_each_kilogram():
    cell = ladder_cell(30e3, 0.0, np.full(50, 5e-4), [3e-4, 2e-4, 1e-4] + [np.inf] * 47)

    assert cell.loss_share > 0.1
    assert cell.energy_ratio == pytest.approx(1.0, rel=1e-12)


def test_winning_loses_both():
    cell = ladder_cell(30e3, 1.5, np.full(50, 8e-4), [2e-3] + [np.inf] * 49)

    assert cell.energy_ratio > 1.02


def test_without_shorts_nothing_is_lost():
    cell = ladder_cell(30e3, 1.5, np.full(50, 8e-4))

    assert cell.loss_share == 0.0
    assert cell.deviation_v == 0.0
    assert cell.energy_ratio == 1.0
    assert cell.plating_a == pytest.approx(np.full(50, 600.0))


def test_without_current_there_is_no_share():
    cell = ladder_cell(0.0, 1.5, np.full(3, 1e-3), [1e-3, np.inf, np.inf])

    assert np.isnan(cell.loss_share)
    assert np.isnan(cell.energy_ratio)
    assert cell.short_a[0] == pytest.approx(-cell.plating_a.sum())


def test_many_cells_at_once_and_a_missing_number_in_one():
    pair = np.full((3, 4), 1e-3)
    pair[1, 2] = np.nan

    cell = ladder_cell([1000.0, 1000.0, 2000.0], 1.5, pair, [1e-3, np.inf, np.inf, np.inf])

    assert cell.cell_volts.shape == (3,)
    assert cell.short_a.shape == (3, 4)
    assert list(np.isnan(cell.cell_volts)) == [False, True, False]
    assert list(np.isnan(cell.loss_share)) == [False, True, False]
    alone = ladder_cell(2000.0, 1.5, pair[2], [1e-3, np.inf, np.inf, np.inf])
    assert cell.cell_volts[2] == alone.cell_volts


def test_one_ladder_at_many_currents():
    cell = ladder_cell([1000.0, 2000.0], 1.5, np.full(4, 1e-3), [1e-3, np.inf, np.inf, np.inf])

    assert cell.cell_volts[1] > cell.cell_volts[0]
    assert cell.current_a.shape == cell.loss_share.shape == (2,)


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [
        ((-1.0, 1.5, [1e-3]), "current_a"),
        ((1.0, -1.5, [1e-3]), "back_volts"),
        ((1.0, 1.5, [0.0]), "pair_ohm"),
        ((1.0, 1.5, [1e-3], [0.0]), "short_ohm"),
        ((1.0, 1.5, [1e-3], [1e-3], [-1e-3]), "contact_ohm"),
    ],
)
def test_an_impossible_value_is_named(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        ladder_cell(*arguments)


@pytest.mark.parametrize(
    ("arguments"),
    [(1.0, 1.5, 1e-3), (1.0, 1.5, [1e-3] * 3, [1e-3] * 2), ([1.0] * 2, 1.5, np.ones((3, 4)))],
)
def test_pairs_that_do_not_belong_together_are_refused(arguments):
    with pytest.raises(WrongShape, match="pair_ohm"):
        ladder_cell(*arguments)
