"""What a file would bring, told before anything of it is stored."""

from collections.abc import Callable
from pathlib import Path
from typing import BinaryIO

from sqlalchemy.orm import Session

from server.intake.chunks import Sheet
from server.intake.kinds import ORDER
from server.intake.results import FilePreview, HeldPreview, SheetPreview, SuspectPreview
from server.intake.sheets import open_sheets
from server.intake.sitting import IntakeSettings, Judged, limits_of, sitting_of
from server.storage.plant import House

Progress = Callable[[int, int], None]
"""Told how many bytes of how many have been read."""

FIRST_ROWS = 20
"""Rows of each sort that a preview shows."""


def preview_file(
    session: Session,
    house: House,
    source: Path | BinaryIO,
    name: str,
    now_ms: int,
    settings: IntakeSettings,
    reason: str = "",
    progress: Progress | None = None,
) -> FilePreview:
    """Tell what a file would bring, with the first rows of each sort; stores nothing.

    Raises
    ------
    FileRefused
        When it cannot be read as a sheet.
    """
    limits = limits_of(settings)
    with open_sheets(source, name, limits=limits) as file:
        sheets = sorted(file.sheets, key=lambda sheet: ORDER.index(sheet.kind))
        previews = tuple(
            _preview_sheet(session, house, sheet, now_ms, settings, reason, progress)
            for sheet in sheets
        )
        return FilePreview(name, previews, file.ignored)


def _preview_sheet(
    session: Session,
    house: House,
    sheet: Sheet,
    now_ms: int,
    settings: IntakeSettings,
    reason: str,
    progress: Progress | None,
) -> SheetPreview:
    sitting = sitting_of(sheet, house, now_ms, settings, reason)
    held: list[HeldPreview] = []
    suspect: list[SuspectPreview] = []
    spans: list[tuple[int, int]] = []
    for chunk in sheet.chunks():
        rows = sitting.read(chunk)
        judged = sitting.judge(session, chunk, rows)
        if len(rows):
            moments = sitting.taker.moments(rows)
            spans.append((int(moments.min()), int(moments.max())))
        held.extend(_first_held(judged, FIRST_ROWS - len(held)))
        suspect.extend(_first_suspect(house, judged, FIRST_ROWS - len(suspect)))
        if progress is not None:
            progress(chunk.bytes_read, sheet.size_bytes)
    counts = sitting.counts
    return SheetPreview(
        sheet=sheet.kind,
        worksheet=sheet.worksheet,
        dialect=sheet.dialect.sentence,
        rows=counts.rows,
        new=counts.stored,
        duplicates=counts.duplicates,
        held=counts.held,
        suspect=counts.suspect,
        first_ms=min((first for first, _ in spans), default=None),
        last_ms=max((last for _, last in spans), default=None),
        first_held=tuple(held),
        first_suspect=tuple(suspect),
        unknown_columns=sheet.unknown_columns,
    )


def _first_held(judged: Judged, most: int) -> list[HeldPreview]:
    held = sorted((*judged.holding.new, *judged.holding.again), key=lambda row: row.line)
    return [
        HeldPreview(row.line, row.column, row.found, row.expected, row.reason, row.raw)
        for row in held[: max(most, 0)]
    ]


def _first_suspect(house: House, judged: Judged, most: int) -> list[SuspectPreview]:
    doubts = sorted(judged.verdicts.doubts.values(), key=lambda doubt: doubt.line)
    previews = []
    for doubt in doubts[: max(most, 0)]:
        plan = house.section_of_id(doubt.section_id)
        previews.append(
            SuspectPreview(
                doubt.line,
                plan.name,
                plan.number_of(doubt.cell_id),
                doubt.at_ms,
                doubt.found,
                doubt.expected,
                doubt.suggested,
                doubt.reason,
            )
        )
    return previews
