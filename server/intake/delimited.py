"""CSV read in blocks: whole lines to fields, with the numbers and the words of each line kept."""

import csv
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from functools import partial
from itertools import islice
from typing import BinaryIO

import numpy as np

from server.intake.chunks import Chunk, Limits, RawLines, Sheet
from server.intake.columns import canonical, recognised
from server.intake.dialect import Dialect, decimals_of, delimiter_of, split_line
from server.intake.errors import FileRefused, RowError, row_error

BLOCK_BYTES = 2 << 20
"""Fifty thousand readings at a time: few enough for the memory, enough for the arrays."""

SAMPLE_ROWS = 5000
"""Rows at the head of the file that are looked at to settle the decimal mark."""

LINES_IN_A_ROW = 20
"""A remark may run over some lines. A quotation mark that is not closed within as many was
never meant to open anything, and must not swallow the rows after it."""

BYTE_ORDER_MARK = b"\xef\xbb\xbf"


@dataclass(frozen=True, slots=True)
class Block:
    """Whole lines of a file, line ends made equal, without the last one."""

    data: bytes
    text: str
    line: int
    end_byte: int
    is_last: bool


def blocks(stream: BinaryIO, *, file: str, limits: Limits) -> Iterator[Block]:
    """Read a file from its start in blocks of whole lines.

    Raises
    ------
    FileRefused
        At a byte that is not UTF-8, a NUL byte, or a line that does not end.
    """
    stream.seek(0)
    pending = stream.read(len(BYTE_ORDER_MARK))
    offset = len(pending) if pending == BYTE_ORDER_MARK else 0
    pending = pending[offset:]
    line, at_end = 1, False
    while not at_end:
        read = stream.read(BLOCK_BYTES)
        at_end = not read
        data = pending + read
        cut = len(data) if at_end else _last_line_end(data)
        whole, pending = data[:cut], data[cut:]
        if len(pending) > limits.max_line_bytes:
            raise FileRefused(
                "long_line",
                file=file,
                line=line + len(_equal_line_ends(whole).split(b"\n")) - 1,
                found=f"more than {limits.max_line_bytes} bytes",
                expected="rows of some dozens of characters",
            )
        if not whole:
            continue
        equal = _equal_line_ends(whole)
        text = _decoded(equal, whole, file=file, line=line, offset=offset)
        offset += len(whole)
        line_after = line + equal.count(b"\n")
        if equal.endswith(b"\n"):
            equal, text = equal[:-1], text[:-1]
        yield Block(equal, text, line, offset, at_end)
        line = line_after


def _last_line_end(data: bytes) -> int:
    """Place after the last line end; a carriage return at the very end may be half of one."""
    return data.rfind(b"\n") + 1 or data.rfind(b"\r", 0, max(len(data) - 1, 0)) + 1


def _equal_line_ends(data: bytes) -> bytes:
    return data.replace(b"\r\n", b"\n").replace(b"\r", b"\n") if b"\r" in data else data


def _decoded(equal: bytes, whole: bytes, *, file: str, line: int, offset: int) -> str:
    if (nul := whole.find(b"\0")) >= 0:
        raise FileRefused(
            "nul",
            file=file,
            line=line + _equal_line_ends(whole[:nul]).count(b"\n"),
            found=f"byte {offset + nul + 1} of the file",
            expected="plain text",
        )
    try:
        return equal.decode("utf-8")
    except UnicodeDecodeError:
        try:
            whole.decode("utf-8")
        except UnicodeDecodeError as error:
            raise FileRefused(
                "encoding",
                file=file,
                line=line + _equal_line_ends(whole[: error.start]).count(b"\n"),
                found=f"byte {offset + error.start + 1} of the file (0x{whole[error.start]:02X})",
                expected="UTF-8; in Excel, save as “CSV UTF-8”",
            ) from None
        raise


def open_delimited(stream: BinaryIO, *, file: str, size_bytes: int, limits: Limits) -> Sheet:
    """Tell sheet and dialect of a CSV file from its header and its first rows.

    Raises
    ------
    FileRefused
        When it is empty, no known sheet, or not clear in what it means.
    """
    stream.seek(0)
    has_mark = stream.read(len(BYTE_ORDER_MARK)) == BYTE_ORDER_MARK
    first = next(blocks(stream, file=file, limits=limits), None)
    lines = first.text.split("\n") if first else []
    found = next(((i, text) for i, text in enumerate(lines) if text.strip(" \t,;")), None)
    if first is None or found is None:
        raise FileRefused("empty", file=file, expected="a header and rows")
    place, heading = found
    header_line = first.line + place
    delimiter = delimiter_of(heading, file=file, line=header_line)
    header = split_line(heading, delimiter)
    kind = recognised(header, file=file, line=header_line, hint=file)
    names = [canonical(text) for text in header]
    known = [kind.column(name) if name in kind.names else None for name in names]
    layout = _Layout(file, delimiter, tuple(names), kind.names, limits)
    sample = list(islice(_sample_rows(lines[place + 1 :], header_line + 1, layout), SAMPLE_ROWS))
    if any(column and column.is_numeric for column in known):
        _refuse_unquoted_decimals(sample, layout)
    mark, evidence, evidence_line, seen = decimals_of(sample, known, delimiter=delimiter, file=file)
    return Sheet(
        file=file,
        kind=kind.name,
        header=tuple(header),
        header_line=header_line,
        columns=tuple(name for name in names if name in kind.names),
        unknown_columns=tuple(
            text.strip()
            for text, name in zip(header, names, strict=True)
            if name and name not in kind.names
        ),
        dialect=Dialect(delimiter, mark, has_mark, evidence, evidence_line, seen),
        size_bytes=size_bytes,
        worksheet=None,
        _read=partial(_chunks, stream, header_line, layout),
    )


