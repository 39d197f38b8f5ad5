"""Keys that stand twice in one delivery: the first row counts, another value is held."""

from typing import Any

import numpy as np
from numpy.typing import NDArray

from server.intake.rows import Rows
from server.intake.verdicts import RowFault, Verdicts


def written(value: float) -> str:
    """Write a number as it stands on a sheet: every digit that it has, and no more."""
    return f"{value:.12g}"


def settle_repeats(
    rows: Rows,
    verdicts: Verdicts,
    order: NDArray[np.int64],
    is_same_key: NDArray[np.bool_],
    column: str,
    values: NDArray[Any],
) -> NDArray[np.int64]:
    """Judge the rows whose key stood in an earlier row of the chunk; answers the other places.

    `order` sorts the rows by their keys, those with one key as they stand in the file, and
    `is_same_key` says of each but the first whether its key is that of the one before.
    `values` are compared, and `column` is the one they stand in.
    """
    repeats = np.flatnonzero(is_same_key) + 1
    if not len(repeats):
        return order
    is_repeat = np.zeros(len(order), bool)
    is_repeat[repeats] = True
    first = np.maximum.accumulate(np.where(is_repeat, 0, np.arange(len(order))))
    numbers = rows.array(column)
    for i in repeats.tolist():
        place, former = int(order[i]), int(order[first[i]])
        if values[place] == values[former]:
            verdicts.know(place)
        else:
            verdicts.hold(
                place,
                twice_in_one_delivery(
                    column,
                    written(numbers[place]),
                    written(numbers[former]),
                    int(rows.lines[former]),
                ),
            )
    return order[~is_repeat]


def twice_in_one_delivery(column: str, found: str, first: str, line: int) -> RowFault:
    """Say that the same delivery holds another value for the same key."""
    return RowFault(
        column=column,
        found=found,
        expected=first,
        reason=f"{column} stands twice in this delivery: {first} in line {line}, and {found} here.",
    )
