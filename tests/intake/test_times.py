from datetime import UTC, datetime, timedelta
from zoneinfo import ZoneInfo

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.intake.rows import MISSING
from server.intake.times import AHEAD_MS, TimeReader, local_to_utc_ms, zone_offsets

NOW_MS = 1_800_000_000_000
"""2027-01-15T08:00:00Z"""


def ms(*parts):
    return int(datetime(*parts, tzinfo=UTC).timestamp() * 1000)


def reader(zone="UTC"):
    return TimeReader(ZoneInfo(zone), NOW_MS)


def read_one(text, zone="UTC"):
    moments, faults = reader(zone).read([text])
    return faults[0].code if faults else int(moments[0])


@pytest.mark.parametrize(
    ("text", "moment"),
    [
        ("2026-03-01T02:00:20Z", ms(2026, 3, 1, 2, 0, 20)),
        ("2026-03-01T02:00:20z", ms(2026, 3, 1, 2, 0, 20)),
        ("2026-03-01 02:00:20", ms(2026, 3, 1, 2, 0, 20)),
        ("2026-03-01T02:00", ms(2026, 3, 1, 2)),
        ("2026-03-01T02:00+03:00", ms(2026, 2, 28, 23)),
        ("2026-03-01T02:00:00-0330", ms(2026, 3, 1, 5, 30)),
        ("2026-03-01T02:00:00+05", ms(2026, 2, 28, 21)),
        ("2026-03-01T02:00:00.5Z", ms(2026, 3, 1, 2) + 500),
        ("2026-03-01T02:00:00.123456Z", ms(2026, 3, 1, 2) + 123),
        ("2026-03-01T02:00:00,25", ms(2026, 3, 1, 2) + 250),
        ("20260301T020020Z", ms(2026, 3, 1, 2, 0, 20)),
        ("20260301T0200", ms(2026, 3, 1, 2)),
        (" 2026-03-01T02:00 ", ms(2026, 3, 1, 2)),
        ("2024-02-29T00:00", ms(2024, 2, 29)),
    ],
)
def test_iso_8601_is_read(text, moment):
    assert read_one(text) == moment


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("", "empty"),
        ("2026-03-01", "time_no_clock"),
        ("20260301", "time_no_clock"),
        ("46082.0835", "time_number"),
        ("1772330400", "time_number"),
        ("01/03/2026 02:00", "time_format"),
        ("2026-3-1T2:00", "time_format"),
        ("2026-03-01T02", "time_format"),
        ("2026-03-01T02:00.5", "time_format"),
        ("2026-03-01T02:00:00 UTC", "time_format"),
        ("٢٠٢٦-03-01T02:00", "time_format"),
        ("2026-02-29T00:00", "time_impossible"),
        ("2026-13-01T00:00", "time_impossible"),
        ("2026-00-01T00:00", "time_impossible"),
        ("2026-04-31T00:00", "time_impossible"),
        ("2026-03-01T24:00", "time_impossible"),
        ("2026-03-01T23:60", "time_impossible"),
        ("2026-03-01T23:59:60Z", "time_impossible"),
        ("2026-03-01T02:00+15:00", "time_impossible"),
        ("2026-03-01T02:00+02:99", "time_impossible"),
        ("0000-01-01T00:00Z", "time_impossible"),
        ("1989-12-31T23:59:59Z", "time_early"),
        ("1970-01-01T00:00:00Z", "time_early"),
        ("9999-12-31T23:59:59Z", "time_future"),
    ],
)
@pytest.mark.parametrize("company", [[], ["2026-03-01T02:00:00Z"], ["2026-03-01T02:00"]])
def test_what_is_no_time_is_named_for_what_it_is(text, code, company):
    moments, faults = reader().read([*company, text])

    assert {i: fault.code for i, fault in faults.items()} == {len(company): code}
    assert moments[-1] == MISSING


def test_the_future_begins_five_minutes_from_now():
    last = datetime.fromtimestamp((NOW_MS + AHEAD_MS) / 1000, UTC)

    texts = [last.isoformat(), (last + timedelta(seconds=1)).isoformat()]
    moments, faults = reader("America/Santiago").read(texts)

    assert moments[0] == NOW_MS + AHEAD_MS
    assert {i: fault.code for i, fault in faults.items()} == {1: "time_future"}
    assert faults[1].expected == "a time up to now, 2027-01-15T05:00:00-03:00"


