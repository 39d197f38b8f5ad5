"""Errors carry the quantity, the value found and what is allowed."""

import pickle

import pytest

from server.science.errors import OutOfRange, ScienceError, UnknownName, WrongShape


def test_an_error_carries_its_three_parts():
    error = OutOfRange("mass_kg", found=-2, allowed="zero or more")

    assert (error.quantity, error.found, error.allowed) == ("mass_kg", -2.0, "zero or more")
    assert str(error) == "mass_kg: found -2.0, allowed is zero or more"


@pytest.mark.parametrize("kind", [OutOfRange, WrongShape, UnknownName])
def test_one_base_catches_them_all(kind):
    assert issubclass(kind, ScienceError)
    assert issubclass(kind, ValueError)


def test_an_unknown_name_offers_the_near_ones():
    error = UnknownName("metal", "Coper", ["copper", "cobalt", "zinc"])

    assert error.near == ("copper",)
    assert "near it: copper" in str(error)


def test_a_name_like_no_other_is_answered_with_all_of_them():
    error = UnknownName("metal", "qqqq", ["copper", "zinc"])

    assert error.near == ()
    assert "known are copper, zinc" in str(error)


@pytest.mark.parametrize(
    "error",
    [
        OutOfRange("volts", found=-1.0, allowed="zero or more"),
        WrongShape("values", found=(3,), allowed="(2,)"),
        UnknownName("metal", "Coper", ["copper"]),
    ],
)
def test_an_error_survives_a_trip_to_another_process(error):
    copy = pickle.loads(pickle.dumps(error))

    assert type(copy) is type(error)
    assert str(copy) == str(error)
