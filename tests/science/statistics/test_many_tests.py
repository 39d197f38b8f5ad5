"""Many tests at once: adjusted chances keep their order, and missing tests stay apart."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange
from server.science.statistics.many_tests import false_discoveries_held, no_false_one_held

CHANCES = st.lists(st.one_of(st.floats(0, 1), st.just(math.nan)), min_size=1, max_size=40)
PROCEDURES = [
    false_discoveries_held,
    lambda chances, rate=0.05: false_discoveries_held(chances, rate, any_dependence=True),
    no_false_one_held,
]


@pytest.mark.parametrize("procedure", PROCEDURES)
@given(chances=CHANCES)
def test_adjusted_chances_keep_their_order_and_are_no_smaller(procedure, chances):
    chances = np.array(chances)
    adjusted = procedure(chances).adjusted

    made = np.isfinite(chances)
    assert np.isnan(adjusted[~made]).all()
    assert (adjusted[made] >= chances[made] * (1 - 1e-12)).all()
    assert (adjusted[made] <= 1.0).all()
    assert (np.diff(adjusted[made][np.argsort(chances[made], kind="stable")]) >= -1e-15).all()


@pytest.mark.parametrize("procedure", PROCEDURES)
@given(chances=CHANCES)
def test_missing_tests_count_as_not_made(procedure, chances):
    chances = np.array(chances)
    made = np.isfinite(chances)

    all_of_them, those_made = procedure(chances), procedure(chances[made])

    np.testing.assert_array_equal(all_of_them.adjusted[made], those_made.adjusted)
    assert all_of_them.found[made].tolist() == those_made.found.tolist()
    assert not all_of_them.found[~made].any()


@given(chances=CHANCES, rates=st.tuples(st.floats(0.01, 0.5), st.floats(0.01, 0.5)))
def test_a_higher_rate_finds_no_less(chances, rates):
    low, high = sorted(rates)

    few, many = false_discoveries_held(chances, low), false_discoveries_held(chances, high)

    assert (many.found | ~few.found).all()


@given(chances=CHANCES)
def test_stricter_promises_find_no_more(chances):
    found = [procedure(chances).found for procedure in PROCEDURES]

    assert (found[0] | ~found[1]).all()
    assert (found[0] | ~found[2]).all()


def test_what_stands_is_what_does_not_pass_the_cut_off():
    chances = np.random.default_rng(seed=5).random((6, 7)) ** 4

    result = false_discoveries_held(chances, rate=0.1)

    assert result.adjusted.shape == (6, 7)
    assert result.found.tolist() == (chances <= result.cut_off).tolist()


@pytest.mark.parametrize("procedure", PROCEDURES)
def test_nothing_stands_among_no_tests(procedure):
    for chances in ([], [math.nan, math.nan], [0.9, 0.8]):
        result = procedure(chances)
        assert not result.found.any()
        assert math.isnan(result.cut_off)


def test_the_bound_for_any_dependence_by_hand():
    # 1 + 1/2 + 1/3 = 11/6 times as large, where that is not above 1.
    plain = false_discoveries_held([0.01, 0.2, 0.3]).adjusted
    strict = false_discoveries_held([0.01, 0.2, 0.3], any_dependence=True).adjusted

    assert plain == pytest.approx([0.03, 0.3, 0.3])
    assert strict == pytest.approx([0.055, 0.55, 0.55])


@pytest.mark.parametrize(
    ("chances", "rate", "quantity"),
    [([1.1], 0.05, "p_values"), ([-0.1], 0.05, "p_values"), ([0.5], 0.0, "rate")],
)
@pytest.mark.parametrize("procedure", PROCEDURES)
def test_what_is_no_chance_is_refused(procedure, chances, rate, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        procedure(chances, rate)
