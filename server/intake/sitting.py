"""One sheet or call on its way in: read, judged, and counted."""

from dataclasses import dataclass
from typing import Protocol

from sqlalchemy.orm import Session

from server.intake.chunks import MEBIBYTE, Chunk, Limits, Sheet
from server.intake.convert import Converter
from server.intake.holding import Holding, held_of, sorted_out
from server.intake.kinds import taker_for
from server.intake.rows import Rows
from server.intake.times import AHEAD_MS
from server.intake.verdicts import Given, Outcome, Verdicts
from server.storage.delivery_rows import hold_rows, keep_doubts
from server.storage.plant import House


class IntakeSettings(Protocol):
    """What the intake needs of the settings."""

    @property
    def future_tolerance_s(self) -> int:
        """Seconds by which a record may lie ahead of the clock."""

    @property
    def upload_max_mib(self) -> int:
        """Largest file, MiB."""

    @property
    def unpacked_max_mib(self) -> int:
        """Largest unpacked size of a workbook, MiB."""

    @property
    def max_hold_ms(self) -> int:
        """The longest hold of a logged current, ms."""


@dataclass(slots=True)
class Counts:
    """What became of the rows so far."""

    rows: int = 0
    stored: int = 0
    duplicates: int = 0
    held: int = 0
    suspect: int = 0

    def as_columns(self) -> dict[str, int]:
        """The counts by the columns of a delivery."""
        return {
            "rows": self.rows,
            "stored": self.stored,
            "duplicates": self.duplicates,
            "held": self.held,
            "suspect": self.suspect,
        }


@dataclass(frozen=True, slots=True)
class Judged:
    """A chunk whose every row has been decided on."""

    chunk: Chunk
    rows: Rows
    verdicts: Verdicts
    holding: Holding

    @property
    def is_to_be_written(self) -> bool:
        """Whether anything of it goes into the books."""
        return bool(len(self.verdicts.new) or self.holding.new)


class Sitting:
    """The reading of one sheet, chunk after chunk."""

    def __init__(
        self,
        sheet: str,
        given: Given,
        settings: IntakeSettings,
        *,
        decimal: str = ".",
        file: str = "",
    ) -> None:
        self.sheet = sheet
        self.counts = Counts()
        self._decimal = decimal
        self._converter = Converter(
            sheet,
            zone=given.zone,
            # The reader of times forgives what clocks usually run ahead by.
            now_ms=given.now_ms + settings.future_tolerance_s * 1000 - AHEAD_MS,
            decimal=decimal,
            cells_in={plan.name: len(plan.cell_ids) for plan in given.house.sections},
            file=file,
        )
        self.taker = taker_for(sheet, given, self._converter.section_names)

    def read(self, chunk: Chunk) -> Rows:
        """Turn the text of a chunk into values; this needs no database."""
        return self._converter.convert(chunk)

    def judge(
        self, session: Session, chunk: Chunk, rows: Rows, *, is_mended: bool = False
    ) -> Judged:
        """Decide on every row of a chunk, and count.

        A row that is mended is held already, and is not held once more.
        """
        verdicts = self.taker.judge(session, rows)
        faulty = held_of(chunk, rows, verdicts, self._decimal)
        held = (
            Holding((), tuple(faulty), {}) if is_mended else sorted_out(session, self.sheet, faulty)
        )
        counts = self.counts
        counts.rows += len(chunk) + len(chunk.errors)
        counts.stored += len(verdicts.new)
        counts.duplicates += int((verdicts.outcome == Outcome.DUPLICATE).sum()) + len(held.decided)
        counts.held += len(held.new) + len(held.again)
        counts.suspect += len(verdicts.doubts)
        return Judged(chunk, rows, verdicts, held)

    def write(self, session: Session, judged: Judged, delivery_id: int) -> None:
        """Write what goes in, what is held and what is doubted."""
        self.taker.write(session, judged.rows, judged.verdicts, delivery_id)
        keep_doubts(session, delivery_id, judged.verdicts.doubts.values())
        hold_rows(session, delivery_id, self.sheet, judged.holding.new)


def limits_of(settings: IntakeSettings) -> Limits:
    """How large a file and its parts may be."""
    return Limits(
        max_bytes=settings.upload_max_mib * MEBIBYTE,
        max_unpacked_bytes=settings.unpacked_max_mib * MEBIBYTE,
    )


def given_of(
    house: House, now_ms: int, settings: IntakeSettings, reason: str, sender: str = ""
) -> Given:
    """What is known about a delivery before its rows are read."""
    return Given(house, now_ms, settings.max_hold_ms, " ".join(reason.split()), sender)


def sitting_of(
    sheet: Sheet,
    house: House,
    now_ms: int,
    settings: IntakeSettings,
    reason: str,
    sender: str = "",
) -> Sitting:
    """Begin the reading of a sheet of a file."""
    return Sitting(
        sheet.kind,
        given_of(house, now_ms, settings, reason, sender),
        settings,
        decimal=sheet.dialect.decimal,
        file=source_of(sheet.file, sheet),
    )


def source_of(name: str, sheet: Sheet) -> str:
    """Name a sheet of a file as the books have it."""
    return f"{name}, {sheet.worksheet}" if sheet.worksheet else name
