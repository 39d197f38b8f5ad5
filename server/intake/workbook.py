"""Worksheets of an Excel workbook, brought to the same text as the rows of a CSV file."""

import csv
import datetime
import io
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import partial
from itertools import count, islice
from typing import BinaryIO

import numpy as np
from python_calamine import (
    CalamineError,
    CalamineSheet,
    CalamineWorkbook,
    SheetTypeEnum,
    SheetVisibleEnum,
)

from server.intake.chunks import Chunk, Limits, Sheet, SheetFile
from server.intake.columns import Column, canonical, recognised
from server.intake.dialect import Dialect, decimals_of
from server.intake.errors import FileRefused, RowError, row_error
from server.intake.unpack import safe_workbook

ROWS_IN_A_CHUNK = 20_000
SAMPLE_ROWS = 5000

Value = str | int | float | bool | datetime.date | datetime.time | datetime.timedelta
"""What a cell may hold; a datetime is a date, too."""


def open_workbook(stream: BinaryIO, *, file: str, size_bytes: int, limits: Limits) -> SheetFile:
    """Find the sheets of the contract among the visible worksheets of a workbook.

    Hidden worksheets are left alone, since nobody who sends the file has them before their
    eyes; others that are no sheet of the contract are passed over. Both are reported.

    Raises
    ------
    FileRefused
        When the workbook is unsafe, damaged or locked, or when no visible worksheet is a
        sheet of the contract.
    """
    safe = safe_workbook(stream, file=file, limits=limits)
    sheets: list[Sheet] = []
    ignored: list[str] = []
    refusals: list[FileRefused] = []
    try:
        workbook = _Workbook(CalamineWorkbook.from_filelike(safe))
        for about in workbook.sheets_metadata:
            if about.typ != SheetTypeEnum.WorkSheet:
                continue
            if about.visible != SheetVisibleEnum.Visible:
                ignored.append(f"Worksheet “{about.name}” is hidden and was left unread.")
                continue
            try:
                sheets.append(
                    _sheet(workbook, about.name, file=file, size_bytes=size_bytes, limits=limits)
                )
            except FileRefused as refusal:
                if refusal.code not in {"columns", "empty"}:
                    raise
                refusals.append(refusal)
                ignored.append(f"Worksheet “{about.name}” was left unread. {refusal.reason}")
    except CalamineError as error:
        raise FileRefused(
            "workbook_damaged", file=file, found=str(error), expected="a workbook that Excel opens"
        ) from None
    if not sheets:
        if refusals:
            raise next((one for one in refusals if one.code == "columns"), refusals[0])
        raise FileRefused("empty", file=file, expected="a visible worksheet with a header and rows")
    return SheetFile(file, size_bytes, tuple(sheets), tuple(ignored))


class _Workbook:
    """A workbook that remembers the worksheet read last: it is read to tell what it is, and again.

    It has no file of its own to close.
    """

    def __init__(self, workbook: CalamineWorkbook) -> None:
        self._workbook = workbook
        self._last: CalamineSheet | None = None
        self.sheets_metadata = workbook.sheets_metadata

    def worksheet(self, name: str) -> CalamineSheet:
        if self._last is None or self._last.name != name:
            self._last = None
            self._last = self._workbook.get_sheet_by_name(name)
        return self._last


@dataclass(frozen=True, slots=True)
class _Layout:
    """What is needed to read the rows of one worksheet."""

    file: str
    worksheet: str
    names: tuple[str, ...]
    places: dict[str, int]
    header_line: int
    decimal: str
    size_bytes: int
    limits: Limits


def _sheet(
    workbook: _Workbook, worksheet: str, *, file: str, size_bytes: int, limits: Limits
) -> Sheet:
    rows = _rows(workbook.worksheet(worksheet))
    first = next(((line, row) for line, row in rows if row and any(map(_is_filled, row))), None)
    if first is None:
        raise FileRefused("empty", file=file, expected="a header and rows")
    header_line, heading = first
    header = [cell_text(value, ".") for value in heading]
    while header and not header[-1].strip():
        header.pop()
    kind = recognised(header, file=file, line=header_line, hint=f"{worksheet} {file}")
    names = tuple(canonical(text) for text in header)
    known: list[Column | None] = [
        kind.column(name) if name in kind.names else None for name in names
    ]
    # Only numbers that somebody typed as text say anything about the decimal mark.
    sample = (
        (line, [value if isinstance(value, str) else "" for value in row or ()])
        for line, row in islice(rows, SAMPLE_ROWS)
    )
    mark, evidence, evidence_line, seen = decimals_of(sample, known, delimiter="", file=file)
    dialect = Dialect("", mark, False, evidence, evidence_line, seen, worksheet=worksheet)
    places = {name: i for i, name in enumerate(names) if name in kind.names}
    layout = _Layout(file, worksheet, names, places, header_line, mark, size_bytes, limits)
    return Sheet(
        file=file,
        kind=kind.name,
        header=tuple(header),
        header_line=header_line,
        columns=tuple(places),
        unknown_columns=tuple(
            text.strip()
            for text, name in zip(header, names, strict=True)
            if name and name not in kind.names
        ),
        dialect=dialect,
        size_bytes=size_bytes,
        worksheet=worksheet,
        _read=partial(_chunks, workbook, layout),
    )


