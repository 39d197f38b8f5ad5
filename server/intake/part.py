"""One XML part of a workbook, looked through for what a reader would make of it.

A few bytes can ask for a table of seventeen thousand million cells (one cell in each of two
corners, since readers lay the table out in full), or for one long text a million times (since
readers copy a shared text into every cell that shows it). Both are counted here first.
"""

import re
from collections.abc import Sequence
from xml.parsers import expat

from server.intake.chunks import MEBIBYTE, Limits
from server.intake.errors import FileRefused, shown

_LONGEST_TEXT = 32_767
"""Excel's own limit for the text of one cell."""

_REFERENCE = re.compile(r"([A-Z]{1,3})([0-9]{1,7})")
_ANY_CELL = re.compile(rb"<(?:[^\s<>/:]+:)?c[\s/>]")
_PLAIN_CELL = re.compile(rb'<c r="([A-Z]{1,3})([0-9]{1,7})"')
_PLAIN_ROW = re.compile(rb'<row r="')
_ANY_PLACE = re.compile(rb"""[\s"']r\s*=""")
_SHARED_CELL = re.compile(rb"""\bt\s*=\s*["']s["']""")
_SHARED_TEXT = re.compile(rb"<(?:[^\s<>/:]+:)?si[\s/>]")


def check_part(content: bytes, texts: Sequence[int], *, file: str, limits: Limits) -> list[int]:
    """Refuse a part that asks for more than a sheet needs.

    `texts` are the lengths of the workbook's shared texts; gives the lengths of those that
    this part defines, which is none for any but one part.

    Raises
    ------
    FileRefused
        When it does.
    ExpatError
        When it is not well-formed XML in UTF-8.
    """
    if _is_plainly_small(content, texts, file=file, limits=limits):
        return []
    walk = _Walk(file=file, limits=limits, texts=texts)
    walk.through(content)
    return walk.text_lengths


def _is_plainly_small(content: bytes, texts: Sequence[int], *, file: str, limits: Limits) -> bool:
    """Tell quickly whether a worksheet as Excel writes it stays within the limits.

    Such a part has no declarations, comments or CDATA, so that every `<` opens or closes an
    element, and names the place of every cell in the same way; then its cells can be counted
    as text, ten times faster than by walking through it. Whatever is written differently, or
    may show too much text, is walked through.
    """
    cells = len(_ANY_CELL.findall(content))
    if not cells or b"<!" in content or _SHARED_TEXT.search(content):
        return False
    places = _PLAIN_CELL.findall(content)
    rows_named = len(_PLAIN_ROW.findall(content))
    if len(places) != cells or len(_ANY_PLACE.findall(content)) != cells + rows_named:
        return False
    columns, rows = {column for column, _ in places}, {row for _, row in places}
    last_column = max(column_number(column.decode()) for column in columns)
    check_table(max(map(int, rows)), last_column, file=file, limits=limits)
    shared = len(_SHARED_CELL.findall(content))
    return shared * max(texts, default=0) <= limits.max_unpacked_bytes


def check_table(rows: int, columns: int, *, file: str, limits: Limits) -> None:
    """Refuse a worksheet whose cells span too large a table."""
    if rows * columns > limits.max_worksheet_cells:
        raise FileRefused(
            "workbook_swells",
            file=file,
            found=f"a worksheet of {rows} rows by {columns} columns",
            expected=(
                f"at most {limits.max_worksheet_cells} cells, counted from the first row and column"
            ),
        )


def column_number(letters: str) -> int:
    """Number of a column by its letters.

    >>> column_number("A"), column_number("AB")
    (1, 28)
    """
    number = 0
    for letter in letters:
        number = number * 26 + ord(letter) - 64
    return number


def swells(found: str, *, file: str, limits: Limits) -> FileRefused:
    """Say that a workbook is larger than it may be, by whatever measure."""
    return FileRefused(
        "workbook_swells",
        file=file,
        found=found,
        expected=(
            f"at most {limits.max_unpacked_bytes // MEBIBYTE} MiB,"
            f" {limits.max_pack_ratio:.0f} times its size and {limits.max_entries} parts;"
            " bring larger sheets as CSV"
        ),
    )


