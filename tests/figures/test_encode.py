import base64
import json
from datetime import UTC, datetime, timedelta
from zoneinfo import ZoneInfo

import numpy as np
import pytest

from server.figures.encode import (
    as_json,
    float32,
    float64,
    offsets_ms,
    wall_clock,
    wall_clock_ms,
)

HOUR_MS = 3_600_000
DAY_MS = 24 * HOUR_MS


def numbers(packed):
    return np.frombuffer(base64.b64decode(packed["bdata"]), dtype=f"<{packed['dtype']}")


def ms(text):
    return round(datetime.fromisoformat(text).timestamp() * 1000)


def test_values_take_four_bytes_and_keep_their_gaps():
    packed = float32(np.array([2.0314, np.nan])[::1])

    assert packed["dtype"] == "f4"
    np.testing.assert_array_equal(numbers(packed), np.float32([2.0314, np.nan]))


def test_a_slice_with_steps_is_packed_too():
    assert numbers(float32(np.arange(6.0)[::2])).tolist() == [0.0, 2.0, 4.0]


def test_milliseconds_keep_all_their_digits():
    assert numbers(float64([1_772_521_920_001])).tolist() == [1_772_521_920_001.0]


def test_the_axis_reads_as_the_clock_on_the_wall():
    at_ms = ms("2026-03-03T07:12:00+00:00")

    shown = numbers(wall_clock([at_ms], "America/Santiago"))

    assert datetime.fromtimestamp(shown[0] / 1000, UTC).strftime("%H:%M") == "04:12"


@pytest.mark.parametrize(
    "zone",
    ["UTC", "America/Santiago", "Europe/Madrid", "Africa/Casablanca", "Australia/Lord_Howe"],
)
def test_offsets_agree_with_the_zone_over_three_years(zone):
    start = datetime(2024, 1, 1, tzinfo=UTC)
    moments = [start + timedelta(minutes=37 * step) for step in range(3 * 365 * 24)]
    expected = [m.astimezone(ZoneInfo(zone)).utcoffset().total_seconds() * 1000 for m in moments]

    found = offsets_ms([round(m.timestamp() * 1000) for m in moments], zone)

    assert found.tolist() == expected


def test_the_offset_changes_at_the_very_moment():
    change_ms = ms("2026-03-29T01:00:00+00:00")

    found = offsets_ms([change_ms - 5 * DAY_MS, change_ms - 1, change_ms], "Europe/Madrid")

    assert found.tolist() == [HOUR_MS, HOUR_MS, 2 * HOUR_MS]


def test_no_moment_has_no_offset():
    assert offsets_ms([], "Europe/Madrid").size == 0


def test_one_moment_reads_as_many_do():
    at_ms = ms("2026-07-01T00:00:00+00:00")

    assert wall_clock_ms(at_ms, "Europe/Madrid") == at_ms + 2 * HOUR_MS


def test_a_figure_cannot_end_the_script_element_it_stands_in():
    text = as_json({"name": "</script><b>&"})

    assert "<" not in text
    assert json.loads(text) == {"name": "</script><b>&"}


def test_a_missing_value_in_a_list_is_null():
    assert as_json({"y": [1.0, float("nan")]}) == '{"y":[1.0,null]}'