@dataclass(frozen=True, slots=True)
class _Layout:
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


def _sample_rows(
    lines: Sequence[str], line: int, layout: _Layout
) -> Iterator[tuple[int, list[str]]]:
    """Rows for a first look, line by line; a remark over several lines does no harm here."""
    for i, text in enumerate(lines):
        if text.strip():
            try:
                yield line + i, split_line(text, layout.delimiter)
            except csv.Error:
                continue


def _refuse_unquoted_decimals(sample: Sequence[tuple[int, list[str]]], layout: _Layout) -> None:
    """Refuse a comma-separated file whose rows are longer than its header.

    `2026-03-01T02:00,EW1,1,2,035` has five fields where four are wanted, and which comma is
    the decimal one could only be guessed. One such row is a slip; most rows are a dialect.
    """
    surplus = [(line, row) for line, row in sample if any(row[layout.width :])]
    if layout.delimiter == "," and 2 * len(surplus) > len(sample):
        line, row = surplus[0]
        raise FileRefused(
            "decimals_unquoted",
            file=layout.file,
            line=line,
            found=f"{len(row)} instead of {layout.width}",
            expected="decimal points, or fields separated by semicolons",
        )


def _chunks(stream: BinaryIO, header_line: int, layout: _Layout) -> Iterator[Chunk]:
    carried, carried_line, end_byte = "", 0, 0
    for block in blocks(stream, file=layout.file, limits=layout.limits):
        data, text, line = block.data, block.text, block.line
        if line <= header_line:
            # The header lies in the first block: everything up to it is passed over.
            rest = text.split("\n", header_line - line + 1)[header_line - line + 1 :]
            if not rest and not block.is_last:
                continue
            text = rest[0] if rest else ""
            data, line = text.encode(), header_line + 1
        if carried:
            text, line = f"{carried}\n{text}", carried_line
            data = text.encode()
        chunk = _fast_chunk(data, text, line, block.end_byte, layout)
        carried = ""
        if chunk is None and '"' in text:
            chunk = _quoted_chunk(text, line, block.end_byte, layout)
        if chunk is None:
            chunk, carried, carried_line = _careful_chunk(
                text, line, block.end_byte, layout, is_last=block.is_last
            )
        end_byte = block.end_byte
        if len(chunk) or chunk.errors:
            yield chunk
    if carried:
        chunk, _, _ = _careful_chunk(carried, carried_line, end_byte, layout, is_last=True)
        yield chunk


def _fast_chunk(data: bytes, text: str, line: int, end_byte: int, layout: _Layout) -> Chunk | None:
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


def _quoted_chunk(text: str, line: int, end_byte: int, layout: _Layout) -> Chunk | None:
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


def _careful_chunk(
    text: str, line: int, end_byte: int, layout: _Layout, *, is_last: bool
) -> tuple[Chunk, str, int]:
    """Take a block apart row by row; gives also what has to wait for the next block."""
    lines = text.split("\n")
    numbers: list[int] = []
    raws: list[str] = []
    rows: list[list[str]] = []
    errors: list[RowError] = []
    place, carried_from = 0, len(lines)
    while place < len(lines):
        taken = _row_at(lines, place, layout, is_last=is_last)
        if taken is None:
            carried_from = place
            break
        count, fields, fault = taken
        raw = "\n".join(lines[place : place + count])
        if fault:
            code, found, expected = fault
            errors.append(layout.error(code, line + place, raw, found, expected))
        elif any(value.strip() for value in fields):
            numbers.append(line + place)
            raws.append(raw)
            rows.append(fields)
        place += count
    columns = {name: [row[i] for row in rows] for name, i in layout.places.items()}
    chunk = Chunk(np.array(numbers, dtype=np.int64), columns, raws, tuple(errors), end_byte)
    return chunk, "\n".join(lines[carried_from:]), line + carried_from


_Taken = tuple[int, list[str], tuple[str, str, str] | None]


def _row_at(lines: Sequence[str], place: int, layout: _Layout, *, is_last: bool) -> _Taken | None:
    """Take one row apart: the lines it covers, its fields, and what is wrong with it.

    None when the row may go on in the next block.
    """
    first = lines[place]
    if not first.count('"') % 2:
        return 1, *_fields_of(first, layout)
    text = first
    for count in range(2, LINES_IN_A_ROW + 1):
        if place + count > len(lines):
            if not is_last:
                return None
            break
        text = f"{text}\n{lines[place + count - 1]}"
        if not text.count('"') % 2:
            fields, fault = _fields_of(text, layout)
            if fault is None:
                return count, fields, None
            break
    # Only this line is given up. If the quotation mark was a slip, the next lines are rows.
    return 1, [], ("quotes", first, "quotation marks in pairs")


def _fields_of(text: str, layout: _Layout) -> tuple[list[str], tuple[str, str, str] | None]:
    limits = layout.limits
    if len(text) > limits.max_line_bytes:
        return [], ("long_field", f"{len(text)} characters", "rows of some dozens of characters")
    try:
        fields = next(csv.reader([text], delimiter=layout.delimiter, strict=True), [])
    except csv.Error:
        return [], ("quotes", text, "quotation marks in pairs around a whole field")
    if not any(value.strip() for value in fields):
        return [], None
    if any(fields[layout.width :]) or len(fields) < layout.width:
        return fields, ("fields", str(len(fields)), f"{layout.width}, as in the header")
    longest = max(map(len, fields))
    if longest > limits.max_field_chars:
        expected = f"at most {limits.max_field_chars} characters"
        return fields, ("long_field", f"{longest} characters", expected)
    return fields[: layout.width], None
