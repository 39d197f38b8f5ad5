"""Moments that stand in an address or a form, with the tankhouse's zone where none is named."""

import re
from zoneinfo import ZoneInfo

from server.intake.errors import row_reason
from server.intake.times import EARLIEST_MS, TimeReader
from server.storage.plant import House
from server.web.i18n import gettext as _
from server.web.refusals import Refused, fault

_DAY_ONLY = re.compile(r"\d{4}-\d{2}-\d{2}")
_LOST_PLUS = re.compile(r"(?<=\d) (?=\d{2}:?\d{2}$)")
"""A plus sign that was put into an address as it is, and arrives as a blank."""

_NO_END_MS = 2**52
_LONGEST_MS = 100 * 366 * 86_400_000


def moment_of(text: str, house: House, where: str) -> int:
    """The moment of a text: ISO 8601 with an offset, the tankhouse's local time, or a local day.

    A day alone means its midnight. Before 1990 there are no records, so that any earlier moment
    is as good as the first of that year.

    Raises
    ------
    Refused
        If it is no time, or a local time that never came or came twice; `where` names the place.
    """
    asked = text.strip()
    written = f"{asked}T00:00" if _DAY_ONLY.fullmatch(asked) else asked
    if len(written) > 16:
        written = _LOST_PLUS.sub("+", written)
    moments, faults = TimeReader(ZoneInfo(house.time_zone), _NO_END_MS).read([written])
    if not faults:
        return int(moments[0])
    found = faults[0]
    if found.code == "time_early":
        return EARLIEST_MS
    name = where.rpartition(".")[2]
    what = row_reason(found.code, column=name, found=text, expected=found.expected)
    raise Refused([fault(where, what, text, found.expected)])


def span_of(from_text: str, to_text: str, house: House) -> tuple[int, int]:
    """The stretch of time, [from_ms, to_ms), of the parameters `from` and `to` of an address.

    Raises
    ------
    Refused
        If either cannot be read, if it ends before it begins, or if it is longer than a century.
    """
    from_ms = moment_of(from_text, house, "query.from")
    to_ms = moment_of(to_text, house, "query.to")
    span_checked(from_ms, to_ms, to_text)
    return from_ms, to_ms


def span_checked(from_ms: int, to_ms: int, to_text: str) -> None:
    """Refuse a stretch of time that ends before it begins, or is longer than a century."""
    if to_ms <= from_ms:
        what = _("The time ends before it begins.")
        raise Refused([fault("query.to", what, to_text, _("a moment after `from`"))])
    if to_ms - from_ms > _LONGEST_MS:
        what = _("The time is longer than a century.")
        raise Refused([fault("query.to", what, to_text, _("at most a century after `from`"))])
