import pytest

from server.intake.columns import SHEETS
from server.intake.dialect import Dialect, decimals_of, delimiter_of
from server.intake.errors import FileRefused

VOLTS = [None, None, None, SHEETS["volts"].column("volts")]
NET = [None, None, None, SHEETS["lots"].column("net_kg")]


def mark_of(numbers, delimiter=",", columns=VOLTS):
    rows = [(line, ["t", "EW1", "1", number]) for line, number in enumerate(numbers, start=2)]
    return decimals_of(rows, columns, delimiter=delimiter, file="sheet.csv")


def refusal_of(numbers, delimiter=",", columns=VOLTS):
    with pytest.raises(FileRefused) as caught:
        mark_of(numbers, delimiter, columns)
    return caught.value


@pytest.mark.parametrize(
    ("header", "delimiter"),
    [
        ("at,section,cell,volts", ","),
        ("at;section;cell;volts", ";"),
        ("at\tsection\tcell\tvolts", "\t"),
        ('"at";"section, or line";"cell";"volts"', ";"),
        ("at;section;cell;volts;a,b,c,d,e,f", ";"),
        ("something else; or other", ";"),
    ],
)
def test_the_separator_is_the_one_that_brings_known_columns_to_light(header, delimiter):
    assert delimiter_of(header, file="sheet.csv", line=1) == delimiter


def test_a_header_with_two_separators_is_refused():
    with pytest.raises(FileRefused, match="comma or semicolon"):
        delimiter_of("at,section,x;cell;volts", file="sheet.csv", line=1)


@pytest.mark.parametrize(
    ("numbers", "delimiter", "mark"),
    [
        (["2.03"], ",", "."),
        (["2.035"], ",", "."),
        (["2,03"], ";", ","),
        (["2,035"], ";", ","),
        (["2.035"], ";", "."),
        (["2,035"], ",", ","),
        (["2,035"], "\t", ","),
        (["0.295"], ";", "."),
        (["0,295"], ",", ","),
        (["2", "3"], ",", "."),
        (["2", "3"], ";", ","),
        (["2", "3"], "\t", "."),
    ],
)
def test_the_decimal_mark_is_the_one_that_the_numbers_prove(numbers, delimiter, mark):
    assert mark_of(numbers, delimiter)[0] == mark


@pytest.mark.parametrize(
    ("numbers", "delimiter", "mark"),
    [
        (["1,234.5"], ",", "."),
        (["1.234,5"], ";", ","),
        (["1,234,567"], ";", "."),
        (["2857.3", "1,234"], ",", "."),
        (["35.959"], ",", "."),
        (["35,959"], ";", ","),
    ],
)
def test_thousands_separators_prove_the_other_mark(numbers, delimiter, mark):
    assert mark_of(numbers, delimiter, NET)[0] == mark


@pytest.mark.parametrize(
    ("numbers", "delimiter"),
    [(["2,857"], ","), (["2.857"], ";"), (["2,857"], "\t"), (["2.857", "3,120"], ";")],
)
def test_what_could_be_decimals_or_thousands_is_refused_not_guessed(numbers, delimiter):
    refusal = refusal_of(numbers, delimiter, NET)

    assert refusal.code == "decimals_unclear"
    assert (refusal.line, refusal.column, refusal.found) == (2, "net_kg", numbers[0])


def test_a_file_that_mixes_both_marks_is_refused_with_both_lines():
    refusal = refusal_of(["2,03", "2,04", "2.05"], ";")

    assert refusal.code == "decimals_mixed"
    assert "2,03 in line 2 and 2.05 in line 4" in str(refusal)


def test_one_slip_among_many_does_not_refuse_the_file():
    mark, _, line, rows = mark_of(["2.05", *["2,03"] * 99], ";")

    assert (mark, line, rows) == (",", 3, 100)


def test_a_dialect_is_stated_as_a_sentence():
    assert Dialect(";", ",", True, "2,035", 2, 10).sentence == (
        "UTF-8 text with a byte order mark, fields separated by semicolons, decimal comma,"
        " as in 2,035 in line 2."
    )
    assert Dialect(",", ".", False, "", None, 10).sentence == (
        "UTF-8 text, fields separated by commas; no number with decimals in the first 10 rows,"
        " so a decimal point is assumed."
    )
    assert Dialect("\t", ".").sentence == "UTF-8 text, fields separated by tabs."
    assert Dialect("", ".", worksheet="March").sentence == (
        "Worksheet “March” of an Excel workbook; numbers as Excel holds them."
    )
