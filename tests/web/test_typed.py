import pytest

from server.web.typed import one_line, whole_number, whole_numbers


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("  wrong \n meter\t", "wrong meter"),
        ("nul\x00byte", "nul byte"),
        ("zwölf Öfen ½", "zwölf Öfen ½"),
        ("", ""),
    ],
)
def test_a_line_is_kept_without_what_no_one_can_read(text, line):
    assert one_line(text) == line


def test_a_line_has_an_end():
    assert len(one_line("a" * 5000)) == 500


@pytest.mark.parametrize("text", ["-1", "1.5", "", "x", "9" * 5000, "٣", "1e3"])
def test_what_is_no_whole_number_is_none(text):
    assert whole_number(text) is None


def test_numbers_are_picked_out_of_what_was_sent():
    assert whole_numbers([" 12", "x", 13, None]) == [12, 13]
