"""Lists of cells such as "1-12;15", to numbers and back."""

import re
from collections.abc import Iterable
from functools import lru_cache

from server.intake.errors import CellsWrong, Fault

CELLS_FORM = "cell numbers and ranges such as 1-12;15"

LARGEST_CELL = 100_000
"""No section has so many cells; a range up to more would only fill the memory."""

# Dashes that word processors put in place of a hyphen are taken for one.
_PIECE = re.compile(r"(\d{1,9})(?:\s*[-\u2010-\u2015\u2212]\s*(\d{1,9}))?", re.ASCII)
_DATE = re.compile(
    r"\d{4}-\d{2}-\d{2}(?:[T ].*)?"
    r"|\d{1,2}[-./ ](?:jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)\w*\.?(?:[-./ ]\d{2,4})?"
    r"|(?:jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)\w*[-./ ]\d{1,4}",
    re.IGNORECASE,
)


@lru_cache(maxsize=10_000)
def parse_cells(text: str, cells: int | None = None) -> tuple[int, ...]:
    """Read a list of cells; the numbers come sorted.

    Pieces are separated by semicolons, or by commas. `cells` is the number of cells of the
    section, where it is known. An empty list is an empty tuple: whether that may be, and
    that it means all cells, is for the sheet to say.

    Raises
    ------
    CellsWrong
        When a piece is neither a number nor a range, a range runs backwards, or a cell is
        named twice, is 0, or lies beyond the section's last.

    Example
    -------
    >>> parse_cells("15; 1-4")
    (1, 2, 3, 4, 15)
    """
    if _DATE.fullmatch(text.strip()):
        raise CellsWrong(Fault("cells_date", text, f"{CELLS_FORM}, in a column formatted as text"))
    last = LARGEST_CELL if cells is None else cells
    pieces = [piece.strip() for piece in re.split("[;,]", text)]
    found: set[int] = set()
    if pieces == [""]:
        return ()
    for piece in pieces:
        for number in _range_of(piece, text, last):
            if number in found:
                raise CellsWrong(Fault("cells_twice", str(number), "each cell once"))
            found.add(number)
    return tuple(sorted(found))


def _range_of(piece: str, text: str, last: int) -> range:
    match = _PIECE.fullmatch(piece)
    if match is None:
        raise CellsWrong(Fault("cells_format", text, CELLS_FORM))
    first, end = int(match[1]), int(match[2] or match[1])
    if end < first:
        raise CellsWrong(Fault("cells_reversed", piece, f"{end}-{first}"))
    if first == 0:
        raise CellsWrong(Fault("cells_zero", piece, "cells numbered from 1"))
    if end > last:
        raise CellsWrong(
            Fault("cells_beyond", str(max(first, last + 1)), f"cells from 1 to {last}")
        )
    return range(first, end + 1)


def cells_text(cells: Iterable[int]) -> str:
    """Write a list of cells in the shortest form, which is the same for the same cells.

    Two neighbours are written as a range too, so that there is only one way.

    Example
    -------
    >>> cells_text([15, 1, 2, 3, 7, 8])
    '1-3;7-8;15'
    """
    runs: list[tuple[int, int]] = []
    for number in sorted(set(cells)):
        if runs and runs[-1][1] == number - 1:
            runs[-1] = (runs[-1][0], number)
        else:
            runs.append((number, number))
    return ";".join(str(a) if a == b else f"{a}-{b}" for a, b in runs)
