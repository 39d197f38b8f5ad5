"""ISO 8601 to milliseconds since 1970 in UTC, in the tankhouse's zone unless an offset is given."""

import datetime
import re
from collections.abc import Sequence
from functools import lru_cache
from zoneinfo import ZoneInfo

import numpy as np
from numpy.typing import NDArray

from server.intake.errors import Fault
from server.intake.rows import MISSING

Whole = NDArray[np.int64]
Truth = NDArray[np.bool_]

AHEAD_MS = 5 * 60_000
"""Clocks of tablets and of loggers run ahead; five minutes are forgiven, more is a wrong entry."""

EARLIEST_MS = 631_152_000_000
"""1990-01-01. No record in these sheets is older; a time before it is a logger that lost its
clock (which shows 1970 or 1980) or a slip in the year."""

TIME_FORM = "a time such as 2026-03-01T02:00, 2026-03-01 02:00:20 or 2026-03-01T02:00:20+03:00"

_MINUTE_MS, _HOUR_MS, _DAY_MS = 60_000, 3_600_000, 86_400_000
_FARTHEST_OFFSET_MS = 14 * _HOUR_MS
_EPOCH = datetime.datetime(1970, 1, 1, tzinfo=datetime.UTC)

_TIME = re.compile(
    r"(?P<day>\d{4}-\d{2}-\d{2})[Tt ](?P<clock>\d{2}:\d{2}(?P<seconds>:\d{2})?)"
    r"(?:(?<=:\d\d:\d\d)[.,](?P<fraction>\d{1,9}))?"
    r"(?P<offset>[Zz]|[+-]\d{2}:\d{2}|[+-]\d{4}|[+-]\d{2})?",
    re.ASCII,
)
_BASIC = re.compile(
    r"(\d{4})(\d{2})(\d{2})[Tt](\d{2})(\d{2})(\d{2})?([.,]\d{1,9})?([Zz]|[+-]\d{2}(?::?\d{2})?)?",
    re.ASCII,
)
_DAY_ONLY = re.compile(r"\d{4}-\d{2}-\d{2}|\d{8}", re.ASCII)
_BARE_NUMBER = re.compile(r"\d{1,13}(?:[.,]\d*)?", re.ASCII)

_FIRST_YEAR, _LAST_YEAR = 1900, 2199
_MONTH_STARTS_DAYS: Whole = (
    np.arange(f"{_FIRST_YEAR}-01", f"{_LAST_YEAR + 1}-02", dtype="datetime64[M]")
    .astype("datetime64[D]")
    .astype(np.int64)
)
"""Days from 1970 to the first of each month of three centuries."""

_LAYOUTS_TRIED = 4
"""Layouts tried on the texts of one length, before the rest is read one by one."""

_SHORTEST_TEXT = len("2026-03-01T02:00")
_LONGEST_TEXT = len("2026-03-01T02:00:20.123456789+03:00")
_TEXTS_REMEMBERED = 100_000


