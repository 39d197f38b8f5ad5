"""Hours, shifts, days and months as half-open intervals in the plant's zone."""

from dataclasses import dataclass
from datetime import UTC, date, datetime, time, timedelta
from zoneinfo import ZoneInfo

from server.storage.plant import House

HOUR_MS = 3_600_000
DAY_MS = 86_400_000
_EPOCH = date(1970, 1, 1)


@dataclass(frozen=True)
class Period:
    """A stretch of time, [from_ms, to_ms), with its name where it has one."""

    from_ms: int
    to_ms: int
    name: str = ""


def utc_day_ms(at_ms: int) -> int:
    """Start of the UTC day that holds a moment."""
    return at_ms // DAY_MS * DAY_MS


def utc_hour_ms(at_ms: int) -> int:
    """Start of the UTC hour that holds a moment."""
    return at_ms // HOUR_MS * HOUR_MS


def local_date(at_ms: int, zone: str) -> date:
    """The calendar day of a moment in the plant's zone."""
    return datetime.fromtimestamp(at_ms / 1000, UTC).astimezone(ZoneInfo(zone)).date()


def moment_ms(day: date, minute: int, zone: str) -> int:
    """The moment of a local wall-clock time.

    Where the clocks go back, the first of the two; where they jump over it, as long after the
    jump as it would have been after the former hour.
    """
    wall = datetime.combine(day, time()) + timedelta(minutes=minute)
    return round(wall.replace(tzinfo=ZoneInfo(zone)).astimezone(UTC).timestamp() * 1000)


def day_of(at_ms: int, zone: str) -> Period:
    """The calendar day that holds a moment."""
    day = local_date(at_ms, zone)
    return Period(
        moment_ms(day, 0, zone), moment_ms(day + timedelta(days=1), 0, zone), day.isoformat()
    )


def days_between(from_ms: int, to_ms: int, zone: str) -> list[Period]:
    """The calendar days that touch a time, in order."""
    periods = []
    at_ms = from_ms
    while at_ms < to_ms:
        day = day_of(at_ms, zone)
        periods.append(day)
        at_ms = day.to_ms
    return periods


def month_of(at_ms: int, zone: str) -> Period:
    """The calendar month that holds a moment."""
    first = local_date(at_ms, zone).replace(day=1)
    after = (first + timedelta(days=32)).replace(day=1)
    return Period(moment_ms(first, 0, zone), moment_ms(after, 0, zone), f"{first:%Y-%m}")


def shift_of(at_ms: int, house: House) -> Period:
    """The shift that holds a moment, as the house works shifts at that time."""
    shifts = house.shifts_at(at_ms)
    day = local_date(at_ms, house.time_zone)
    starts = [
        (moment_ms(day + timedelta(days=offset), minute, house.time_zone), name)
        for offset in (-1, 0, 1, 2)
        for minute, name in shifts
    ]
    for (start_ms, name), (end_ms, _) in zip(starts, starts[1:], strict=False):
        if start_ms <= at_ms < end_ms:
            return Period(start_ms, end_ms, name)
    raise AssertionError("three days of shifts hold every moment of the middle one")


def shifts_between(from_ms: int, to_ms: int, house: House) -> list[Period]:
    """The shifts that touch a time, in order."""
    first = shift_of(from_ms, house)
    starts = {first.from_ms: first.name}
    day, last = local_date(from_ms, house.time_zone), local_date(to_ms, house.time_zone)
    while day <= last + timedelta(days=1):
        for minute, name in house.shifts_at(moment_ms(day, 0, house.time_zone)):
            start_ms = moment_ms(day, minute, house.time_zone)
            if start_ms > first.from_ms:
                starts[start_ms] = name
        day += timedelta(days=1)
    edges = sorted(starts)
    return [
        Period(start, end, starts[start])
        for start, end in zip(edges, edges[1:], strict=False)
        if start < to_ms
    ]
