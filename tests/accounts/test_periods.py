"""Hours, shifts, days and months, across changes of the clock."""

from datetime import UTC, date, datetime

import pytest

from server.accounts.periods import (
    day_of,
    days_between,
    moment_ms,
    month_of,
    shift_of,
    shifts_between,
)
from server.storage.plant import House

ZONE = "Europe/Berlin"
HOUR_MS = 3_600_000


def at(text: str) -> int:
    return round(datetime.fromisoformat(text).replace(tzinfo=UTC).timestamp() * 1000)


@pytest.fixture
def house():
    """Three shifts; the first starts at six in the morning."""
    shifts = ((6 * 60, "early"), (14 * 60, "late"), (22 * 60, "night"))
    return House("North", ZONE, "EUR", (), ((0, shifts),), ())


@pytest.mark.parametrize(
    ("day", "hours"), [("2026-03-28", 24), ("2026-03-29", 23), ("2026-10-25", 25)]
)
def test_a_day_is_as_long_as_the_clocks_make_it(day, hours):
    period = day_of(at(f"{day}T12:00"), ZONE)

    assert period.name == day
    assert period.to_ms - period.from_ms == hours * HOUR_MS


def test_days_follow_each_other_without_gap():
    days = days_between(at("2026-03-27T23:30"), at("2026-03-31T00:00"), ZONE)

    assert [d.name for d in days] == [
        "2026-03-28",
        "2026-03-29",
        "2026-03-30",
        "2026-03-31",
    ]
    assert all(a.to_ms == b.from_ms for a, b in zip(days, days[1:], strict=False))


def test_a_month_ends_where_the_next_begins():
    december = month_of(at("2026-12-31T12:00"), ZONE)

    assert december.name == "2026-12"
    assert month_of(december.to_ms, ZONE).name == "2027-01"


def test_the_small_hours_belong_to_the_night_shift_of_the_day_before(house):
    night = shift_of(at("2026-06-10T01:00"), house)

    assert night.name == "night"
    assert night.from_ms == moment_ms(date(2026, 6, 9), 22 * 60, ZONE)
    assert night.to_ms == moment_ms(date(2026, 6, 10), 6 * 60, ZONE)


def test_the_night_of_the_clock_change_is_an_hour_longer(house):
    night = shift_of(at("2026-10-25T00:30"), house)

    assert night.to_ms - night.from_ms == 9 * HOUR_MS


def test_shifts_follow_each_other_without_gap(house):
    shifts = shifts_between(at("2026-10-24T00:00"), at("2026-10-27T00:00"), house)

    assert all(a.to_ms == b.from_ms for a, b in zip(shifts, shifts[1:], strict=False))
    assert len(shifts) == 10