class TimeReader:
    """Reads the times of one tankhouse.

    Times that look alike, as those of one file do, are read as a table of digits with NumPy,
    some tens of nanoseconds each; anything else is read one by one, and each different text
    once. `now_ms` is the present; a time after it, and a tolerance, lies in the future.
    """

    def __init__(self, zone: ZoneInfo, now_ms: int) -> None:
        self._zone = zone
        self._now_ms = now_ms
        self._latest_ms = now_ms + AHEAD_MS
        self._seen: dict[str, int | Fault] = {}

    def read(self, texts: Sequence[str]) -> tuple[Whole, dict[int, Fault]]:
        """Give the moments in ms, and by position what is wrong with the others.

        A moment that cannot be read is MISSING in the array. Fractions finer than a
        millisecond are cut off.
        """
        moments = np.full(len(texts), MISSING, dtype=np.int64)
        widths = set(map(len, texts))
        for width in sorted(widths):
            if not _SHORTEST_TEXT <= width <= _LONGEST_TEXT:
                continue
            if len(widths) == 1:
                moments = self._read_alike(texts, width)
            else:
                places = [i for i, text in enumerate(texts) if len(text) == width]
                moments[places] = self._read_alike([texts[i] for i in places], width)
        faults: dict[int, Fault] = {}
        for i in np.flatnonzero(moments == MISSING).tolist():
            found = self._read_one(texts[i])
            if isinstance(found, Fault):
                faults[i] = found
            else:
                moments[i] = found
        return moments, faults

    def _read_alike(self, texts: Sequence[str], length: int) -> Whole:
        """Read texts of one length that have one of a few layouts; leave the others missing."""
        moments = np.full(len(texts), MISSING, dtype=np.int64)
        joined = "".join(texts)
        if not joined.isascii():
            return moments
        octets = np.frombuffer(joined.encode("ascii"), dtype=np.uint8).reshape(-1, length)
        places = np.arange(len(texts))
        for _ in range(_LAYOUTS_TRIED):
            first = octets[0].tobytes().decode("ascii")
            layout = _TIME.fullmatch(first)
            if layout is None:
                break
            conforms = _conforms(octets, first)
            is_all = bool(conforms.all())
            found, is_good = _table_ms(octets if is_all else octets[conforms], layout)
            if layout["offset"] is None:
                found, is_clear = local_to_utc_ms(found, self._zone)
                is_good &= is_clear
            is_good &= (found >= EARLIEST_MS) & (found <= self._latest_ms)
            moments[places[conforms][is_good]] = found[is_good]
            if is_all:
                break
            places, octets = places[~conforms], octets[~conforms]
        return moments

    def _read_one(self, text: str) -> int | Fault:
        found = self._seen.get(text)
        if found is None:
            if len(self._seen) >= _TEXTS_REMEMBERED:
                self._seen.clear()
            found = self._seen[text] = self._parsed(text)
        return found

    def _parsed(self, text: str) -> int | Fault:
        stripped = text.strip()
        match = _TIME.fullmatch(_extended(stripped))
        if match is None:
            return _not_a_time(text, stripped)
        try:
            clock = datetime.datetime.fromisoformat(f"{match['day']}T{match['clock']}+00:00")
        except ValueError:
            return Fault("time_impossible", text, "a day and a time of day that exist")
        local_ms = (clock - _EPOCH) // datetime.timedelta(milliseconds=1)
        local_ms += int((match["fraction"] or "")[:3].ljust(3, "0"))
        if match["offset"] is None:
            return self._from_local(local_ms, text)
        offset_ms = _offset_ms(match["offset"])
        if offset_ms is None:
            return Fault("time_impossible", text, "an offset between -14:00 and +14:00")
        return self._within(local_ms - offset_ms, text)

    def _from_local(self, local_ms: int, text: str) -> int | Fault:
        before_ms, after_ms = _offsets_around(local_ms, self._zone)
        moments = {
            local_ms - offset_ms: offset_ms
            for offset_ms in (before_ms, after_ms)
            if _offset_at(local_ms - offset_ms, self._zone) == offset_ms
        }
        if len(moments) == 1:
            return self._within(next(iter(moments)), text)
        if moments:
            either = " or ".join(written(ms, moments[ms]) for ms in sorted(moments))
            return Fault("time_twice", text, f"an offset, {either}")
        meant = written(local_ms - before_ms, after_ms)
        return Fault(
            "time_skipped",
            text,
            f"a time that the clocks of {self._zone.key} showed, perhaps {meant}",
        )

    def _within(self, moment_ms: int, text: str) -> int | Fault:
        if moment_ms < EARLIEST_MS:
            return Fault("time_early", text, "a time after 1990")
        if moment_ms > self._latest_ms:
            now = written(self._now_ms, _offset_at(self._now_ms, self._zone))
            return Fault("time_future", text, f"a time up to now, {now}")
        return moment_ms


