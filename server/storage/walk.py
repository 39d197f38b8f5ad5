"""The order in which a section's cells are walked, as its terms give it."""

import re

from server.storage.plant import SectionTerms

SNAKE = "snake"
"""Every second row is walked backwards."""

_RANGE = re.compile(r"(\d+)(?:-(\d+))?")


def walking_order(terms: SectionTerms) -> tuple[int, ...]:
    """Numbers of the section's cells in the order in which they are walked.

    Cells that a list leaves out come last, by number.
    """
    listed = read_walk_order(terms.walk_order, terms.cells, terms.rows)
    return (*listed, *sorted(set(range(1, terms.cells + 1)) - set(listed)))


def read_walk_order(text: str, cells: int, rows: int) -> tuple[int, ...]:
    """Cells in the order in which a text names them.

    Nothing means by number, "snake" every second row backwards, and otherwise it is a list of
    cells and ranges, such as "1-24;48-25", in which a range may run backwards.

    Raises
    ------
    ValueError
        When it is none of these, or names a cell twice or one that there is not.
    """
    wanted = text.strip().casefold()
    if not wanted:
        return tuple(range(1, cells + 1))
    if wanted == SNAKE:
        return _snake(cells, rows)
    order: list[int] = []
    for piece in re.split("[;,]", wanted):
        match = _RANGE.fullmatch(piece.strip())
        if match is None:
            raise ValueError(f"“{piece.strip()}” is not a cell or a range of cells")
        first, last = int(match[1]), int(match[2] or match[1])
        if min(first, last) < 1 or max(first, last) > cells:
            raise ValueError(f"“{piece.strip()}” goes beyond the cells 1 to {cells}")
        order.extend(range(first, last + 1) if last >= first else range(first, last - 1, -1))
    if len(set(order)) != len(order):
        raise ValueError("a cell is named twice")
    return tuple(order)


def _snake(cells: int, rows: int) -> tuple[int, ...]:
    length = -(-cells // rows)
    order: list[int] = []
    for row, first in enumerate(range(1, cells + 1, length)):
        numbers = range(first, min(first + length, cells + 1))
        order.extend(numbers if row % 2 == 0 else reversed(numbers))
    return tuple(order)
