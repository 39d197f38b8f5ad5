import pytest

from tests.factories import DAY_MS, HOUR_MS, NOW_MS
from tests.intake.conftest import iso


def test_current_is_kept_in_amperes(books):
    books.record("current", at="2024-03-05T06:00Z", section="EW1", current_ka=35.9)

    assert books.rows("SELECT amps FROM current_sample") == [(35_900.0,)]


def test_a_counter_is_kept_in_coulombs(books):
    books.record("counter", at="2024-03-05T06:00Z", section="EW1", counter_kah=12.5)

    assert books.rows("SELECT counter_c FROM counter_sample") == [(45_000_000.0,)]


def test_a_counter_that_rolled_over_goes_in(books):
    results = books.records(
        "counter",
        {"at": "2024-03-05T06:00Z", "section": "EW1", "counter_kah": 99_999.0},
        {"at": "2024-03-05T07:00Z", "section": "EW1", "counter_kah": 35.0},
    )

    assert [result.status for result in results] == ["stored", "stored"]


@pytest.mark.parametrize("current", [-1, "nan", "inf", "", "35,9kA", 72.1, 1e9])
def test_a_current_that_cannot_be_is_held(books, current):
    result = books.record("current", at="2024-03-05T06:00Z", section="EW1", current_ka=current)

    assert result.status == "held"
    assert books.rows("SELECT COUNT(*) FROM current_sample") == [(0,)]


def test_a_current_beyond_what_the_rectifier_gives_names_the_limit(books):
    result = books.record("current", at="2024-03-05T06:00Z", section="ER1", current_ka=269.8)

    assert "269.8" in result.reason
    assert "at most 54" in result.reason


def test_only_the_hours_that_changed_are_stale(books):
    books.records(
        "current",
        {"at": iso(NOW_MS - 9 * DAY_MS), "section": "EW1", "current_ka": 35.9},
        {"at": iso(NOW_MS - 9 * DAY_MS + HOUR_MS), "section": "EW1", "current_ka": 35.9},
        {"at": iso(NOW_MS - DAY_MS), "section": "EW1", "current_ka": 35.9},
    )

    assert books.stale() == [
        ("EW1", "charge", NOW_MS - 9 * DAY_MS, NOW_MS - 9 * DAY_MS + HOUR_MS + 1),
        ("EW1", "charge", NOW_MS - DAY_MS, NOW_MS - DAY_MS + 1),
    ]


def test_a_late_sample_goes_in_between(books):
    for hour in (0, 2, 1):
        at = iso(NOW_MS - DAY_MS + hour * HOUR_MS)
        result = books.record("current", at=at, section="EW1", current_ka=35.0 + hour)
        assert result.status == "stored"

    assert books.rows("SELECT amps FROM current_sample ORDER BY at_ms") == [
        (35_000.0,),
        (36_000.0,),
        (37_000.0,),
    ]


@pytest.mark.parametrize(
    ("at", "words"),
    [
        ("2024-03-05T18:00Z", "future"),
        ("2024-03-05", "no time of day"),
        ("2024-02-30T06:00Z", "calendar"),
        ("yesterday", "not a time"),
    ],
)
def test_a_moment_that_cannot_be_is_held(books, at, words):
    result = books.record("current", at=at, section="EW1", current_ka=35.9)

    assert result.status == "held"
    assert words in result.reason


def test_a_clock_may_run_ahead_as_far_as_the_site_allows(books):
    books.settings = books.settings.model_copy(update={"future_tolerance_s": 60})
    near, far = iso(NOW_MS + 59_000), iso(NOW_MS + 61_000)

    results = [books.record("current", at=at, section="EW1", current_ka=35.9) for at in (near, far)]

    assert [result.status for result in results] == ["stored", "held"]


@pytest.mark.parametrize(
    ("at", "words"),
    [("2024-09-08T00:30", "does not exist"), ("2024-04-06T23:30", "came twice")],
)
def test_local_times_that_the_clock_change_spoils_are_held(books, at, words):
    from dataclasses import replace

    books.house = replace(books.house, time_zone="America/Santiago")
    books.now_ms = NOW_MS + 365 * DAY_MS

    result = books.record("current", at=at, section="EW1", current_ka=35.9)

    assert result.status == "held"
    assert words in result.reason