def local_to_utc_ms(local_ms: Whole, zone: ZoneInfo) -> tuple[Whole, Truth]:
    """Turn local clock times into moments, and tell which of them are clear.

    A local time belongs to a moment when the offset in force at that moment leads back to it.
    The offsets that can be in force are those a day before and a day after; where clocks are
    put forward neither leads back, where they are put back both do, and such times are not
    clear. Clocks are never changed twice within two days.
    """
    changes_ms, offsets_ms = zone_offsets(zone)
    if len(local_ms) == 0:
        return local_ms, np.zeros(0, dtype=bool)
    span = np.array([local_ms.min() - _DAY_MS, local_ms.max() + _DAY_MS])
    first, last = np.searchsorted(changes_ms, span, side="right").tolist()
    if first == last:
        return local_ms - offsets_ms[first], np.ones(len(local_ms), dtype=bool)

    def offsets_at(moments_ms: Whole) -> Whole:
        return offsets_ms[np.searchsorted(changes_ms, moments_ms, side="right")]

    before_ms, after_ms = offsets_at(local_ms - _DAY_MS), offsets_at(local_ms + _DAY_MS)
    by_before, by_after = local_ms - before_ms, local_ms - after_ms
    fits_before = offsets_at(by_before) == before_ms
    fits_after = offsets_at(by_after) == after_ms
    is_clear = np.where(before_ms == after_ms, fits_before, fits_before ^ fits_after)
    return np.where(fits_before, by_before, by_after), is_clear


@lru_cache(maxsize=8)
def zone_offsets(zone: ZoneInfo) -> tuple[Whole, Whole]:
    """Moments at which a zone's clocks are changed (UTC, ms), and the offsets between them.

    There is one offset more than there are changes. Found by asking the zone for every day
    from the end of 1989 to 2100 and halving the days on which the answer changes.
    """
    changes: list[int] = []
    start = EARLIEST_MS - 2 * _DAY_MS
    offsets = [_asked_offset_ms(start, zone)]
    for day_ms in range(start, 4_102_444_800_000, _DAY_MS):
        offset_ms = _asked_offset_ms(day_ms + _DAY_MS, zone)
        if offset_ms != offsets[-1]:
            low, high = day_ms, day_ms + _DAY_MS
            while high - low > 1000:
                middle = (low + high) // 2000 * 1000
                if _asked_offset_ms(middle, zone) == offsets[-1]:
                    low = middle
                else:
                    high = middle
            changes.append(high)
            offsets.append(offset_ms)
    return np.array(changes, dtype=np.int64), np.array(offsets, dtype=np.int64)


