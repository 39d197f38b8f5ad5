"""Texts of the calculator in the reader's language, with its numbers and days."""

import math

from server.calculator.inputs import InputFault
from server.calculator.texts import Day, Part, Said, Word
from server.web.filters import THIN_SPACE, UNIT_SPACE, day, no_data, number
from server.web.i18n import gettext as _

_DIGITS = 6
_MOST_DECIMALS = 9
_DIGITS_OF_DOUBT = 2


def told(said: Said) -> str:
    """A text with what stands in its places."""
    text = _(said.text)
    if not said.parts:
        return text
    return text % {name: _part(part) for name, part in said.parts.items()}


def fault_told(fault: InputFault) -> str:
    """What is wrong and what was expected, as one or two sentences."""
    what = told(fault.what)
    if fault.expected is None:
        return what
    return what + " " + _("Expected %(expected)s.") % {"expected": told(fault.expected)}


def unbroken(text: str) -> str:
    """A working with its numbers kept whole where a line ends."""
    return text.replace(THIN_SPACE, UNIT_SPACE)


def figures(value: float, digits: int = _DIGITS) -> str:
    """A number with this many digits and no zeros at its end."""
    if not math.isfinite(value):
        return no_data()
    if value == 0:
        return number(0)
    decimals = min(max(digits - 1 - math.floor(math.log10(abs(value))), 0), _MOST_DECIMALS)
    shown = round(value, decimals)
    while decimals and round(shown, decimals - 1) == shown:
        decimals -= 1
    return number(value, decimals)


def decimals_of(value: float, u: float, digits: int = _DIGITS) -> int:
    """Decimals that a value deserves: two digits of its doubt, or so many where it has none."""
    if math.isfinite(u) and u > 0:
        return min(max(_DIGITS_OF_DOUBT - 1 - math.floor(math.log10(u)), 0), _MOST_DECIMALS)
    if value == 0 or not math.isfinite(value):
        return 0
    return min(max(digits - 1 - math.floor(math.log10(abs(value))), 0), _MOST_DECIMALS)


def _part(part: Part) -> str:
    if isinstance(part, Day):
        return day(part.at_ms)
    if isinstance(part, Word):
        return _(part.text)
    return part if isinstance(part, str) else figures(float(part))
