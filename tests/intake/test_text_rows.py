import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.intake.chunks import Limits
from server.intake.text_rows import Layout, careful_chunk, fast_chunk, quoted_chunk

NAMES = ("at", "section", "cell", "volts")
plain = st.text(st.characters(codec="utf-8", exclude_categories=["Cc"]), max_size=5)
fields = plain.map(lambda text: text.replace('"', "").replace(",", ""))


def layout(delimiter=","):
    return Layout("volts.csv", delimiter, NAMES, NAMES, Limits())


def same(one, other):
    return (
        one.columns == other.columns
        and one.lines.tolist() == other.lines.tolist()
        and list(one.raw) == list(other.raw)
    )


@given(st.lists(st.tuples(fields, fields, fields, fields), min_size=1, max_size=10))
def test_the_quick_ways_give_what_the_careful_way_gives(rows):
    text = "\n".join(",".join(row) for row in rows)
    careful, carried, _ = careful_chunk(text, 2, 0, layout(), is_last=True)

    fast = fast_chunk(text.encode(), text, 2, 0, layout())
    quoted = quoted_chunk(text, 2, 0, layout())

    assert carried == ""
    assert careful.errors == ()
    for quick in (fast, quoted):
        assert quick is None or same(quick, careful)


@pytest.mark.parametrize(
    "text",
    ["t,EW1,1", "t,EW1,1,2,3", "t,EW1,1,2\n", 't,EW1,1,"2"', ",,,", "t,EW1,1,2\nt,EW1", ""],
)
def test_the_quick_way_leaves_to_the_careful_one_what_is_not_plain(text):
    assert fast_chunk(text.encode(), text, 2, 0, layout()) is None


def test_a_row_that_may_go_on_waits_for_the_next_block():
    text = 't,EW1,1,2\nt,EW1,2,"2\n3'

    chunk, carried, line = careful_chunk(text, 2, 0, layout(), is_last=False)

    assert chunk.columns["cell"] == ["1"]
    assert (carried, line) == ('t,EW1,2,"2\n3', 3)


def test_a_row_that_cannot_go_on_is_given_up_alone():
    text = 't,EW1,1,2\nt,EW1,2,"2\nt,EW1,3,2'

    chunk, carried, _ = careful_chunk(text, 2, 0, layout(), is_last=True)

    assert chunk.columns["cell"] == ["1", "3"]
    assert [(error.line, error.code) for error in chunk.errors] == [(3, "quotes")]
    assert carried == ""


def test_lines_are_kept_word_for_word():
    text = "t,EW1,1,2\nt,ÉW,2,2"

    chunk = fast_chunk(text.encode(), text, 7, 0, layout())

    assert list(chunk.raw) == text.split("\n")
    assert len(chunk.raw) == 2
    assert chunk.raw[1:] == ["t,ÉW,2,2"]
    assert chunk.lines.tolist() == [7, 8]
    assert chunk.fields(1) == {"at": "t", "section": "ÉW", "cell": "2", "volts": "2"}
