"""A sheet as it comes out of a file: its heading, its dialect, and its rows in chunks."""

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import overload

import numpy as np
from numpy.typing import NDArray

from server.intake.columns import SHEETS
from server.intake.dialect import Dialect
from server.intake.errors import RowError

MEBIBYTE = 1 << 20


@dataclass(frozen=True, slots=True)
class Limits:
    """How large a file and its parts may be.

    `max_bytes` stands well above two million rows of any sheet (80 MB of volts.csv) and
    well below what would fill a disk. The next four are about workbooks, which are unpacked
    into memory: 64 MiB of worksheet hold some 400,000 rows of voltages, and who has more has
    CSV. Real workbooks pack 5 to 20 times, the emptiest perhaps 100 times; a bomb, thousands
    of times. A worksheet of 4.5 million cells is the longest that Excel allows with four
    columns.
    """

    max_bytes: int = 256 * MEBIBYTE
    max_unpacked_bytes: int = 64 * MEBIBYTE
    max_pack_ratio: float = 200.0
    max_entries: int = 1000
    max_worksheet_cells: int = 4_500_000
    max_line_bytes: int = 65_536
    max_field_chars: int = 4000


class RawLines(Sequence[str]):
    """The lines of a text, taken apart only when somebody asks for one."""

    def __init__(self, text: str) -> None:
        self._text = text
        self._lines: list[str] | None = None

    def _split(self) -> list[str]:
        if self._lines is None:
            self._lines = self._text.split("\n")
        return self._lines

    def __len__(self) -> int:
        return self._text.count("\n") + 1 if self._lines is None else len(self._lines)

    @overload
    def __getitem__(self, index: int) -> str: ...
    @overload
    def __getitem__(self, index: slice) -> list[str]: ...
    def __getitem__(self, index: int | slice) -> str | list[str]:
        return self._split()[index]


@dataclass(frozen=True, slots=True)
class Chunk:
    """Some rows of a sheet, as text.

    `lines` are the numbers of the first line of each row, from 1; `columns` hold one text
    for each row, by the contract's names; `raw` are the rows word for word. Rows that could
    not even be taken apart are in `errors` and not among the others. `bytes_read` says how
    far the file has been read, for a progress bar.
    """

    lines: NDArray[np.int64]
    columns: dict[str, list[str]]
    raw: Sequence[str]
    errors: tuple[RowError, ...] = ()
    bytes_read: int = 0

    def __len__(self) -> int:
        return len(self.lines)

    def fields(self, position: int) -> dict[str, str]:
        """Text of one row by column."""
        return {name: texts[position] for name, texts in self.columns.items()}


@dataclass(frozen=True, slots=True)
class Sheet:
    """One sheet of the contract, found in a file and not yet read.

    `chunks()` reads it from the start, each time it is called; only one reading of a file
    can go on at a time.
    """

    file: str
    kind: str
    header: tuple[str, ...]
    header_line: int
    columns: tuple[str, ...]
    unknown_columns: tuple[str, ...]
    dialect: Dialect
    size_bytes: int
    worksheet: str | None
    _read: Callable[[], Iterator[Chunk]] = field(repr=False)

    def chunks(self) -> Iterator[Chunk]:
        """Read the rows, some thousands at a time.

        Raises
        ------
        FileRefused
            When something is met on the way that makes the whole file unreadable.
        """
        return self._read()


@dataclass(frozen=True, slots=True)
class SheetFile:
    """An opened file with the sheets found in it; a CSV file always holds one.

    `ignored` says in a sentence each which worksheets are left unread, and why.
    """

    name: str
    size_bytes: int
    sheets: tuple[Sheet, ...]
    ignored: tuple[str, ...] = ()


def records_chunk(
    kind: str, records: Sequence[Mapping[str, object]], *, file: str = "API"
) -> Chunk:
    """Give records that came as JSON as a chunk, so that they meet the same checks as a file.

    Numbers are written with a decimal point; what is absent or null is empty. The line of a
    record is its place in the list, from 1.
    """
    names = SHEETS[kind].names
    columns = {name: [_record_text(record.get(name)) for record in records] for name in names}
    raw = [
        ", ".join(f"{name}: {_record_text(value)}" for name, value in record.items())
        for record in records
    ]
    return Chunk(np.arange(1, len(records) + 1, dtype=np.int64), columns, raw)


def _record_text(value: object) -> str:
    if value is None:
        return ""
    if isinstance(value, float) and value.is_integer() and abs(value) < 1e15:
        return str(int(value))
    return value if isinstance(value, str) else str(value)
