"""A whole house at once: the same as cell by cell, in pieces, with gaps, in any order."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.cusum import cusum
from server.science.statistics.ewma import ewma
from server.science.statistics.residuals import HouseState, house_charts
from server.science.statistics.spread import median

ALIKE = [0, 5, 10, 15]
UNLIKE = [0, 4, 5, 15]


def house(rounds=50, missing=0.1, seed=101):
    """Voltages of fifteen cells with some readings missing."""
    rng = np.random.default_rng(seed)
    volts = 2.04 + rng.normal(0.0, 0.01, (rounds, 15)) + rng.normal(0.0, 0.05, (rounds, 1))
    volts[rng.random(volts.shape) < missing] = np.nan
    return volts


def slowly(volts, sections, k, weight, sense):
    """The same by the functions for one step at a time, in double precision."""
    rest = np.empty_like(volts)
    for left, right in zip(sections[:-1], sections[1:], strict=True):
        part = volts[:, left:right]
        rest[:, left:right] = part - median(part, axis=1)[:, np.newaxis]
    return rest, cusum(rest, k, sense).sums, ewma(rest, weight).averages


@pytest.mark.parametrize("sections", [ALIKE, UNLIKE])
@pytest.mark.parametrize("missing", [0.0, 0.02, 0.5])
@pytest.mark.parametrize("sense", [-1, 1])
def test_it_is_the_same_as_slowly(sections, missing, sense):
    volts = house(missing=missing)

    charts = house_charts(volts, sections, 0.005, 0.2, sense)

    rest, sums, averages = slowly(volts, sections, 0.005, 0.2, sense)
    np.testing.assert_allclose(charts.residuals, rest, atol=1e-6)
    np.testing.assert_allclose(charts.sums, sums, atol=1e-5)
    np.testing.assert_allclose(charts.averages, averages, atol=1e-6)


@given(st.lists(st.integers(0, 50), max_size=4), st.sampled_from([ALIKE, UNLIKE]))
def test_pieces_give_what_the_whole_gives(cuts, sections):
    volts = house()
    whole = house_charts(volts, sections, 0.005, 0.2)

    state, pieces = None, []
    for first, last in zip([0, *sorted(cuts)], [*sorted(cuts), 50], strict=True):
        piece = house_charts(volts[first:last], sections, 0.005, 0.2, state=state)
        state = piece.state
        pieces.append(piece)

    for name in ("centres", "residuals", "sums", "averages"):
        together = np.vstack([getattr(piece, name) for piece in pieces])
        np.testing.assert_array_equal(together, getattr(whole, name))
    np.testing.assert_array_equal(state.sums, whole.state.sums)
    np.testing.assert_array_equal(state.averages, whole.state.averages)


@given(st.permutations(range(5)))
def test_cells_of_a_section_in_another_order_have_the_same_charts(order):
    volts = house()[:, :5]
    plain = house_charts(volts, [0, 5], 0.005, 0.2)

    moved = house_charts(volts[:, order], [0, 5], 0.005, 0.2)

    for name in ("residuals", "sums", "averages"):
        np.testing.assert_array_equal(getattr(moved, name), getattr(plain, name)[:, order])
    np.testing.assert_array_equal(moved.centres, plain.centres)


def test_a_missing_reading_holds_its_charts_and_leaves_other_sections_alone():
    volts = house(missing=0.0)
    holed = volts.copy()
    holed[20:30, 7] = np.nan
    plain, charts = (house_charts(one, ALIKE, 0.001, 0.2) for one in (volts, holed))

    assert np.isnan(charts.residuals[20:30, 7]).all()
    assert (charts.sums[20:30, 7] == charts.sums[19, 7]).all()
    assert (charts.averages[20:30, 7] == charts.averages[19, 7]).all()
    others = [0, 1, 2, 3, 4, 10, 11, 12, 13, 14]
    np.testing.assert_array_equal(charts.sums[:, others], plain.sums[:, others])


def test_a_section_without_a_reading_has_no_centre_and_holds():
    volts = house(missing=0.0)
    volts[10:12, :5] = np.nan

    charts = house_charts(volts, ALIKE, 0.001, 0.2)

    assert np.isnan(charts.centres[10:12, 0]).all()
    assert np.isfinite(charts.centres[10:12, 1:]).all()
    np.testing.assert_array_equal(charts.sums[11, :5], charts.sums[9, :5])


def test_sums_are_never_negative():
    charts = house_charts(house(), ALIKE, 0.005, 0.2)

    assert (charts.sums >= 0.0).all()


def test_a_load_that_moves_all_cells_moves_no_chart():
    volts = house(missing=0.0)
    load = np.linspace(0.0, 0.5, 50)[:, np.newaxis]

    plain, loaded = (house_charts(one, ALIKE, 0.005, 0.2) for one in (volts, volts + load))

    np.testing.assert_allclose(loaded.sums, plain.sums, atol=3e-5)


def test_a_short_is_gathered_downward_only():
    volts = np.full((10, 5), 2.0)
    volts[:, 2] = 1.9

    down = house_charts(volts, [0, 5], 0.01, 0.5)
    up = house_charts(volts, [0, 5], 0.01, 0.5, sense=1)

    assert down.sums[-1] == pytest.approx([0.0, 0.0, 0.9, 0.0, 0.0], abs=1e-5)
    assert up.sums[-1] == pytest.approx(np.zeros(5), abs=1e-6)


def test_readings_of_any_kind_are_taken_and_left_as_they_were():
    volts = house(missing=0.0).astype(np.float32)
    before = volts.copy()

    charts = house_charts(volts, ALIKE, 0.005, 0.2)

    np.testing.assert_array_equal(volts, before)
    assert charts.residuals.dtype == np.float32
    assert house_charts([[2, 3, 4]], [0, 3], 0.0, 0.5).residuals.tolist() == [[-1.0, 0.0, 1.0]]


def test_each_cell_may_have_its_own_reference_value():
    charts = house_charts([[0.0, -1.0, 1.0]], [0, 3], [0.0, 0.25, 0.0], 0.5)

    assert charts.sums[0].tolist() == [0.0, 0.75, 0.0]


def test_no_round_leaves_the_state_as_it_was():
    state = HouseState(np.ones(3, np.float32), np.zeros(3, np.float32))

    charts = house_charts(np.empty((0, 3)), [0, 3], 0.5, 0.5, state=state)

    assert charts.sums.shape == (0, 3)
    assert charts.state.sums.tolist() == [1.0, 1.0, 1.0]


@pytest.mark.parametrize(
    ("arguments", "error", "quantity"),
    [
        ({"values": [[1.0, np.inf, 2.0]]}, OutOfRange, "values"),
        ({"values": [[-np.inf, np.nan, 2.0]]}, OutOfRange, "values"),
        ({"values": [[1e39, 1.0, 2.0]]}, OutOfRange, "values"),
        ({"values": [1.0, 2.0, 3.0]}, WrongShape, "values"),
        ({"sections": [0, 2]}, WrongShape, "sections"),
        ({"sections": [0, 2, 2, 3]}, OutOfRange, "sections"),
        ({"k": -1.0}, OutOfRange, "k"),
        ({"k": [1.0, 1.0]}, WrongShape, "k"),
        ({"weight": 0.0}, OutOfRange, "weight"),
        ({"sense": 0}, OutOfRange, "sense"),
        (
            {"state": HouseState(np.zeros(2, np.float32), np.zeros(2, np.float32))},
            WrongShape,
            "state",
        ),
    ],
)
def test_what_cannot_be_is_refused(arguments, error, quantity):
    given_ = {"values": [[1.0, 2.0, 3.0]], "sections": [0, 3], "k": 0.1, "weight": 0.2}
    with pytest.raises(error, match=quantity):
        house_charts(**{**given_, **arguments})
