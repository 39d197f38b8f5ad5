"""How numbers, shares, masses, energies and moments are written on a page.

Every filter writes 'no data' for None and NaN. Thousands are parted by a thin space, a figure and
its unit by a thin no-break space; the decimal sign is the one of the language. Quantities come in
SI units and leave in the plant's.
"""

import re
from collections.abc import Callable
from datetime import date, datetime
from math import isfinite
from typing import Any

from markupsafe import Markup

from server.clock import as_datetime
from server.science import units
from server.web.i18n import gettext as _
from server.web.i18n import manner, ngettext, writing

THIN_SPACE = "\u2009"
UNIT_SPACE = "\u202f"
MINUS = "\u2212"

Quantity = float | int | None

MARKS = {"low": "\u25bc", "high": "\u25b2", "look": "\u25cf"}
"""A mark beside the words, so that no meaning hangs on colour alone."""

_DIRECTIONS = {
    "short": "low",
    "drift low": "low",
    "drift high": "high",
    "suspect reading": "look",
    "no reading": "look",
}


def no_data() -> str:
    """The words that stand where a number is missing."""
    return _("no data")


def number(value: Quantity, decimals: int = 0, unit: str = "") -> str:
    """A number with this many decimals, and its unit where the heading does not say it."""
    if value is None or not isfinite(value):
        return no_data()
    text = f"{abs(value):,.{decimals}f}"
    is_negative = value < 0 and float(text.replace(",", "")) != 0
    whole, _point, part = text.partition(".")
    whole = whole.replace(",", THIN_SPACE)
    sign = MINUS if is_negative else ""
    point = writing(manner().language).decimal_sign if part else ""
    return sign + whole + point + part + (UNIT_SPACE + unit if unit else "")


def signed(value: Quantity, decimals: int = 0, unit: str = "") -> str:
    """A difference: as `number`, with a plus sign where it is above zero."""
    text = number(value, decimals, unit)
    is_above = value is not None and isfinite(value) and round(value, decimals) > 0
    return f"+{text}" if is_above else text


def doubt(value: Quantity, decimals: int = 0, unit: str = "") -> str:
    """A standard uncertainty with its sign; nothing at all where it is not known."""
    if value is None or not isfinite(value):
        return ""
    return f"±{UNIT_SPACE}{number(value, decimals, unit)}"


def percent(share: Quantity, decimals: int = 1, unit: str = "") -> str:
    """A share, 0 to 1, in per cent; the sign only where it is asked for as the unit."""
    return number(None if share is None else units.percent_from_share(share), decimals, unit)


def kg(mass_kg: Quantity, decimals: int = 0, unit: str = "") -> str:
    """A mass in kilograms."""
    return number(mass_kg, decimals, unit)


def tonnes(mass_kg: Quantity, decimals: int = 1, unit: str = "") -> str:
    """A mass in tonnes."""
    return number(None if mass_kg is None else units.tonnes_from_kg(mass_kg), decimals, unit)


def kwh(energy_j: Quantity, decimals: int = 0, unit: str = "") -> str:
    """An energy in kilowatt-hours."""
    return number(None if energy_j is None else units.kwh_from_joules(energy_j), decimals, unit)


def kwh_t(energy_j_kg: Quantity, decimals: int = 0, unit: str = "") -> str:
    """A specific energy in kilowatt-hours a tonne."""
    return number(
        None if energy_j_kg is None else units.kwh_t_from_j_kg(energy_j_kg), decimals, unit
    )


def ka(amps: Quantity, decimals: int = 1, unit: str = "") -> str:
    """A current in kiloamperes."""
    return number(None if amps is None else units.ka_from_amps(amps), decimals, unit)


def kah(charge_c: Quantity, decimals: int = 1, unit: str = "") -> str:
    """A charge in kiloampere-hours."""
    return number(None if charge_c is None else units.kah_from_coulombs(charge_c), decimals, unit)


def millivolts(volts: Quantity, decimals: int = 0, unit: str = "") -> str:
    """A difference of voltages in millivolts, with its sign."""
    return signed(None if volts is None else units.millivolts_from_volts(volts), decimals, unit)


def money(value: Quantity, decimals: int = 0, currency: str = "") -> str:
    """An amount of money, the currency's code after it."""
    return number(value, decimals, currency)


def moment(at_ms: int | None, style: str = "minute") -> str:
    """A moment on the tankhouse's clock: 'Tue 3 Mar 2026 04:12'.

    `style` is 'minute', 'second' or 'short' (no year). In the hour that the clock shows twice the
    offset stands beside it.
    """
    if at_ms is None:
        return no_data()
    at = as_datetime(at_ms, manner().zone)
    time = at.strftime("%H:%M:%S" if style == "second" else "%H:%M")
    return f"{_date(at, with_year=style != 'short')} {time}{_which_of_two(at)}"


def clock(at_ms: int | None) -> str:
    """The time of day alone, '04:12'."""
    if at_ms is None:
        return no_data()
    at = as_datetime(at_ms, manner().zone)
    return at.strftime("%H:%M") + _which_of_two(at)


