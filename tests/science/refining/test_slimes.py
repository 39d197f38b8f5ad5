import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.refining.slimes import element_in_slimes_kg, grade_of_slimes, slimes_kg


def test_slimes_are_a_share_of_what_is_consumed():
    assert slimes_kg([0.0, 1e6], 0.005) == pytest.approx([0.0, 5000.0])


def test_an_element_is_followed_to_the_slimes():
    # 1000 t with 300 g/t of silver, all of it in 4000 kg of slimes: 7.5 %.
    silver = element_in_slimes_kg(1e6, 300e-6, 1.0)

    assert silver == pytest.approx(300.0)
    assert grade_of_slimes(silver, 4000.0) == pytest.approx(0.075)


def test_a_grade_that_cannot_be_is_shown():
    assert grade_of_slimes(120.0, 100.0) == pytest.approx(1.2)


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    assert list(np.isnan(slimes_kg([1.0, np.nan], 0.01))) == [False, True]
    assert list(np.isnan(element_in_slimes_kg(1.0, [0.1, np.nan], 0.5))) == [False, True]
    assert list(np.isnan(grade_of_slimes([1.0, np.nan], 10.0))) == [False, True]


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: slimes_kg(-1.0, 0.01), "dissolved_kg"),
        (lambda: slimes_kg(1.0, 1.01), "insoluble_share"),
        (lambda: element_in_slimes_kg(1.0, 1.01, 0.5), "element_share"),
        (lambda: element_in_slimes_kg(1.0, 0.01, -0.5), "to_slimes_share"),
        (lambda: grade_of_slimes(1.0, 0.0), "slimes_kg"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