def _asked_offset_ms(moment_ms: int, zone: ZoneInfo) -> int:
    offset = datetime.datetime.fromtimestamp(moment_ms // 1000, zone).utcoffset()
    return (offset or datetime.timedelta()) // datetime.timedelta(milliseconds=1)


def _offset_at(moment_ms: int, zone: ZoneInfo) -> int:
    changes_ms, offsets_ms = zone_offsets(zone)
    return int(offsets_ms[np.searchsorted(changes_ms, moment_ms, side="right")])


def _offsets_around(local_ms: int, zone: ZoneInfo) -> tuple[int, int]:
    return _offset_at(local_ms - _DAY_MS, zone), _offset_at(local_ms + _DAY_MS, zone)


def written(moment_ms: int, offset_ms: int) -> str:
    """Give a moment as ISO 8601 with its offset.

    >>> written(0, 3_600_000)
    '1970-01-01T01:00:00+01:00'
    """
    zone = datetime.timezone(datetime.timedelta(milliseconds=offset_ms))
    moment = _EPOCH + datetime.timedelta(milliseconds=moment_ms)
    return moment.astimezone(zone).isoformat(timespec="seconds")


def _conforms(octets: NDArray[np.uint8], first: str) -> Truth:
    """Whether each text has digits and marks where the first one has them."""
    low = np.array([48 if c.isdigit() else ord(c) for c in first], dtype=np.uint8)
    span = np.array([9 if c.isdigit() else 0 for c in first], dtype=np.uint8)
    # What is below the lowest allowed wraps around and is far above the span.
    is_like: Truth = np.all((octets - low) <= span, axis=1)
    return is_like


def _table_ms(octets: NDArray[np.uint8], layout: re.Match[str]) -> tuple[Whole, Truth]:
    """Read a table of digits laid out alike; gives the moments and which of them exist."""

    def number(start: int, end: int) -> NDArray[np.int32]:
        total = octets[:, start].astype(np.int32) - 48
        for place in range(start + 1, end):
            total = total * 10 + (octets[:, place].astype(np.int32) - 48)
        return total

    year, month, day = number(0, 4), number(5, 7), number(8, 10)
    hour, minute = number(11, 13), number(14, 16)
    is_good = (year >= _FIRST_YEAR) & (year <= _LAST_YEAR) & (month >= 1) & (month <= 12)
    place = np.where(is_good, (year - _FIRST_YEAR) * 12 + month - 1, 0)
    starts_days, ends_days = _MONTH_STARTS_DAYS[place], _MONTH_STARTS_DAYS[place + 1]
    is_good &= (day >= 1) & (day <= ends_days - starts_days) & (hour <= 23) & (minute <= 59)
    moments = (starts_days + day - 1) * _DAY_MS + hour * _HOUR_MS + minute * _MINUTE_MS
    if layout["seconds"]:
        second = number(17, 19)
        is_good &= second <= 59
        moments += second.astype(np.int64) * 1000
    if layout["fraction"]:
        start, end = layout.start("fraction"), min(layout.end("fraction"), 23)
        moments += number(start, end).astype(np.int64) * 10 ** (3 - (end - start))
    offset = layout["offset"]
    if offset and offset not in "Zz":
        start, end = layout.start("offset"), layout.end("offset")
        offset_ms = number(start + 1, start + 3).astype(np.int64) * _HOUR_MS
        if end - start > 3:
            minutes = number(end - 2, end)
            is_good &= minutes <= 59
            offset_ms += minutes.astype(np.int64) * _MINUTE_MS
        is_good &= offset_ms <= _FARTHEST_OFFSET_MS
        moments -= offset_ms if offset[0] == "+" else -offset_ms
    return moments, is_good


def _extended(text: str) -> str:
    """Give 20260301T020000Z as 2026-03-01T02:00:00Z, and anything else as it is."""
    basic = _BASIC.fullmatch(text)
    if basic is None:
        return text
    year, month, day, hour, minute, second, fraction, offset = (
        part or "" for part in basic.groups()
    )
    clock = f"{hour}:{minute}" + (f":{second}" if second else "")
    return f"{year}-{month}-{day}T{clock}{fraction}{offset}"


def _offset_ms(offset: str) -> int | None:
    if offset in "Zz":
        return 0
    digits = offset[1:].replace(":", "").ljust(4, "0")
    offset_ms = int(digits[:2]) * _HOUR_MS + int(digits[2:]) * _MINUTE_MS
    if int(digits[2:]) > 59 or offset_ms > _FARTHEST_OFFSET_MS:
        return None
    return -offset_ms if offset[0] == "-" else offset_ms


def _not_a_time(text: str, stripped: str) -> Fault:
    if not stripped:
        return Fault("empty", text, TIME_FORM)
    if _DAY_ONLY.fullmatch(stripped):
        return Fault("time_no_clock", text, TIME_FORM)
    if _BARE_NUMBER.fullmatch(stripped):
        return Fault("time_number", text, TIME_FORM)
    return Fault("time_format", text, TIME_FORM)