def day(on: int | date | None) -> str:
    """A day, 'Tue 3 Mar 2026', from a moment or a date."""
    if on is None:
        return no_data()
    return _date(as_datetime(on, manner().zone) if isinstance(on, int) else on)


def iso(at_ms: int) -> str:
    """The moment for machines, with the zone's offset: the datetime of a time element."""
    return as_datetime(at_ms, manner().zone).isoformat(timespec="seconds")


def moment_typed(at: int | str | None) -> str:
    """A moment as a field of type datetime-local takes it; what was typed stays as it was."""
    if at is None or isinstance(at, str):
        return at or ""
    return as_datetime(at, manner().zone).strftime("%Y-%m-%dT%H:%M")


def day_typed(on: int | date | str | None) -> str:
    """A day as a field of type date takes it; what was typed stays as it was."""
    if on is None or isinstance(on, str):
        return on or ""
    return (as_datetime(on, manner().zone).date() if isinstance(on, int) else on).isoformat()


def number_typed(value: Quantity | str) -> str:
    """A number as a field takes it: decimal point, no spaces, all digits; what was typed stays."""
    if isinstance(value, str):
        return value
    if value is None or not isfinite(value):
        return ""
    return str(int(value)) if float(value).is_integer() else repr(float(value))


def duration(length_ms: Quantity) -> str:
    """A length of time in the two largest units that matter: '2 d 4 h', '35 min'."""
    if length_ms is None or not isfinite(length_ms):
        return no_data()
    minutes = round(length_ms / 60_000)
    days, minutes = divmod(minutes, 1440)
    hours, minutes = divmod(minutes, 60)
    parts = [(days, _("d")), (hours, _("h")), (minutes, _("min"))]
    told = [f"{count}{UNIT_SPACE}{unit}" for count, unit in parts if count][:2]
    return " ".join(told) or f"0{UNIT_SPACE}{_('min')}"


def ago(at_ms: int | None, now_ms: int) -> str:
    """How long before now a moment lies, in words."""
    if at_ms is None:
        return no_data()
    return _("%(length)s ago") % {"length": duration(now_ms - at_ms)}


def count(how_many: int, one: str, many: str) -> str:
    """A count with its noun, both forms given already translated: '3 cells'."""
    return f"{number(how_many)} {one if how_many == 1 else many}"


def cells_list(numbers: list[int]) -> str:
    """Cell numbers with their runs drawn together: '1–12, 15'."""
    runs: list[list[int]] = []
    for cell in sorted(set(numbers)):
        if runs and cell == runs[-1][1] + 1:
            runs[-1][1] = cell
        else:
            runs.append([cell, cell])
    return ", ".join(str(a) if a == b else f"{a}–{b}" for a, b in runs)


def flag_direction(kind: str) -> str:
    """Whether a kind of flag is low, high, or something to look at."""
    return _DIRECTIONS.get(kind, "look")


def flag_words(kind: str) -> str:
    """The kind of a flag in the reader's language."""
    words = {
        "short": _("short"),
        "drift high": _("drifting high"),
        "drift low": _("drifting low"),
        "suspect reading": _("suspect reading"),
        "no reading": _("no reading"),
    }
    return words.get(kind, kind)


def zone_words(zone: str) -> str:
    """Whose clock it is, in short: 'Santiago time'; the zone's own name where it has no place."""
    area, _slash, place = zone.rpartition("/")
    if not area or area == "Etc":
        return zone
    return _("%(place)s time") % {"place": place.replace("_", " ")}


def readings_count(how_many: int) -> str:
    """How many readings, in words."""
    return ngettext("%(num)s reading", "%(num)s readings", how_many) % {"num": number(how_many)}


def breakable(text: str) -> Markup:
    """A long name with places where it may break: after a slash, a dot or an underscore."""
    return Markup("<wbr>").join(re.split(r"(?<=[/._-])", text))


def _date(on: date, with_year: bool = True) -> str:
    names = writing(manner().language)
    year = f" {on.year}" if with_year else ""
    return f"{names.short_days[on.weekday()]} {on.day} {names.short_months[on.month - 1]}{year}"


def _which_of_two(at: datetime) -> str:
    """The offset, where the clock on the wall shows this time twice; else nothing."""
    if at.replace(fold=0).utcoffset() == at.replace(fold=1).utcoffset():
        return ""
    offset = at.strftime("%z")
    return f" (UTC{offset[:3]}:{offset[3:]})".replace("-", MINUS)


FILTERS: dict[str, Callable[..., Any]] = {
    "number": number,
    "signed": signed,
    "doubt": doubt,
    "percent": percent,
    "kg": kg,
    "tonnes": tonnes,
    "kwh": kwh,
    "kwh_t": kwh_t,
    "ka": ka,
    "kah": kah,
    "millivolts": millivolts,
    "money": money,
    "moment": moment,
    "clock": clock,
    "day": day,
    "iso": iso,
    "moment_typed": moment_typed,
    "day_typed": day_typed,
    "number_typed": number_typed,
    "duration": duration,
    "ago": ago,
    "count_of": count,
    "cells_list": cells_list,
    "flag_direction": flag_direction,
    "flag_words": flag_words,
    "readings_count": readings_count,
    "breakable": breakable,
    "zone_words": zone_words,
}
