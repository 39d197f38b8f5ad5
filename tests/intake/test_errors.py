import pickle
import string

import pytest

from server.intake.errors import FileRefused, row_error, shown
from server.intake.reasons import FILE_REASONS, ROW_REASONS


@pytest.mark.parametrize("reasons", [FILE_REASONS, ROW_REASONS])
def test_every_reason_is_a_sentence_with_known_places_only(reasons):
    places = {
        name
        for text in reasons.values()
        for _, name, _, _ in string.Formatter().parse(text)
        if name
    }

    assert places <= {"column", "found", "expected", "line"}
    assert all(text.endswith((".", "?")) for text in reasons.values())


def test_a_row_error_says_what_was_found_and_expected():
    error = row_error(
        "not_a_number",
        file="volts.csv",
        line=7,
        raw="t,EW1,1,two",
        column="volts",
        found="two",
        expected="a cell voltage",
    )

    assert error.reason == "volts “two” is not a number; expected a cell voltage."


def test_braces_in_a_value_are_kept():
    error = row_error(
        "choice", file="f", line=1, raw="", column="state", found="{0}", expected="off"
    )

    assert "“{0}”" in error.reason


def test_a_long_value_is_shortened_in_the_sentence_only():
    assert shown("x" * 100) == "x" * 59 + "…"
    assert shown("a\n b") == "a b"


def test_a_refusal_travels_between_processes():
    refusal = FileRefused("nul", file="a.csv", found="byte 3", expected="text", line=2)

    again = pickle.loads(pickle.dumps(refusal))

    assert str(again) == str(refusal)
