"""The good rows of a chunk as values."""

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from server.intake.errors import RowError

MISSING = int(np.iinfo(np.int64).min)
"""Stands in arrays of moments and of whole numbers for what is not given."""


@dataclass(frozen=True, slots=True)
class Rows:
    """The good rows of a chunk as values, and the errors of the others.

    `index` are the positions in the chunk and `lines` the line numbers of the good rows.
    Values by what the column reads: moments int64 in ms and whole numbers int64, with
    MISSING for what is not given; cells int64; sections int32, which count in the
    converter's `section_names`; numbers float64 in the unit of the sheet, NaN for what is
    not given; lists of cells a list of tuples, empty for the whole section; texts and
    choices a list of str. A column that the file does not have is all missing.
    """

    kind: str
    index: NDArray[np.int64]
    lines: NDArray[np.int64]
    columns: dict[str, NDArray[Any] | list[Any]]
    errors: list[RowError]

    def __len__(self) -> int:
        return len(self.index)

    def array(self, name: str) -> NDArray[Any]:
        """Values of a column that is an array."""
        values = self.columns[name]
        assert isinstance(values, np.ndarray)
        return values

    def items(self, name: str) -> list[Any]:
        """Values of a column that is a list."""
        values = self.columns[name]
        assert isinstance(values, list)
        return values
