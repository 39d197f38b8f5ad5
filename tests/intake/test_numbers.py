import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.intake.columns import SHEETS
from server.intake.numbers import read_numbers, read_whole
from server.intake.rows import MISSING

VOLTS = SHEETS["volts"].column("volts")
CURRENT = SHEETS["current"].column("current_ka")
NET = SHEETS["lots"].column("net_kg")
ACID = SHEETS["electrolyte"].column("acid_g_l")
CELL = SHEETS["volts"].column("cell")
CATHODE = SHEETS["finds"].column("cathode")


def codes(faults):
    return {i: fault.code for i, fault in faults.items()}


def test_plain_numbers_are_read_in_one_go():
    values, faults = read_numbers(["2.035", "-0.1", "1e-3", "+4", " 5 "], VOLTS, ".")

    assert values.tolist() == [2.035, -0.1, 0.001, 4.0, 5.0]
    assert faults == {}


def test_decimal_commas_are_read_where_the_file_has_them():
    values, faults = read_numbers(["2,035", "3"], VOLTS, ",")

    assert values.tolist() == [2.035, 3.0]
    assert faults == {}


@pytest.mark.parametrize("decimal", [".", ","])
@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("", "empty"),
        ("  ", "empty"),
        ("n/a", "not_a_number"),
        ("2 V", "not_a_number"),
        ("0x10", "not_a_number"),
        ("--2", "not_a_number"),
        ("٢", "not_a_number"),
        ("-", "not_a_number"),
        ("NaN", "not_finite"),
        ("-inf", "not_finite"),
        ("Infinity", "not_finite"),
        ("1e999", "not_finite"),
        ("1_000", "thousands"),
        ("1'000", "thousands"),
        ("1 000", "thousands"),
        ("1\u202f000", "thousands"),
        ("1.234,5", "thousands"),
        ("1,234.5", "thousands"),
        ("1,234,567", "thousands"),
    ],
)
def test_what_is_not_a_number_is_named_for_what_it_is(text, code, decimal):
    values, faults = read_numbers(["2", text], VOLTS, decimal)

    assert codes(faults) == {1: code}
    assert values[0] == 2.0
    assert np.isnan(values[1])


@pytest.mark.parametrize(
    ("text", "decimal", "code"),
    [
        ("2,03", ".", "decimal_mark"),
        ("2.03", ",", "decimal_mark"),
        ("2,035", ".", "thousands"),
        ("2.035", ",", "thousands"),
    ],
)
def test_the_other_decimal_mark_is_not_taken_row_by_row(text, decimal, code):
    _, faults = read_numbers([text], VOLTS, decimal)

    assert codes(faults) == {0: code}


@pytest.mark.parametrize(
    ("text", "column", "code"),
    [
        ("-0.1", CURRENT, "too_low"),
        ("1000.1", CURRENT, "too_high"),
        ("-1", NET, "too_low"),
        ("1000001", VOLTS, "too_high"),
    ],
)
def test_what_no_instrument_reads_is_refused(text, column, code):
    values, faults = read_numbers(["0", text], column, ".")

    assert codes(faults) == {1: code}
    assert np.isnan(values[1])


def test_a_limit_is_told_with_its_unit():
    _, faults = read_numbers(["-3"], CURRENT, ",")

    assert faults[0].expected == "current in kA from 0 to 1000, with a decimal comma"


def test_a_blank_that_is_allowed_is_missing():
    values, faults = read_numbers(["180", "", " "], ACID, ".")

    assert faults == {}
    assert np.isnan(values).tolist() == [False, True, True]


def test_one_bad_number_leaves_the_others_as_they_are():
    texts = ["2.0", "x", "2.1", "x", "nan"]

    values, faults = read_numbers(texts, VOLTS, ".")

    assert codes(faults) == {1: "not_a_number", 3: "not_a_number", 4: "not_finite"}
    assert values[[0, 2]].tolist() == [2.0, 2.1]


@given(
    st.lists(st.floats(-1e5, 1e5, allow_nan=False), min_size=1, max_size=20),
    st.sampled_from([".", ","]),
)
def test_numbers_survive_being_written_and_read(numbers, decimal):
    values, faults = read_numbers(
        [repr(number).replace(".", decimal) for number in numbers], VOLTS, decimal
    )

    assert faults == {}
    assert values.tolist() == numbers


def test_whole_numbers_are_read():
    whole, faults = read_whole(["1", "12", " 3", "4.0"], CELL, ".")

    assert whole.tolist() == [1, 12, 3, 4]
    assert faults == {}


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("1.5", "not_whole"),
        ("0", "too_low"),
        ("-1", "too_low"),
        ("100001", "too_high"),
        ("", "empty"),
        ("E3", "not_a_number"),
        ("nan", "not_finite"),
        ("9" * 400, "not_finite"),
    ],
)
def test_a_cell_is_a_whole_number_from_one(text, code):
    whole, faults = read_whole(["7", text], CELL, ".")

    assert codes(faults) == {1: code}
    assert whole.tolist() == [7, MISSING]


def test_an_absent_cathode_is_missing():
    whole, faults = read_whole(["7", ""], CATHODE, ".")

    assert faults == {}
    assert whole.tolist() == [7, MISSING]
