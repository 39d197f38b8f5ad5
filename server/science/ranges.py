"""Ranges in which a formula has been tested, and a way to ask what lies outside them."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import finite
from server.science.errors import OutOfRange


@dataclass(frozen=True)
class Range:
    """Values of one quantity, both ends included, for which a formula's source vouches.

    Outside it a formula still gives a number; whoever shows the number says that it was
    stretched. The unit is that of the quantity's name.
    """

    quantity: str
    low: float
    high: float

    def __post_init__(self) -> None:
        """Refuse a range that holds nothing."""
        if not self.low <= self.high:
            raise OutOfRange(f"{self.quantity} from", self.low, f"{self.high} or less")

    def outside(self, values: ArrayLike) -> NDArray[np.bool_]:
        """Where a number lies outside; a missing one lies nowhere, so it is not outside."""
        numbers = finite(self.quantity, values)
        return np.asarray((numbers < self.low) | (numbers > self.high))

    def holds(self, values: ArrayLike) -> NDArray[np.bool_]:
        """Where nothing speaks against the formula: inside, or the number is missing."""
        return np.asarray(~self.outside(values))

    def __str__(self) -> str:
        """Write the quantity with both ends, as in a sentence."""
        return f"{self.quantity} {self.low:g} to {self.high:g}"


def outside(ranges: Sequence[Range], **values: ArrayLike) -> tuple[Range, ...]:
    """Ranges that any of the given values leaves.

    Values whose name no range bears are left alone, and so are ranges for which no value is
    given: a caller may hand over everything it knows. Two ranges of one quantity are both held
    against it.

    Parameters
    ----------
    ranges : sequence of Range
        What the formula's source vouches for.
    **values : array_like, any shapes
        Inputs of the formula by the ranges' names of quantities, in the units of the names.

    Returns
    -------
    tuple of Range
        Those that at least one value leaves, in the order given; empty when all is well. A
        missing value (NaN) leaves none.

    Raises
    ------
    OutOfRange
        If a value is infinite.

    Source
    ------
    House rule: a formula is worked out beyond its range, and the caller is told.

    Example
    -------
    >>> tested = (Range("temperature_k", 288.15, 333.15), Range("acid_g_l", 100.0, 250.0))
    >>> [str(left) for left in outside(tested, temperature_k=[300.0, 350.0], acid_g_l=180.0)]
    ['temperature_k 288.15 to 333.15']
    """
    return tuple(
        known
        for known in ranges
        if known.quantity in values and known.outside(values[known.quantity]).any()
    )
