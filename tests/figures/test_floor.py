import math

import pytest

from server.accounts.floor import FloorCell
from server.figures.floor import NARROW_LINE, floor, lean


def cell(number, **given):
    values = {
        "cell": number,
        "state": "in service",
        "volts": 2.03,
        "read_ms": 0,
        "deviation_v": 0.0,
        "times_noise": 0.0,
        "flag_kind": None,
    }
    return FloorCell(**values | given)


def cells(count, **given):
    return [cell(number, **given.get(f"c{number}", {})) for number in range(1, count + 1)]


def test_ordinary_noise_hardly_leans_and_six_times_it_is_plain():
    assert math.degrees(lean(1.0)) < 3
    assert math.degrees(lean(-6.0)) < -40
    assert math.degrees(lean(50.0)) == pytest.approx(58.0)


def test_the_current_runs_along_the_first_row_and_back_along_the_second():
    drawn = floor(cells(8), rows=2)

    first, last = drawn.needles[0], drawn.needles[-1]
    assert [needle.x for needle in drawn.needles[:4]] == sorted(n.x for n in drawn.needles[:4])
    assert first.x == last.x
    assert last.top > first.top


def test_the_path_turns_once_less_than_it_has_lines():
    assert floor(cells(8), rows=2).path.count("q") == 1
    assert floor(cells(60), rows=2, longest_line=NARROW_LINE).path.count("q") == 5


def test_a_row_too_long_for_a_phone_is_folded_into_even_lines():
    drawn = floor(cells(26), rows=1, longest_line=NARROW_LINE)

    tops = [needle.top for needle in drawn.needles]
    assert sorted(tops.count(top) for top in set(tops)) == [8, 9, 9]


def test_every_cell_is_wide_enough_for_a_finger_on_a_phone():
    drawn = floor(cells(60), rows=2, longest_line=NARROW_LINE)

    assert drawn.pitch * 334 / drawn.width > 22


def test_a_cell_that_reads_low_leans_to_the_left_with_its_mark():
    drawn = floor(cells(4, c2={"times_noise": -7.0, "flag_kind": "short"}), rows=1)

    needle = drawn.needles[1]
    assert needle.tip_x < needle.x
    assert needle.direction == "low"
    assert needle.mark.endswith("h12l-6 10z")


def test_a_bypassed_cell_lies_flat_and_one_without_a_reading_is_dotted():
    drawn = floor(
        cells(
            4,
            c2={"state": "bypassed", "times_noise": None},
            c3={"times_noise": None, "deviation_v": None},
        ),
        rows=1,
    )

    assert "h22" in drawn.needles[1].line
    assert [needle.is_dotted for needle in drawn.needles] == [False, False, True, False]


def test_numbers_do_not_run_into_the_one_of_a_flagged_cell():
    drawn = floor(cells(60, c11={"flag_kind": "short"}), rows=2)

    numbered = [n.cell.cell for n in drawn.needles if n.is_numbered]
    assert 11 in numbered
    assert {1, 20, 30, 60} <= set(numbered)


def test_what_is_calm_is_one_outline_and_what_is_flagged_stands_apart():
    drawn = floor(cells(6, c2={"flag_kind": "short"}, c3={"times_noise": None}), rows=1)

    assert (drawn.calm.count("M"), drawn.unread.count("M")) == (4, 1)
    assert [needle.cell.cell for needle in drawn.flagged] == [2]


def test_a_section_without_cells_is_an_empty_drawing():
    assert floor([], rows=2).needles == ()