class _Walk:
    """One walk through the XML of a part, counting what a reader would make of it.

    Counted are the table that the cells span (readers lay it out in full, blank cells
    too), and the text that its cells show (readers copy a shared text into every cell).
    """

    def __init__(self, *, file: str, limits: Limits, texts: Sequence[int]) -> None:
        self._file = file
        self._limits = limits
        self._texts = texts
        self.text_lengths: list[int] = []
        self._row = self._column = self._last_row = self._last_column = 0
        self._shown_bytes = 0
        self._is_shared = False
        self._collecting: list[str] | None = None

    def through(self, content: bytes) -> None:
        """Walk from end to end."""
        # Whatever the part declares, it is read as UTF-8, as the reader of worksheets does.
        if content.startswith((b"\xff\xfe", b"\xfe\xff")):
            raise expat.ExpatError("it is not UTF-8")
        parser = expat.ParserCreate("utf-8")
        parser.buffer_text = True
        parser.StartElementHandler = self._start
        parser.EndElementHandler = self._end
        parser.CharacterDataHandler = self._text
        parser.StartDoctypeDeclHandler = self._doctype
        parser.Parse(content, True)

    def _doctype(self, *_: object) -> None:
        raise FileRefused(
            "workbook_unsafe",
            file=self._file,
            found="a document type declaration",
            expected="plain XML",
        )

    def _start(self, tag: str, attributes: dict[str, str]) -> None:
        name = tag.rpartition(":")[2]
        if name == "c":
            self._at_cell(attributes)
        elif name == "row":
            given = attributes.get("r", "")
            self._row = self._number(given) if given else self._row + 1
            self._column = 0
        elif name == "v" or name == "si":
            self._collecting = []

    def _at_cell(self, attributes: dict[str, str]) -> None:
        column, row = self._column + 1, self._row
        if reference := attributes.get("r", ""):
            column, row = self._place(reference)
        self._row, self._column = row, column
        self._is_shared = attributes.get("t") == "s"
        self._last_row = max(self._last_row, row)
        self._last_column = max(self._last_column, column)
        check_table(self._last_row, self._last_column, file=self._file, limits=self._limits)

    def _text(self, text: str) -> None:
        if self._collecting is not None:
            self._collecting.append(text)

    def _end(self, tag: str) -> None:
        name = tag.rpartition(":")[2]
        if name == "v" and self._collecting is not None:
            self._weigh("".join(self._collecting))
            self._collecting = None
        elif name == "si" and self._collecting is not None:
            length = sum(map(len, self._collecting))
            if length > _LONGEST_TEXT:
                raise self._too_much(f"a text of {length} characters")
            self.text_lengths.append(length)
            self._collecting = None

    def _weigh(self, value: str) -> None:
        if not self._is_shared:
            return
        place = self._number(value.strip())
        if place < len(self._texts):
            self._shown_bytes += self._texts[place]
        if self._shown_bytes > self._limits.max_unpacked_bytes:
            raise self._too_much(f"more than {self._shown_bytes // MEBIBYTE} MiB of text")

    def _too_much(self, found: str) -> FileRefused:
        return swells(found, file=self._file, limits=self._limits)

    def _number(self, text: str) -> int:
        if not (text.isascii() and text.isdigit() and len(text) < 10):
            raise self._strange(text)
        return int(text)

    def _place(self, reference: str) -> tuple[int, int]:
        """Column and row of a reference such as `AB12`."""
        found = _REFERENCE.fullmatch(reference)
        if not found:
            raise self._strange(reference)
        return column_number(found[1]), int(found[2])

    def _strange(self, found: str) -> FileRefused:
        return FileRefused(
            "workbook_damaged",
            file=self._file,
            found=f"the cell reference “{shown(found)}”",
            expected="references such as A1",
        )
