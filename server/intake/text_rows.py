"""A block of a CSV file taken apart into rows: the quick way, or row by row where it must be."""

import csv
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

import numpy as np

from server.intake.chunks import Chunk, Limits, RawLines
from server.intake.errors import RowError, row_error

LINES_IN_A_ROW = 20
"""A remark may run over some lines. A quotation mark that is not closed within as many was
never meant to open anything, and must not swallow the rows after it."""


@dataclass(frozen=True, slots=True)
class Layout:
    """What is needed to take rows of one file apart."""

    file: str
    delimiter: str
    names: tuple[str, ...]
    wanted: tuple[str, ...]
    limits: Limits
    places: dict[str, int] = field(init=False)

    def __post_init__(self) -> None:
        places = {name: i for i, name in enumerate(self.names) if name in self.wanted}
        object.__setattr__(self, "places", places)

    @property
    def width(self) -> int:
        """Number of fields of a row."""
        return len(self.names)

    def error(self, code: str, line: int, raw: str, found: str, expected: str) -> RowError:
        """Make the error of a row that could not be taken apart; its fields are a first guess."""
        fields = dict(zip(self.names, raw.split(self.delimiter), strict=False))
        return row_error(
            code,
            file=self.file,
            line=line,
            raw=raw,
            found=found,
            expected=expected,
            fields={name: fields[name] for name in self.places if name in fields},
        )


def fast_chunk(data: bytes, text: str, line: int, end_byte: int, layout: Layout) -> Chunk | None:
    """Take apart a block in which every line has as many plain fields as the header.

    The places of all separators and line ends are found at once; when they follow each
    other as they should, one split of the whole text gives all the fields. None when
    they do not, or when there are quotation marks, over-long or blank rows: those take
    the careful way.
    """
    if b'"' in data or not data:
        return None
    octets = np.frombuffer(data, dtype=np.uint8)
    ends = np.flatnonzero((octets == ord(layout.delimiter)) | (octets == ord("\n")))
    rows, surplus = divmod(len(ends) + 1, layout.width)
    if surplus:
        return None
    marks = np.append(octets[ends], np.uint8(ord("\n"))).reshape(rows, layout.width)
    if np.any(marks[:, -1] != ord("\n")) or np.any(marks[:, :-1] != ord(layout.delimiter)):
        return None
    longest = max(int(np.diff(ends, prepend=-1).max(initial=0)), len(data) - int(ends[-1])) - 1
    if longest > layout.limits.max_field_chars:
        return None
    flat = text.replace("\n", layout.delimiter).split(layout.delimiter)
    columns = {name: flat[i :: layout.width] for name, i in layout.places.items()}
    if all("" in texts for texts in columns.values()):
        return None
    return Chunk(
        np.arange(line, line + rows, dtype=np.int64), columns, RawLines(text), (), end_byte
    )


def quoted_chunk(text: str, line: int, end_byte: int, layout: Layout) -> Chunk | None:
    """Take apart a block with quotation marks in which still every line is a whole row."""
    lines = text.split("\n")
    try:
        rows = list(csv.reader(lines, delimiter=layout.delimiter, strict=True))
    except csv.Error:
        return None
    if len(rows) != len(lines) or set(map(len, rows)) != {layout.width}:
        return None
    if max(map(len, lines)) > layout.limits.max_field_chars:
        return None
    flat = list(zip(*rows, strict=True))
    columns = {name: list(flat[i]) for name, i in layout.places.items()}
    if all("" in texts for texts in columns.values()):
        return None
    numbers = np.arange(line, line + len(rows), dtype=np.int64)
    return Chunk(numbers, columns, lines, (), end_byte)


