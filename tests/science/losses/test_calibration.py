import math

import numpy as np
import pytest

from server.science.errors import OutOfRange, WrongShape
from server.science.losses.calibration import same_length, through_origin


def test_points_on_a_line_give_its_slope_without_doubt():
    found = through_origin([1.0, 2.0, 5.0], [3.0, 6.0, 15.0])

    assert found.value == pytest.approx(3.0, rel=1e-14)
    assert found.standard_uncertainty == pytest.approx(0.0, abs=1e-14)
    assert (found.degrees_of_freedom, found.pairs) == (2.0, 3)


def test_a_pair_with_a_missing_number_is_left_out_and_not_counted():
    found = through_origin([1.0, math.nan, 2.0, 3.0], [2.0, 99.0, math.nan, 6.3])

    without = through_origin([1.0, 3.0], [2.0, 6.3])
    assert found == without
    assert found.pairs == 2


def test_one_pair_has_a_slope_and_no_scatter():
    found = through_origin(2.0, 5.0)

    assert found.value == 2.5
    assert math.isnan(found.standard_uncertainty)
    assert found.pairs == 1


@pytest.mark.parametrize("across", [[], [0.0, 0.0], [math.nan, math.nan]])
def test_nothing_to_go_by_gives_no_slope(across):
    found = through_origin(across, across)

    assert math.isnan(found.value)
    assert math.isnan(found.standard_uncertainty)


def test_the_uncertainty_is_that_of_many_repetitions():
    rng = np.random.default_rng(seed=11)
    across = np.linspace(1.0, 4.0, 20)

    fits = [through_origin(across, 2.0 * across + rng.normal(0.0, 0.3, 20)) for _ in range(2000)]

    spread = np.std([fit.value for fit in fits])
    stated = math.sqrt(np.mean([fit.standard_uncertainty**2 for fit in fits]))
    assert stated == pytest.approx(spread, rel=0.05)


@pytest.mark.parametrize(("first", "second"), [([1.0, 2.0], [1.0]), ([[1.0]], [[1.0]])])
def test_sequences_that_do_not_belong_together_are_refused(first, second):
    with pytest.raises(WrongShape, match="up"):
        same_length("across", first, "up", second)


def test_an_infinite_number_is_named():
    with pytest.raises(OutOfRange, match="up"):
        through_origin([1.0], [math.inf])
