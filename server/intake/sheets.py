"""Opens what somebody sent, tells whether it is a sheet, and gives its rows in chunks."""

import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import BinaryIO, cast

from server.intake.chunks import MEBIBYTE, Chunk, Limits, Sheet, SheetFile, records_chunk
from server.intake.delimited import open_delimited
from server.intake.errors import FileRefused
from server.intake.unpack import check_directory_size, is_workbook, what_zip
from server.intake.workbook import open_workbook

__all__ = ["Chunk", "Limits", "Sheet", "SheetFile", "open_sheets", "records_chunk"]

_WANTED = "a CSV file in UTF-8 or an Excel workbook (.xlsx)"

# First bytes of files that are often sent by mistake, with the name people know them by.
_OTHER_KINDS: tuple[tuple[bytes, str], ...] = (
    (b"%PDF", "a PDF document"),
    (b"\x89PNG", "a picture (PNG)"),
    (b"\xff\xd8\xff", "a picture (JPEG)"),
    (b"GIF8", "a picture (GIF)"),
    (b"II*\x00", "a picture (TIFF)"),
    (b"MM\x00*", "a picture (TIFF)"),
    (b"\xd0\xcf\x11\xe0", "an old Excel workbook (.xls) or one locked by a password"),
    (b"\x1f\x8b", "a gzip archive"),
    (b"BZh", "a bzip2 archive"),
    (b"\xfd7zXZ", "an xz archive"),
    (b"7z\xbc\xaf", "a 7-Zip archive"),
    (b"Rar!", "a RAR archive"),
    (b"SQLite format 3\x00", "an SQLite database"),
    (b"PAR1", "a Parquet file"),
    (b"{\\rtf", "a Rich Text document"),
    (b"\xff\xfe", "text in UTF-16"),
    (b"\xfe\xff", "text in UTF-16"),
    (b"\x7fELF", "a program"),
)
_ZIP = b"PK"
_TEXT_BYTES = bytes([9, 10, 11, 12, 13, *range(32, 127), *range(128, 256)])
"""A text may hold a stray control character; one byte in twenty makes it something else."""
_MARKUP = (b"<!doctype", b"<html", b"<?xml", b"{", b"[")


@contextmanager
def open_sheets(
    source: Path | str | BinaryIO, name: str | None = None, *, limits: Limits | None = None
) -> Iterator[SheetFile]:
    """Open a file, or a stream of bytes that was sent, as the sheets it holds.

    `name` is what the sender calls the file; it stands in every message, and settles which
    sheet is meant where the columns would fit two. A stream that cannot be rewound is
    copied to disk first, up to the largest size allowed. The sheets can be read as often
    as wanted until the end of the `with` block.

    Raises
    ------
    FileRefused
        When the file cannot be read as a sheet; see `server.intake.reasons.FILE_REASONS`.
    """
    limits = limits or Limits()
    if isinstance(source, str | Path):
        path = Path(source)
        file = name or path.name
        if path.is_dir():
            raise FileRefused("folder", file=file, expected=_WANTED)
        if not path.is_file():
            raise FileRefused("missing", file=file)
        with path.open("rb") as stream:
            yield _opened(stream, file, limits)
        return
    file = name or "the file sent"
    if source.seekable():
        yield _opened(source, file, limits)
        return
    with tempfile.TemporaryFile() as copy:
        size = 0
        while piece := source.read(MEBIBYTE):
            size += len(piece)
            _check_size(size, file, limits)
            copy.write(piece)
        yield _opened(cast(BinaryIO, copy), file, limits)


def _opened(stream: BinaryIO, file: str, limits: Limits) -> SheetFile:
    size = stream.seek(0, 2)
    _check_size(size, file, limits)
    stream.seek(0)
    head = stream.read(4096)
    if not head:
        raise FileRefused("empty", file=file, expected="a header and rows")
    if head.startswith(_ZIP):
        check_directory_size(stream, file=file, limits=limits)
        if not is_workbook(stream):
            raise FileRefused("other_kind", file=file, found=what_zip(stream), expected=_WANTED)
        return open_workbook(stream, file=file, size_bytes=size, limits=limits)
    if other := _other_kind(head):
        raise FileRefused("other_kind", file=file, found=other, expected=_WANTED)
    sheet = open_delimited(stream, file=file, size_bytes=size, limits=limits)
    return SheetFile(file, size, (sheet,))


def _check_size(size: int, file: str, limits: Limits) -> None:
    if size > limits.max_bytes:
        raise FileRefused(
            "too_large",
            file=file,
            found=f"{size / MEBIBYTE:,.0f} MiB or more",
            expected=f"{limits.max_bytes / MEBIBYTE:,.0f} MiB",
        )


def _other_kind(head: bytes) -> str | None:
    """Name the kind of file by its first bytes, or None where it may be text in UTF-8."""
    for magic, kind in _OTHER_KINDS:
        if head.startswith(magic):
            return kind
    if 20 * len(head.translate(None, _TEXT_BYTES)) > len(head):
        return "a binary file"
    if head.lstrip().lower().startswith(_MARKUP):
        return "a page or a data file of the web (HTML, XML or JSON)"
    return None