def test_a_time_without_offset_is_the_tankhouses_own():
    assert read_one("2026-07-01T12:00", "America/Santiago") == ms(2026, 7, 1, 16)
    assert read_one("2026-01-01T12:00", "America/Santiago") == ms(2026, 1, 1, 15)
    assert read_one("2026-01-01T12:00Z", "America/Santiago") == ms(2026, 1, 1, 12)


@pytest.mark.parametrize(
    ("zone", "text", "code", "hint"),
    [
        ("Europe/Warsaw", "2026-03-29T02:30", "time_skipped", "2026-03-29T03:30:00+02:00"),
        ("Europe/Warsaw", "2026-10-25T02:30", "time_twice", "2026-10-25T02:30:00+01:00"),
        ("America/Santiago", "2026-09-06T00:15", "time_skipped", "2026-09-06T01:15:00-03:00"),
        ("America/Santiago", "2026-04-04T23:59:59", "time_twice", "2026-04-04T23:59:59-04:00"),
        ("Australia/Lord_Howe", "2026-10-04T02:15", "time_skipped", "2026-10-04T02:45:00+11:00"),
        ("Australia/Lord_Howe", "2026-04-05T01:45", "time_twice", "2026-04-05T01:45:00+10:30"),
    ],
)
def test_a_local_time_that_the_clock_change_spoils_is_refused_with_the_ways_out(
    zone, text, code, hint
):
    _, faults = reader(zone).read([text, "2026-07-01T12:00"])

    assert {i: fault.code for i, fault in faults.items()} == {0: code}
    assert hint in faults[0].expected


@pytest.mark.parametrize("text", ["2026-03-29T01:59:59", "2026-03-29T03:00", "2026-10-25T03:00"])
def test_times_beside_a_clock_change_are_clear(text):
    local = datetime.fromisoformat(text).replace(tzinfo=ZoneInfo("Europe/Warsaw"))

    assert read_one(text, "Europe/Warsaw") == int(local.timestamp() * 1000)


def test_an_offset_settles_the_hour_that_comes_twice():
    assert read_one("2026-10-25T02:30+01:00", "Europe/Warsaw") == ms(2026, 10, 25, 1, 30)


@pytest.mark.parametrize(
    "zone", ["America/Santiago", "Europe/Warsaw", "America/St_Johns", "Africa/Casablanca"]
)
@given(local_s=st.integers(631_200_000, 2_000_000_000))
def test_local_times_agree_with_the_standard_library(zone, local_s):
    local_ms = np.array([local_s * 1000, local_s * 1000 + 400 * 86_400_000])

    moments, is_clear = local_to_utc_ms(local_ms, ZoneInfo(zone))

    naive = datetime(1970, 1, 1) + timedelta(seconds=local_s)  # noqa: DTZ001
    either = {
        int(naive.replace(tzinfo=ZoneInfo(zone), fold=fold).timestamp() * 1000) for fold in (0, 1)
    }
    assert bool(is_clear[0]) == (len(either) == 1)
    if is_clear[0]:
        assert int(moments[0]) in either


def test_changes_of_the_clock_are_found_to_the_second():
    changes_ms, offsets_ms = zone_offsets(ZoneInfo("Europe/Warsaw"))

    assert ms(2026, 3, 29, 1) in changes_ms
    assert ms(2026, 10, 25, 1) in changes_ms
    assert set(offsets_ms) == {3_600_000, 7_200_000}


def test_layouts_may_be_mixed_in_one_column():
    texts = [
        "2026-03-01T02:00:00Z",
        "2026-03-01 02:00",
        "2026-03-01T02:00:00+00:00",
        "2026-03-01T02:00:00-00:00",
        "2026-03-01 02:00:00Z",
        "20260301T020000Z",
        "2026-03-01T02:00:00.000Z",
    ]

    moments, faults = reader().read(texts * 50)

    assert faults == {}
    assert set(moments.tolist()) == {ms(2026, 3, 1, 2)}


@given(
    st.lists(
        st.datetimes(datetime(1990, 1, 2), datetime(2026, 12, 31)),  # noqa: DTZ001
        min_size=1,
        max_size=30,
    ),
    st.sampled_from(["minutes", "seconds", "milliseconds", "microseconds"]),
    st.sampled_from(["Z", "+00:00", "-04:00", "+05:30", "+0530", "-03"]),
)
def test_times_agree_with_the_standard_library(moments, timespec, offset):
    texts = [moment.isoformat(timespec=timespec) + offset for moment in moments]

    found, faults = reader().read(texts)

    wanted = [
        (datetime.fromisoformat(text) - datetime(1970, 1, 1, tzinfo=UTC))
        // timedelta(milliseconds=1)
        for text in texts
    ]
    assert faults == {}
    assert found.tolist() == wanted
