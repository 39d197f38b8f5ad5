"""The period of a page, kept in its address as local days, the last one included."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date, timedelta
from urllib.parse import urlencode

from server.accounts.periods import local_date, moment_ms
from server.storage.plant import House
from server.web.i18n import gettext as _
from server.web.i18n import manner, writing
from server.web.refusals import Refused, fault

LONGEST_DAYS = 731

Preset = tuple[str, str, bool]
"""Words, address, and whether it is the one that is shown."""


@dataclass(frozen=True)
class ChosenPeriod:
    """A period as the chooser shows it, and as moments: [from_ms, to_ms)."""

    from_day: date
    to_day: date
    """The last day that is included."""
    from_ms: int
    to_ms: int
    """Its end, or now where it has not ended yet."""
    earliest: date | None
    latest: date | None
    kept: Mapping[str, str]
    """Further fields of the address, which stay as they are."""
    presets: tuple[Preset, ...]
    earlier_url: str
    later_url: str | None

    @property
    def days(self) -> int:
        """How many days there are in it."""
        return (self.to_day - self.from_day).days + 1


def chosen_period(
    house: House,
    now_ms: int,
    from_text: str | None,
    to_text: str | None,
    *,
    days: int,
    last_ms: int | None = None,
    kept: Mapping[str, str] | None = None,
) -> ChosenPeriod:
    """The period that an address asks for, by default the last `days` days with records.

    Raises
    ------
    Refused
        If a day cannot be read, the period ends before it begins, or it is too long.
    """
    zone = house.time_zone
    today = local_date(now_ms, zone)
    latest = min(today, local_date(last_ms, zone)) if last_ms is not None else today
    to_day = _day(to_text, "query.to") or latest
    from_day = _day(from_text, "query.from") or to_day - timedelta(days=days - 1)
    _checked(from_day, to_day)
    others = dict(kept or {})
    length = timedelta(days=(to_day - from_day).days + 1)
    from_ms = moment_ms(from_day, 0, zone)
    end_ms = moment_ms(to_day + timedelta(days=1), 0, zone)
    later = to_day + length
    return ChosenPeriod(
        from_day=from_day,
        to_day=to_day,
        from_ms=from_ms,
        to_ms=max(min(end_ms, now_ms), from_ms + 1),
        earliest=None,
        latest=today,
        kept=others,
        presets=tuple(
            (words, _url(start, end, others), (start, end) == (from_day, to_day))
            for words, start, end in _presets(latest)
        ),
        earlier_url=_url(from_day - length, from_day - timedelta(days=1), others),
        later_url=_url(to_day + timedelta(days=1), later, others) if to_day < today else None,
    )


def _presets(latest: date) -> list[tuple[str, date, date]]:
    """The usual periods up to the latest day with records, and its month and the one before."""
    wanted = [
        (_("%(days)s days") % {"days": days}, latest - timedelta(days=days - 1), latest)
        for days in (7, 30, 90)
    ]
    first = latest.replace(day=1)
    for _month in range(2):
        after = (first + timedelta(days=32)).replace(day=1)
        name = writing(manner().language).short_months[first.month - 1]
        wanted.append((f"{name} {first.year}", first, min(after - timedelta(days=1), latest)))
        first = (first - timedelta(days=1)).replace(day=1)
    return wanted


def _day(text: str | None, where: str) -> date | None:
    if not text:
        return None
    try:
        return date.fromisoformat(text.strip())
    except ValueError:
        what = _("This is not a day; write it as 2026-03-31.")
        raise Refused([fault(where, what, text, "YYYY-MM-DD")]) from None


def _checked(from_day: date, to_day: date) -> None:
    if not date(1990, 1, 1) <= from_day <= date(2200, 1, 1):
        what = _("There are no records of that time.")
        raise Refused([fault("query.from", what, from_day, "1990-01-01 …")])
    if to_day < from_day:
        what = _("The period ends before it begins.")
        raise Refused([fault("query.to", what, to_day, f"{from_day} …")])
    if (to_day - from_day).days >= LONGEST_DAYS:
        what = _("The period is longer than two years.")
        raise Refused([fault("query.to", what, to_day, "")])


def _url(from_day: date, to_day: date, kept: Mapping[str, str]) -> str:
    return "?" + urlencode({**kept, "from": from_day.isoformat(), "to": to_day.isoformat()})
