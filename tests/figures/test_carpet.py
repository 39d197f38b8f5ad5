import base64

import numpy as np
import pytest

from server.figures.carpet import CarpetWords, carpet_figure
from server.figures.layout import HIGH, LOW, PALE, Window

HOUR_MS = 3_600_000
FROM_MS = 1_767_225_600_000
WINDOW = Window(FROM_MS, FROM_MS + 48 * HOUR_MS, "UTC")
WORDS = CarpetWords("Cell", "bands")


def unpacked(array):
    values = np.frombuffer(base64.b64decode(array["bdata"]), f"<{array['dtype']}")
    shape = [int(side) for side in array.get("shape", str(values.size)).split(",")]
    return values.reshape(shape)


def drawn(started_h, times, rows=1):
    times = np.array(times, np.float32)
    started = FROM_MS + np.array(started_h, np.int64) * HOUR_MS
    return carpet_figure(WINDOW, started, times * np.float32(8), times, rows, WORDS)


def hours_of(carpet):
    return ((unpacked(carpet["x"]) - FROM_MS) / HOUR_MS).tolist()


def test_each_round_stands_at_its_time():
    (carpet,) = drawn([0, 8, 16, 25, 36], [[1, 2, 3, 4, 5]])["data"]

    assert hours_of(carpet) == [0, 8, 16, 25, 36]
    assert unpacked(carpet["z"]).tolist() == [[1, 2, 3, 4, 5]]


def test_a_time_without_rounds_is_blank():
    (carpet,) = drawn([0, 8, 16, 40, 48], [[1, 2, 3, 4, 5]])["data"]

    assert hours_of(carpet) == [0, 8, 16, 24, 32, 40, 48]
    blank = np.isnan(unpacked(carpet["z"]))
    assert blank.tolist() == [[False, False, False, True, True, False, False]]


def test_rounds_once_a_day_leave_nothing_blank():
    (carpet,) = drawn([0, 24, 48], [[1, 2, 3]])["data"]

    assert not np.isnan(unpacked(carpet["z"])).any()


def test_a_round_alone_is_as_wide_as_a_shift():
    (carpet,) = drawn([10], [[1]])["data"]

    assert hours_of(carpet) == [2, 10, 18]


def test_a_cell_that_was_not_read_is_blank_and_says_nothing():
    (carpet,) = drawn([0, 8], [[1, np.nan]])["data"]

    assert np.isnan(unpacked(carpet["z"])[0, 1])
    assert carpet["hoverongaps"] is False


def test_what_is_as_expected_is_grey_and_what_is_not_is_shaded_by_tokens():
    (carpet,) = drawn([0], [[0.0]])["data"]

    shades = carpet["colorscale"]
    assert [colour for _, colour in shades] == [LOW, PALE, PALE, HIGH]
    middle = [place * 12 - 6 for place, _ in shades]
    assert middle == pytest.approx([-6, -2, 2, 6])


def test_the_first_cell_is_on_top_and_a_line_parts_the_rows():
    figure = drawn([0], [[0.0]] * 60, rows=2)

    assert figure["layout"]["yaxis"]["range"] == [60.5, 0.5]
    assert figure["layout"]["yaxis"]["tickvals"] == [1, 10, 20, 30, 40, 50, 60]
    assert [shape["y0"] for shape in figure["layout"]["shapes"]] == [30.5]


def test_numbers_stand_in_the_tooltip():
    (carpet,) = drawn([0], [[-4.5]])["data"]

    assert unpacked(carpet["customdata"])[0, 1] == -36.0
    assert "%{customdata:.0f} mV, %{z:.1f} bands" in carpet["hovertemplate"]


def test_nothing_at_all_is_drawn_as_an_empty_floor():
    figure = carpet_figure(
        WINDOW, np.zeros(0, np.int64), *[np.zeros((0, 0), np.float32)] * 2, 1, WORDS
    )

    assert unpacked(figure["data"][0]["z"]).size == 0
