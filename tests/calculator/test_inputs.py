import pytest

from server.calculator.inputs import Input, number_of


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("30", 30.0),
        ("2.05", 2.05),
        ("2,05", 2.05),
        (" 1 850,5 ", 1850.5),
        ("41\u202f000", 41_000.0),
        ("\u221215", -15.0),
        ("-.5", -0.5),
        ("1e-05", 1e-5),
    ],
)
def test_a_number_is_read_as_people_and_programs_write_it(text, value):
    assert number_of(text) == value


@pytest.mark.parametrize(
    "text", ["", "abc", "1,234.5", "1.2.3", "30 kA", "1 2", "nan", "inf", "1e999", "٣", "9" * 50]
)
def test_what_can_be_misread_is_no_number(text):
    assert number_of(text) is None


def test_the_lowest_number_is_taken_unless_it_must_be_above():
    assert Input("a", "A", "", 0, 10).takes(0)
    assert not Input("a", "A", "", 0, 10, is_above=True).takes(0)
    assert not Input("a", "A", "", 0, 10).takes(10.1)


def test_what_is_almost_nothing_is_a_slip_of_the_pen():
    assert not Input("a", "A", "", 0, 10, is_above=True).takes(1e-300)
    assert Input("a", "A", "", 0, 10, is_above=True).takes(5e-7)


def test_what_is_counted_has_no_standard_uncertainty():
    assert Input("cells", "Cells", "", 0, 10, has_doubt=False).u_key is None
    assert Input("volts", "Volts", "V", 0, 10).u_key == "u_volts"


def test_a_standard_uncertainty_is_not_negative():
    volts = Input("volts", "Volts", "V", 0, 10)

    assert volts.takes_u(0)
    assert not volts.takes_u(-0.1)
    assert not volts.takes_u(11)
