import re

import pytest

from server.figures.layout import TOKENS, Axis, Band, Outage, Target, Window, layout, outage_trace
from server.figures.layout import y_range as ends_of
from tests.source import ROOT

DAY_MS = 86_400_000
WINDOW = Window(1_767_225_600_000, 1_767_225_600_000 + 60 * DAY_MS, "America/Santiago")
VOLTS = Axis("Voltage", "V", 3)
TONNES = Axis("Cathode mass", "t", 1, starts_at_zero=True)


def tokens_of(path, pattern):
    return re.findall(pattern, (ROOT / path).read_text(encoding="utf-8"))


def test_the_colours_are_those_of_the_pages():
    light = (ROOT / "static/css/tokens.css").read_text(encoding="utf-8").partition("@media")[0]
    named = dict(re.findall(r"--(\w+): (#[0-9a-f]{6});", light))

    assert {name: named.get(name) for name in TOKENS} == TOKENS


def test_the_script_knows_every_colour_by_its_name():
    exchanged = tokens_of("static/js/figure.js", r'"(#[0-9a-f]{6})": "(\w+)"')

    assert {name: colour for colour, name in exchanged} == TOKENS


def test_no_two_tokens_share_a_colour():
    assert len(set(TOKENS.values())) == len(TOKENS)


def test_the_time_axis_reads_as_the_wall_clock():
    three_hours_ms = 3 * 3_600_000

    drawn = layout(WINDOW, VOLTS, (1.8, 2.2))

    assert drawn["xaxis"]["range"] == [
        WINDOW.from_ms - three_hours_ms,
        WINDOW.to_ms - three_hours_ms,
    ]


def test_a_target_is_a_thin_line_with_its_words():
    drawn = layout(WINDOW, VOLTS, (1.8, 2.2), targets=[Target(2.0, "target 2.0")])

    (line,) = drawn["shapes"]
    assert (line["y0"], line["y1"], line["line"]["width"]) == (2.0, 2.0, 1)
    assert "target 2.0" in [words["text"] for words in drawn["annotations"]]


def test_a_band_with_an_open_end_reaches_the_edge():
    drawn = layout(WINDOW, VOLTS, (1.7, 2.4), band=Band(low=1.8))

    assert [(shape["y0"], shape["y1"]) for shape in drawn["shapes"]] == [(1.8, 2.4)]


def test_the_unit_stands_above_the_axis():
    assert layout(WINDOW, VOLTS, (1.8, 2.2))["annotations"][0]["text"] == "V"


@pytest.mark.parametrize(
    ("ends", "step", "written"),
    [
        ((90.6, 93.3), 1.0, ",.0f"),
        ((91.0, 93.4), 0.5, ",.1f"),
        ((1860.0, 1960.0), 20.0, ",.0f"),
        ((1.73, 2.28), 0.2, ",.1f"),
        ((0.0, 40.0), 10.0, ",.0f"),
        ((2.0, 2.01), 0.002, ",.3f"),
    ],
)
def test_the_value_axis_is_divided_by_round_numbers(ends, step, written):
    drawn = layout(WINDOW, VOLTS, ends)["yaxis"]

    assert drawn["dtick"] == pytest.approx(step)
    assert drawn["tickformat"] == written


def test_the_value_axis_holds_values_and_targets():
    low, high = ends_of(VOLTS, [1.9, float("nan"), 2.1], [2.3])

    assert low < 1.9
    assert high > 2.3


def test_an_axis_that_starts_at_zero_has_no_air_below():
    assert ends_of(TONNES, [30.0, 40.0], [])[0] == 0.0


def test_an_axis_that_starts_at_zero_shows_what_lies_below():
    assert ends_of(TONNES, [-5.0, 40.0], [])[0] < -5.0


def test_one_value_has_room_on_both_sides():
    low, high = ends_of(VOLTS, [2.0], [])

    assert low < 2.0 < high


def test_no_value_at_all_still_makes_an_axis():
    assert ends_of(VOLTS, [float("nan")], []) == (0.0, 1.0)


def test_an_outage_is_cut_at_the_edges_of_the_window():
    outage = Outage(WINDOW.from_ms - DAY_MS, WINDOW.from_ms + DAY_MS)

    trace = outage_trace([outage], WINDOW, (1.8, 2.2))

    assert trace is not None
    assert min(filter(None, trace["x"])) == WINDOW.on_the_wall()[0]
    assert trace["fillpattern"]["shape"] == "/"


def test_outages_beside_the_window_are_not_drawn():
    before = Outage(WINDOW.from_ms - DAY_MS, WINDOW.from_ms)
    after = Outage(WINDOW.to_ms, WINDOW.to_ms + DAY_MS)

    assert outage_trace([before, after], WINDOW, (1.8, 2.2)) is None
