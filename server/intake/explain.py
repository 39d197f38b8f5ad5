"""The words of a suspicion: what was found, what was expected, what was probably meant."""

import math
from dataclasses import dataclass
from enum import IntEnum


class SuspicionCode(IntEnum):
    """Why a reading is not believed."""

    NONE = 0
    SLIPPED_UNIT = 1
    TENFOLD = 2
    TENTH = 3
    REVERSED_LEAD = 4
    SWAPPED_DIGITS = 5
    IMPLAUSIBLE = 6
    ROW_SLIP = 7


@dataclass(frozen=True, slots=True)
class Suspicion:
    """One reading that is not believed, in words."""

    code: SuspicionCode
    reason: str
    found: str
    expected: str
    suggested: str | None


# English: what is said of a reading is stored with it.
PATTERNS: dict[SuspicionCode, str] = {
    SuspicionCode.SLIPPED_UNIT: (
        "Found {found} V, expected {expected} V; in the right unit it is {suggested} V."
    ),
    SuspicionCode.TENFOLD: (
        "Found {found} V, expected {expected} V; with the point one place to the left it is"
        " {suggested} V."
    ),
    SuspicionCode.TENTH: (
        "Found {found} V, expected {expected} V; with the point one place to the right it is"
        " {suggested} V."
    ),
    SuspicionCode.REVERSED_LEAD: (
        "Found {found} V, expected {expected} V; with the leads the right way round it is"
        " {suggested} V."
    ),
    SuspicionCode.SWAPPED_DIGITS: (
        "Found {found} V, expected {expected} V; with two neighbouring digits swapped it is"
        " {suggested} V."
    ),
    SuspicionCode.IMPLAUSIBLE: (
        "Found {found} V, expected {expected} V; no cell of this section can read that."
    ),
    SuspicionCode.ROW_SLIP: (
        "Found {found} V, expected {expected} V; this stretch of the round fits one line"
        " {direction}, where this cell reads {suggested} V."
    ),
}

SLIP_WITHOUT_VALUE = (
    "Found {found} V, expected {expected} V; this stretch of the round fits one line {direction},"
    " where this cell was not read."
)


def sentence(
    code: SuspicionCode,
    *,
    volts: float,
    expected_volts: float,
    low_volts: float = math.nan,
    high_volts: float = math.nan,
    suggested_volts: float = math.nan,
    decimals: int = 3,
    direction: str = "",
) -> Suspicion:
    """Put one suspicion into words; numbers have as many decimals as the reading had."""

    def number(value: float) -> str:
        return f"{value:.{decimals}f}"

    found = f"{volts:.{decimals}f}" if abs(volts) < 100 else f"{volts:.10g}"
    if math.isfinite(expected_volts):
        expected = f"about {number(expected_volts)}"
    elif math.isfinite(low_volts + high_volts):
        expected = f"{low_volts:g} to {high_volts:g}"
    else:
        expected = "the reading of a cell"
    suggested = number(suggested_volts) if math.isfinite(suggested_volts) else None
    pattern = PATTERNS.get(code, "{found} V is as expected.")
    if code == SuspicionCode.ROW_SLIP and suggested is None:
        pattern = SLIP_WITHOUT_VALUE
    reason = pattern.format(
        found=found, expected=expected, suggested=suggested, direction=direction
    )
    return Suspicion(code, reason, found, expected, suggested)
