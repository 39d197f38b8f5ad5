import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.intake.cells import cells_text, parse_cells
from server.intake.errors import CellsWrong


@pytest.mark.parametrize(
    ("text", "cells"),
    [
        ("1-3;15", (1, 2, 3, 15)),
        (" 15 ; 1 - 3 ", (1, 2, 3, 15)),
        ("7", (7,)),
        ("5-5", (5,)),
        ("1–3", (1, 2, 3)),
        ("1,3", (1, 3)),
        ("", ()),
        ("  ", ()),
    ],
)
def test_a_list_of_cells_is_read(text, cells):
    assert parse_cells(text) == cells


@pytest.mark.parametrize(
    ("text", "code", "found"),
    [
        ("12-1", "cells_reversed", "12-1"),
        ("1-5;5", "cells_twice", "5"),
        ("0", "cells_zero", "0"),
        ("0-3", "cells_zero", "0-3"),
        ("48-49", "cells_beyond", "49"),
        ("60", "cells_beyond", "60"),
        ("1-999999999", "cells_beyond", "49"),
        ("1;;2", "cells_format", "1;;2"),
        ("1-2-3", "cells_format", "1-2-3"),
        ("-4", "cells_format", "-4"),
        ("1.5", "cells_format", "1.5"),
        ("all", "cells_format", "all"),
        ("¹²", "cells_format", "¹²"),
        ("12-Jan", "cells_date", "12-Jan"),
        ("Jan-12", "cells_date", "Jan-12"),
        ("2026-01-12T00:00:00", "cells_date", "2026-01-12T00:00:00"),
    ],
)
def test_a_list_that_cannot_be_meant_is_refused_with_its_piece(text, code, found):
    with pytest.raises(CellsWrong) as caught:
        parse_cells(text, cells=48)

    assert (caught.value.fault.code, caught.value.fault.found) == (code, found)


def test_what_is_wrong_is_said_in_a_sentence():
    with pytest.raises(CellsWrong, match="runs backwards; expected 1-12"):
        parse_cells("12-1")


def test_same_cells_are_always_written_the_same():
    assert cells_text([3, 1, 2, 2]) == cells_text((1, 2, 3)) == "1-3"


@given(st.sets(st.integers(1, 400), max_size=60))
def test_cells_survive_being_written_and_read(cells):
    assert parse_cells(cells_text(cells)) == tuple(sorted(cells))
