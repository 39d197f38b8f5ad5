"""What a sum asks for: each input with its unit, and the numbers that it can take."""

import re
from dataclasses import dataclass
from math import isfinite

from server.calculator.texts import N_, Said

U_PREFIX = "u_"
"""Begins the key of an input's own standard uncertainty."""

_BETWEEN_DIGITS = re.compile(r"(?<=\d)[ \u00a0\u2009\u202f'](?=\d{3}(?:\D|$))")
_NUMBER = re.compile(r"[+-]?(\d+([.,]\d*)?|[.,]\d+)([eE][+-]?\d{1,3})?", re.ASCII)
_LONGEST = 40
_TINIEST = 1e-9
"""What is smaller and not zero is a slip of the pen in every unit here."""


@dataclass(frozen=True)
class Input:
    """One number that a sum is worked out of.

    Numbers from `low` to `high` are taken, others refused: they cannot be, or are a slip of the
    pen. What is merely unusual is taken and said beside the result.
    """

    key: str
    """Name in an address, with the unit at its end as on the sheets."""
    label: str
    unit: str
    low: float
    high: float
    is_above: bool = False
    """Whether `low` itself is too low."""
    is_needed: bool = True
    """Whether the sum has no answer without it."""
    has_doubt: bool = True
    """Whether it may carry a standard uncertainty of its own."""
    hint: str = ""
    replaces: tuple[str, ...] = ()
    """Keys of inputs that are not needed where this one is known."""

    @property
    def u_key(self) -> str | None:
        """Key of its standard uncertainty, in the same unit."""
        return f"{U_PREFIX}{self.key}" if self.has_doubt else None

    @property
    def expected(self) -> Said:
        """What it takes, in words."""
        text = (
            N_("a number above %(low)s, up to %(high)s %(unit)s")
            if self.is_above
            else N_("a number from %(low)s to %(high)s %(unit)s")
        )
        return Said(text, {"low": self.low, "high": self.high, "unit": self.unit})

    @property
    def expected_u(self) -> Said:
        """What its standard uncertainty takes, in words."""
        text = N_("a standard uncertainty from 0 to %(high)s %(unit)s")
        return Said(text, {"high": self.high - self.low, "unit": self.unit})

    def takes(self, value: float) -> bool:
        """Whether the quantity can have this value."""
        if 0 < abs(value) < _TINIEST:
            return False
        return (self.low < value if self.is_above else self.low <= value) and value <= self.high

    def takes_u(self, value: float) -> bool:
        """Whether its standard uncertainty can have this value."""
        return 0 <= value <= self.high - self.low


@dataclass(frozen=True)
class InputFault:
    """One thing in what was given that cannot be taken."""

    key: str
    what: Said
    found: str = ""
    expected: Said | None = None


class InputsWrong(Exception):
    """What was given to a sum cannot be worked with; every fault at once."""

    def __init__(self, faults: list[InputFault]) -> None:
        self.faults = faults
        super().__init__(", ".join(fault.key for fault in faults))


def number_of(text: str) -> float | None:
    """The number that somebody typed, with a decimal point or comma; None where it is none.

    Thousands may be parted by spaces. With both a point and a comma nobody can be sure which is
    the decimal sign, and the text is no number.

    >>> number_of("1 850,5"), number_of("1,234.5")
    (1850.5, None)
    """
    typed = text.strip().replace("\u2212", "-")
    typed = _BETWEEN_DIGITS.sub("", typed)
    if len(typed) > _LONGEST or not _NUMBER.fullmatch(typed):
        return None
    value = float(typed.replace(",", "."))
    return value if isfinite(value) else None
