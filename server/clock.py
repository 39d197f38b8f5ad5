"""The only place that asks the time."""

import time
from datetime import UTC, datetime
from zoneinfo import ZoneInfo


def now_ms() -> int:
    """This moment, in milliseconds since 1970-01-01T00:00Z."""
    return time.time_ns() // 1_000_000


def as_datetime(moment_ms: int, zone: str = "UTC") -> datetime:
    """A moment as a date and time of the zone."""
    return datetime.fromtimestamp(moment_ms / 1000, UTC).astimezone(ZoneInfo(zone))


def as_ms(moment: datetime) -> int:
    """A date and time with its offset as milliseconds since 1970-01-01T00:00Z."""
    if moment.tzinfo is None:
        raise ValueError(f"{moment.isoformat()} has no offset from UTC")
    return round(moment.timestamp() * 1000)