def careful_chunk(
    text: str, line: int, end_byte: int, layout: Layout, *, is_last: bool
) -> tuple[Chunk, str, int]:
    """Take a block apart row by row; gives also what has to wait for the next block."""
    lines = text.split("\n")
    numbers: list[int] = []
    raws: list[str] = []
    rows: list[list[str]] = []
    errors: list[RowError] = []
    place, carried_from = 0, len(lines)
    for count, fields, fault in _taken(lines, layout, is_last=is_last):
        if count == 0:
            carried_from = place
            break
        raw = lines[place] if count == 1 else "\n".join(lines[place : place + count])
        if fault:
            code, found, expected = fault
            errors.append(layout.error(code, line + place, raw, found, expected))
        elif fields:
            numbers.append(line + place)
            raws.append(raw)
            rows.append(fields)
        place += count
    columns = {name: [row[i] for row in rows] for name, i in layout.places.items()}
    chunk = Chunk(np.array(numbers, dtype=np.int64), columns, raws, tuple(errors), end_byte)
    return chunk, "\n".join(lines[carried_from:]), line + carried_from


_Fault = tuple[str, str, str] | None


def _taken(
    lines: Sequence[str], layout: Layout, *, is_last: bool
) -> Iterator[tuple[int, list[str], _Fault]]:
    """Each row in turn: the lines it covers, its fields, and what is wrong with it.

    A blank row has no fields. A row that may go on in the next block covers no lines, and is
    the last.
    """
    place = 0
    while place < len(lines):
        end = place
        while end < len(lines) and not lines[end].count('"') % 2:
            end += 1
        # Every line up to the first that opens a quotation mark is a row by itself.
        for row in _whole_lines(lines[place:end], layout):
            yield 1, *row
        if end < len(lines):
            count, fields, fault = _row_over_lines(lines, end, layout, is_last=is_last)
            yield count, fields, fault
            if count == 0:
                return
            end += count
        place = end


def _whole_lines(lines: Sequence[str], layout: Layout) -> Iterator[tuple[list[str], _Fault]]:
    """Fields of lines that are a row each, and what is wrong with them."""
    try:
        rows = list(csv.reader(lines, delimiter=layout.delimiter, strict=True))
    except csv.Error:
        rows = []
    if len(rows) != len(lines):
        yield from (_fields_of(text, layout) for text in lines)
        return
    for text, fields in zip(lines, rows, strict=True):
        if len(fields) == layout.width and len(text) <= layout.limits.max_field_chars and fields[0]:
            yield fields, None
        else:
            yield _fields_of(text, layout)


def _row_over_lines(
    lines: Sequence[str], place: int, layout: Layout, *, is_last: bool
) -> tuple[int, list[str], _Fault]:
    """Take apart a row whose first line opens a quotation mark without closing it."""
    text = lines[place]
    for count in range(2, LINES_IN_A_ROW + 1):
        if place + count > len(lines):
            if not is_last:
                return 0, [], None
            break
        text = f"{text}\n{lines[place + count - 1]}"
        if not text.count('"') % 2:
            fields, fault = _fields_of(text, layout)
            if fault is None:
                return count, fields, None
            break
    # Only this line is given up. If the quotation mark was a slip, the next lines are rows.
    return 1, [], ("quotes", lines[place], "quotation marks in pairs")


def _fields_of(text: str, layout: Layout) -> tuple[list[str], _Fault]:
    limits = layout.limits
    if len(text) > limits.max_line_bytes:
        return [], ("long_field", f"{len(text)} characters", "rows of some dozens of characters")
    try:
        fields = next(csv.reader([text], delimiter=layout.delimiter, strict=True), [])
    except csv.Error:
        return [], ("quotes", text, "quotation marks in pairs around a whole field")
    if not text.strip() or not any(fields):
        return [], None
    if any(fields[layout.width :]) or len(fields) < layout.width:
        return fields, ("fields", str(len(fields)), f"{layout.width}, as in the header")
    longest = max(map(len, fields))
    if longest > limits.max_field_chars:
        expected = f"at most {limits.max_field_chars} characters"
        return fields, ("long_field", f"{longest} characters", expected)
    return fields[: layout.width], None