def _is_filled(value: Value) -> bool:
    return not isinstance(value, str) or bool(value.strip())


def cell_text(value: Value, decimal: str) -> str:
    """Give a cell as a CSV file would hold it: numbers in the file's dialect, moments as ISO 8601.

    A date cell at midnight comes without its time of day and is given it back.

    >>> cell_text(2.035, ",")
    '2,035'
    """
    if isinstance(value, str):
        return value
    if isinstance(value, datetime.datetime):
        return value.isoformat(timespec="milliseconds" if value.microsecond else "seconds")
    if isinstance(value, datetime.date):
        return f"{value.isoformat()}T00:00:00"
    if isinstance(value, bool):
        return str(value).upper()
    if isinstance(value, int | float):
        number = float(value)
        if number.is_integer() and abs(number) < 1e15:
            return str(int(number))
        return repr(number).replace(".", decimal)
    return str(value)


def _rows(worksheet: CalamineSheet) -> Iterator[tuple[int, list[Value] | None]]:
    """Rows with their numbers; None for one with a duration too long for any calendar."""
    rows = worksheet.iter_rows()
    for line in count(1):
        try:
            yield line, next(rows)
        except StopIteration:
            return
        except OverflowError:
            yield line, None


def _chunks(workbook: _Workbook, layout: _Layout) -> Iterator[Chunk]:
    worksheet = workbook.worksheet(layout.worksheet)
    height = max(worksheet.total_height, 1)
    rows = islice(_rows(worksheet), layout.header_line, None)
    while taken := list(islice(rows, ROWS_IN_A_CHUNK)):
        chunk = _chunk(taken, layout, min(taken[-1][0] / height, 1.0))
        if len(chunk) or chunk.errors:
            yield chunk


def _chunk(
    taken: Sequence[tuple[int, list[Value] | None]], layout: _Layout, share_read: float
) -> Chunk:
    width = len(layout.names)
    numbers: list[int] = []
    rows: list[list[str]] = []
    raws: list[str] = []
    errors: list[RowError] = []
    for line, values in taken:
        if values is None:
            expected = "dates and durations within the calendar"
            errors.append(_error(layout, "cell_unreadable", line, [], "", expected))
            continue
        if not any(map(_is_filled, values)):
            continue
        texts = [cell_text(value, layout.decimal) for value in values]
        fault = _fault(texts, width, layout.limits)
        if fault is None:
            numbers.append(line)
            rows.append(texts)
            raws.append(_as_csv(texts[:width]))
        else:
            code, found, expected = fault
            errors.append(_error(layout, code, line, texts, found, expected))
    columns = {
        name: [row[i] if i < len(row) else "" for row in rows] for name, i in layout.places.items()
    }
    bytes_read = round(share_read * layout.size_bytes)
    return Chunk(np.array(numbers, dtype=np.int64), columns, raws, tuple(errors), bytes_read)


def _error(
    layout: _Layout, code: str, line: int, texts: Sequence[str], found: str, expected: str
) -> RowError:
    return row_error(
        code,
        file=layout.file,
        line=line,
        raw=_as_csv(texts),
        found=found,
        expected=expected,
        fields={name: texts[i] for name, i in layout.places.items() if i < len(texts)},
    )


def _fault(texts: Sequence[str], width: int, limits: Limits) -> tuple[str, str, str] | None:
    if any(text.strip() for text in texts[width:]):
        filled = max(i for i, text in enumerate(texts, start=1) if text.strip())
        return "fields", str(filled), f"{width}, as in the header"
    longest = max(map(len, texts))
    if longest > limits.max_field_chars:
        expected = f"at most {limits.max_field_chars} characters"
        return "long_field", f"{longest} characters", expected
    return None


def _as_csv(texts: Sequence[str]) -> str:
    row = io.StringIO()
    csv.writer(row, lineterminator="").writerow(texts)
    return row.getvalue()
