import base64
import json

import numpy as np
import plotly.graph_objects as go
import pytest

from server.figures.encode import as_json
from server.figures.layout import Axis, Band, Outage, Target, Window
from server.figures.trends import BUCKETS, Bars, Line, Marks, trend

HOUR_MS = 3_600_000
DAY_MS = 24 * HOUR_MS
FROM_MS = 1_767_225_600_000
WINDOW = Window(FROM_MS, FROM_MS + 60 * DAY_MS, "UTC")
PERCENT = Axis("Current efficiency", "%", 1)
DAYS = np.arange(60, dtype=np.int64) * DAY_MS + FROM_MS


def numbers(packed):
    return np.frombuffer(base64.b64decode(packed["bdata"]), dtype=f"<{packed['dtype']}")


@pytest.fixture
def efficiency():
    """Sixty days around 92 per cent, two of them missing."""
    values = 92 + np.sin(np.arange(60) / 5)
    values[19:21] = np.nan
    return Line("efficiency", DAYS, values, u_values=np.full(60, 0.4))


def every_kind(efficiency):
    window = Window(WINDOW.from_ms, WINDOW.to_ms, "Europe/Madrid")
    outages = [Outage(FROM_MS + 19 * DAY_MS, FROM_MS + 21 * DAY_MS)]
    second = Line("former", DAYS, efficiency.values - 1, quiet=True)
    marks = [Marks("look", DAYS[:1], efficiency.values[:1], words=["a slipped point?"])]
    yield trend(window, PERCENT, [efficiency], targets=[Target(92, "target 92")], outages=outages)
    yield trend(window, PERCENT, [efficiency, second], marks=marks)
    yield trend(
        window, PERCENT, [Line("v", DAYS, efficiency.values, "points")], band=Band(91.5, 92.5)
    )
    yield trend(
        window,
        PERCENT,
        [Line("v", DAYS, efficiency.values, "steps")],
        band=Band(91.5, 92.5),
        marks_outside=True,
    )
    yield trend(window, PERCENT, [Bars("metal", DAYS, DAYS + DAY_MS, np.full(60, 34.0))])
    yield trend(window, PERCENT, [])


def test_plotly_takes_every_kind_of_trend(efficiency):
    for figure in every_kind(efficiency):
        go.Figure(figure)


def test_every_trend_travels_as_plain_json(efficiency):
    for figure in every_kind(efficiency):
        assert json.loads(as_json(figure)).keys() == {"data", "layout"}


def test_a_missing_day_is_a_gap_in_the_line(efficiency):
    (_spread, line) = trend(WINDOW, PERCENT, [efficiency])["data"]

    assert np.flatnonzero(np.isnan(numbers(line["y"]))).tolist() == [19, 20]
    assert line["connectgaps"] is False


def test_the_uncertainty_is_drawn_for_each_unbroken_stretch(efficiency):
    (spread, _line) = trend(WINDOW, PERCENT, [efficiency])["data"]

    assert spread["fill"] == "toself"
    assert np.isnan(numbers(spread["y"])).sum() == 2
    assert np.nanmax(numbers(spread["y"])) == pytest.approx(93.4, abs=0.01)


def test_a_year_of_minutes_becomes_few_points_and_keeps_its_spike():
    at_ms = np.arange(500_000, dtype=np.int64) * 60_000 + FROM_MS
    values = np.full(at_ms.size, 2.0)
    values[123_456] = 9.0

    (line,) = trend(WINDOW, Axis("Voltage", "V", 3), [Line("cell", at_ms, values)])["data"]

    assert numbers(line["y"]).size <= 3 * BUCKETS
    assert numbers(line["y"]).max() == 9.0
    assert numbers(line["x"]).size == numbers(line["y"]).size


def test_readings_too_far_apart_are_not_joined():
    line = Line("cell", np.array([0, 10, 20, 500, 510, 520]) + FROM_MS, np.ones(6), gap_ms=100)

    (drawn,) = trend(WINDOW, PERCENT, [line])["data"]

    assert np.isnan(numbers(drawn["y"])).tolist() == [False, False, False, True, *[False] * 3]
    assert drawn["mode"] == "lines"


def test_the_uncertainty_follows_the_line_over_its_gaps():
    line = Line(
        "cell",
        np.array([0, 10, 500, 510]) + FROM_MS,
        np.array([1.0, 2.0, 3.0, 4.0]),
        u_values=np.array([0.1, 0.2, 0.3, 0.4]),
        gap_ms=100,
    )

    (spread, _drawn) = trend(WINDOW, PERCENT, [line])["data"]

    expected = [1.1, 2.2, 1.8, 0.9, np.nan, 3.3, 4.4, 3.6, 2.7, np.nan]
    np.testing.assert_allclose(numbers(spread["y"]), expected, rtol=1e-6)


def test_a_lone_reading_between_gaps_is_seen():
    line = Line("cell", DAYS[:3], np.array([np.nan, 2.0, np.nan]))

    assert trend(WINDOW, PERCENT, [line])["data"][0]["mode"] == "lines+markers"


def test_current_is_drawn_in_steps_that_hold():
    line = Line("current", DAYS, np.ones(60), shape="steps")

    assert trend(WINDOW, PERCENT, [line])["data"][0]["line"]["shape"] == "hv"


def test_each_stretch_outside_the_limits_carries_one_mark_at_its_worst():
    values = np.full(60, 2.0)
    values[10] = 2.5
    values[30:34] = [1.6, 1.5, 1.4, 1.7]

    figure = trend(
        WINDOW,
        Axis("Voltage", "V", 3),
        [Line("cell", DAYS, values)],
        band=Band(1.8, 2.2),
        marks_outside=True,
    )

    low, high = figure["data"][1:]
    assert low["marker"]["symbol"] == "triangle-down"
    assert numbers(low["x"]).tolist() == [DAYS[32]]
    assert high["marker"]["symbol"] == "triangle-up"
    assert numbers(high["x"]).tolist() == [DAYS[10]]


def test_limits_alone_put_no_marks():
    line = Line("cell", DAYS, np.full(60, 9.0))

    assert len(trend(WINDOW, PERCENT, [line], band=Band(1.8, 2.2))["data"]) == 1


def test_one_line_needs_no_name_and_two_carry_theirs(efficiency):
    other = Line("former", DAYS, efficiency.values - 1, quiet=True)

    alone = trend(WINDOW, PERCENT, [efficiency])["layout"]["annotations"]
    both = trend(WINDOW, PERCENT, [efficiency, other])["layout"]["annotations"]

    assert [one["text"] for one in alone] == ["%"]
    assert [one["text"] for one in both] == ["%", "efficiency", "former"]


def test_a_bar_stands_in_the_middle_of_its_day():
    bars = Bars("metal", DAYS[:1], DAYS[:1] + DAY_MS, np.array([34.5]))

    (drawn,) = trend(WINDOW, Axis("Cathode mass", "t", 1, starts_at_zero=True), [bars])["data"]

    assert numbers(drawn["x"]).tolist() == [DAYS[0] + DAY_MS / 2]
    assert numbers(drawn["width"])[0] < DAY_MS


def test_outages_lie_under_everything_else(efficiency):
    outage = Outage(FROM_MS + DAY_MS, FROM_MS + 2 * DAY_MS)

    figure = trend(WINDOW, PERCENT, [efficiency], outages=[outage])

    assert figure["data"][0]["fillpattern"]["shape"] == "/"


def test_a_trend_of_sixty_days_is_small(efficiency):
    assert len(as_json(trend(WINDOW, PERCENT, [efficiency]))) < 8_000
