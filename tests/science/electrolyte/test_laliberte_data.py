import math

import pytest

from server.science.electrolyte.laliberte_data import outside_data
from server.science.errors import OutOfRange

REFINING = {"CuSO4": 113.0, "H2SO4": 180.0}


def named(left):
    """Ranges as their sentences."""
    return [str(known) for known in left]


def test_a_refining_bath_is_within_the_data():
    assert outside_data(REFINING, 333.15) == ()
    assert outside_data(REFINING, 333.15, about="viscosity") == ()


def test_what_is_dissolved_together_is_held_against_each_salt():
    # 0.29 and 0.12 of copper sulfate and acid, together 0.41 against copper's 0.2844.
    left = outside_data({"CuSO4": 400.0, "H2SO4": 160.0}, 313.15)

    assert named(left) == ["CuSO4 dissolved_share 0 to 0.2844"]


def test_the_two_properties_have_data_of_their_own():
    neutral_zinc = {"ZnSO4": 370.0}

    assert named(outside_data(neutral_zinc, 330.15)) == []
    assert named(outside_data(neutral_zinc, 330.15, about="viscosity")) == [
        "ZnSO4 temperature_k 288.15 to 328.15"
    ]


def test_hardly_any_of_a_salt_is_not_asked_for():
    with_iron = {**REFINING, "FeSO4": 5.0}

    assert outside_data(with_iron, 318.15) == ()
    assert named(outside_data(with_iron, 318.15, least_share=0.0)) == [
        "FeSO4 temperature_k 288.15 to 298.15",
        "FeSO4 dissolved_share 0 to 0.2332",
    ]


def test_a_salt_at_zero_is_never_asked_for():
    assert outside_data({**REFINING, "FeSO4": 0.0}, 318.15, least_share=0.0) == ()


def test_one_bath_of_many_is_enough():
    left = outside_data(REFINING, [318.15, 335.15, math.nan])

    assert named(left) == ["CuSO4 temperature_k 283.15 to 333.15"]


def test_missing_numbers_leave_no_range():
    assert outside_data({"CuSO4": math.nan, "H2SO4": 180.0}, 318.15) == ()


def test_a_negative_least_share_is_refused():
    with pytest.raises(OutOfRange, match="least_share"):
        outside_data(REFINING, 318.15, least_share=-0.1)
