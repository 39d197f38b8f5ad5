"""A workbook taken out of its zip and looked through, before anything else opens it.

What is written in a zip's directory need not be true, and a few bytes of XML can ask for
far more than they weigh. So every part is unpacked here under count, its XML is looked
through, and what was looked through is packed anew: the reader of worksheets is given that,
and never the file as it came.
"""

import io
import struct
import zipfile
import zlib
from collections.abc import Iterator
from typing import BinaryIO
from xml.parsers import expat

from server.intake.chunks import MEBIBYTE, Limits
from server.intake.errors import FileRefused
from server.intake.part import check_part, swells

_PIECE_BYTES = 1 << 18
_TAIL_BYTES = 65_536 + 22 + 20 + 56
"""The longest remark at the end of a zip, the end itself, and its form of 64 bits."""
_ENTRY_BYTES = 1024
"""More than one entry of a workbook's directory takes."""
_NOT_TOLD = 0xFFFF_FFFF
"""Stands in the short form where the long form has the number."""
_ENCRYPTED = 0x1

_PARTS_READ = ("xl/", "_rels/", "[Content_Types].xml")
_PARTS_PASSED_OVER = (
    "xl/charts/",
    "xl/drawings/",
    "xl/pivotCache/",
    "xl/pivotTables/",
    "xl/media/",
)
_SHARED_TEXTS = "xl/sharedstrings.xml"


def check_directory_size(stream: BinaryIO, *, file: str, limits: Limits) -> None:
    """Refuse a zip whose directory alone would fill the memory, before it is read.

    The end of a zip tells the size of its directory, in the form of 64 bits too; every
    place that could be that end is asked, and the largest answer counts.

    Raises
    ------
    FileRefused
        When the directory is larger than that of any workbook within the limits.
    """
    size = stream.seek(0, 2)
    stream.seek(max(size - _TAIL_BYTES, 0))
    tail = stream.read(_TAIL_BYTES)
    for signature, form in ((b"PK\x05\x06", "<12xL"), (b"PK\x06\x06", "<40xQ")):
        place = tail.find(signature)
        while place >= 0:
            if place + struct.calcsize(form) <= len(tail):
                (directory,) = struct.unpack_from(form, tail, place)
                if directory > limits.max_entries * _ENTRY_BYTES and directory != _NOT_TOLD:
                    found = f"a directory of {directory // 1024:,} KiB"
                    raise swells(found, file=file, limits=limits)
            place = tail.find(signature, place + 4)


def is_workbook(stream: BinaryIO) -> bool:
    """Whether a zip is an Excel workbook by its parts."""
    return _has_part(stream, "xl/workbook.xml")


def what_zip(stream: BinaryIO) -> str:
    """Name the kind of a zip that is not an Excel workbook."""
    for part, kind in (
        ("xl/workbook.bin", "a binary Excel workbook (.xlsb)"),
        ("word/document.xml", "a Word document"),
        ("ppt/presentation.xml", "a PowerPoint presentation"),
        ("content.xml", "an OpenDocument file"),
    ):
        if _has_part(stream, part):
            return kind
    return "a zip archive"


def _has_part(stream: BinaryIO, name: str) -> bool:
    try:
        with zipfile.ZipFile(stream) as archive:
            return name in archive.namelist()
    except (zipfile.BadZipFile, ValueError, OSError, NotImplementedError):
        return False


def safe_workbook(stream: BinaryIO, *, file: str, limits: Limits) -> io.BytesIO:
    """Unpack a workbook within the limits and pack it anew.

    Raises
    ------
    FileRefused
        When it is damaged or locked, unpacks to too much, or holds XML that asks for more
        than a sheet needs.
    """
    try:
        with zipfile.ZipFile(stream) as archive:
            return _repacked(archive, file=file, limits=limits)
    except (zipfile.BadZipFile, zlib.error, EOFError, OSError, RuntimeError, ValueError) as error:
        raise FileRefused(
            "workbook_damaged", file=file, found=str(error), expected="a workbook that Excel opens"
        ) from None
    except expat.ExpatError as error:
        raise FileRefused(
            "workbook_damaged",
            file=file,
            found=f"faulty XML: {error}",
            expected="a workbook that Excel opens",
        ) from None


def _repacked(archive: zipfile.ZipFile, *, file: str, limits: Limits) -> io.BytesIO:
    entries = archive.infolist()
    _check_directory(entries, file=file, limits=limits)
    needed = [
        entry
        for entry in entries
        if entry.filename.startswith(_PARTS_READ)
        and not entry.filename.startswith(_PARTS_PASSED_OVER)
        and entry.filename.lower().endswith((".xml", ".rels"))
    ]
    packed, total = io.BytesIO(), 0
    texts: list[int] = []
    # Shared texts come first, since the worksheets are weighed by the texts they show.
    needed.sort(key=lambda entry: entry.filename.lower() != _SHARED_TEXTS)
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_STORED) as anew:
        for entry in needed:
            pieces: list[bytes] = []
            for piece in _pieces(archive, entry):
                total += len(piece)
                if total > limits.max_unpacked_bytes:
                    raise swells(f"more than {total // MEBIBYTE} MiB", file=file, limits=limits)
                pieces.append(piece)
            content = b"".join(pieces)
            lengths = check_part(content, texts, file=file, limits=limits)
            if entry.filename.lower() == _SHARED_TEXTS:
                texts = lengths
            elif lengths:
                raise FileRefused(
                    "workbook_unsafe",
                    file=file,
                    found=f"shared texts in {entry.filename}",
                    expected="them in xl/sharedStrings.xml",
                )
            anew.writestr(entry.filename, content)
    packed.seek(0)
    return packed


def _check_directory(entries: list[zipfile.ZipInfo], *, file: str, limits: Limits) -> None:
    """Refuse by what the zip itself declares, before one byte is unpacked."""
    if len(entries) > limits.max_entries:
        raise swells(f"{len(entries)} parts", file=file, limits=limits)
    if len({entry.filename.lower() for entry in entries}) < len(entries):
        raise FileRefused(
            "workbook_unsafe", file=file, found="two parts of one name", expected="each part once"
        )
    if any(entry.flag_bits & _ENCRYPTED for entry in entries):
        raise FileRefused("workbook_locked", file=file, expected="a workbook without a password")
    unpacked = sum(entry.file_size for entry in entries)
    packed = sum(entry.compress_size for entry in entries)
    if unpacked > limits.max_unpacked_bytes:
        raise swells(f"{unpacked // MEBIBYTE} MiB", file=file, limits=limits)
    if unpacked > limits.max_pack_ratio * max(packed, 1) and unpacked > MEBIBYTE:
        raise swells(f"{unpacked // max(packed, 1)} times its size", file=file, limits=limits)


def _pieces(archive: zipfile.ZipFile, entry: zipfile.ZipInfo) -> Iterator[bytes]:
    with archive.open(entry) as part:
        while piece := part.read(_PIECE_BYTES):
            yield piece
