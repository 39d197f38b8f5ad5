import math

import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.ranges import Range, outside

WARM = Range("temperature_k", 288.15, 333.15)
ACID = Range("acid_g_l", 100.0, 250.0)


def test_both_ends_belong_to_a_range():
    assert WARM.holds([288.15, 300.0, 333.15]).tolist() == [True, True, True]
    assert WARM.holds([288.14, 333.16]).tolist() == [False, False]


def test_a_missing_number_is_not_outside():
    assert WARM.outside([math.nan, 400.0]).tolist() == [False, True]
    assert WARM.holds(math.nan)


def test_the_shape_of_the_values_is_kept():
    assert WARM.outside(np.full((2, 3), 300.0)).shape == (2, 3)


def test_only_ranges_that_are_left_are_named():
    left = outside((WARM, ACID), temperature_k=[300.0, 340.0], acid_g_l=[120.0, 180.0])

    assert left == (WARM,)


def test_they_come_in_the_order_given():
    assert outside((ACID, WARM), temperature_k=200.0, acid_g_l=99.9) == (ACID, WARM)


def test_other_names_and_ranges_without_a_value_are_left_alone():
    assert outside((WARM, ACID), acid_g_l=180.0, gap_m=0.03) == ()


def test_a_missing_value_leaves_no_range():
    assert outside((WARM, ACID), temperature_k=math.nan, acid_g_l=[math.nan, 300.0]) == (ACID,)


def test_two_ranges_of_one_quantity_are_both_held_against_it():
    narrow = Range("temperature_k", 300.0, 310.0)

    assert outside((WARM, narrow), temperature_k=320.0) == (narrow,)


def test_an_infinite_value_is_refused():
    with pytest.raises(OutOfRange, match="acid_g_l"):
        outside((ACID,), acid_g_l=math.inf)


@pytest.mark.parametrize(("low", "high"), [(2.0, 1.0), (math.nan, 1.0), (0.0, math.nan)])
def test_a_range_that_holds_nothing_is_refused(low, high):
    with pytest.raises(OutOfRange, match="gap_m"):
        Range("gap_m", low, high)


def test_a_range_without_an_end_is_allowed():
    assert Range("age_s", 0.0, math.inf).holds(1e12)


def test_a_range_can_be_read_in_a_sentence():
    assert str(ACID) == "acid_g_l 100 to 250"
