"""CSV read in blocks: whole lines to fields, with the numbers and the words of each line kept."""

import csv
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import partial
from itertools import islice
from typing import BinaryIO

from server.intake.chunks import Chunk, Limits, Sheet
from server.intake.columns import canonical, recognised
from server.intake.dialect import Dialect, decimals_of, delimiter_of, split_line
from server.intake.errors import FileRefused
from server.intake.text_rows import Layout, careful_chunk, fast_chunk, quoted_chunk

BLOCK_BYTES = 2 << 20
"""Fifty thousand readings at a time: few enough for the memory, enough for the arrays."""

SAMPLE_ROWS = 5000
"""Rows at the head of the file that are looked at to settle the decimal mark."""

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
    layout = Layout(file, delimiter, tuple(names), kind.names, limits)
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


def _sample_rows(
    lines: Sequence[str], line: int, layout: Layout
) -> Iterator[tuple[int, list[str]]]:
    """Rows for a first look, line by line; a remark over several lines does no harm here."""
    for i, text in enumerate(lines):
        if text.strip():
            try:
                yield line + i, split_line(text, layout.delimiter)
            except csv.Error:
                continue


def _refuse_unquoted_decimals(sample: Sequence[tuple[int, list[str]]], layout: Layout) -> None:
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


def _chunks(stream: BinaryIO, header_line: int, layout: Layout) -> Iterator[Chunk]:
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
        chunk = fast_chunk(data, text, line, block.end_byte, layout)
        carried = ""
        if chunk is None and '"' in text:
            chunk = quoted_chunk(text, line, block.end_byte, layout)
        if chunk is None:
            chunk, carried, carried_line = careful_chunk(
                text, line, block.end_byte, layout, is_last=block.is_last
            )
        end_byte = block.end_byte
        if len(chunk) or chunk.errors:
            yield chunk
    if carried:
        chunk, _, _ = careful_chunk(carried, carried_line, end_byte, layout, is_last=True)
        yield chunk
