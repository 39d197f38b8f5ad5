"""What stands in for an input that nobody typed, and how sure a number is by default."""

import math
from dataclasses import dataclass

from server.calculator.texts import Said


@dataclass(frozen=True)
class Filled:
    """A value that is filled in, and where it is from."""

    value: float
    origin: Said


@dataclass(frozen=True)
class Doubt:
    """Standard uncertainty of a quantity: a share of its value, and a part that is always there."""

    origin: Said
    share: float = 0.0
    always: float = 0.0

    def of(self, value: float) -> float:
        """Standard uncertainty of a value of the quantity, in its unit; three digits of it."""
        return rounded(math.hypot(self.share * value, self.always), 3)


def rounded(value: float, digits: int = 6) -> float:
    """A number cut to what is shown of it, so that a sum can be followed from what is seen."""
    if value == 0 or not math.isfinite(value):
        return value
    return round(value, digits - 1 - math.floor(math.log10(abs(value))))
