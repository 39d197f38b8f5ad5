"""Books of a small plant, and a way to bring it files and records as others do."""

import io
from collections.abc import Mapping, Sequence
from datetime import UTC, datetime
from typing import Any

import pytest
from sqlalchemy.orm import Session

from server.intake.results import FilePreview, FileResult, RecordResult
from server.intake.take_in import preview_file, take_in_file, take_in_records
from server.settings import Settings
from server.storage.database import Database
from server.storage.direct import fetch_rows
from server.storage.plant import House, house
from server.storage.readings import Series, between
from server.storage.stale import pending, settle
from tests.factories import HOUR_MS, NOW_MS, make_section

VOLTS = "at,section,cell,volts\n"


class Books:
    """A plant's books with its intake: EW1 of ten cells, ER1 of six."""

    def __init__(self, database: Database) -> None:
        self.database = database
        self.settings = Settings()
        self.now_ms = NOW_MS
        self.sender = "mira"
        with Session(database.engine) as session:
            make_section(session, name="EW1")
            make_section(
                session,
                name="ER1",
                process="copper electrorefining",
                cells=6,
                rows=1,
                rated_amps=27_000.0,
                differential_resistance_ohm=None,
                low_volts=0.26,
                high_volts=0.32,
            )
        self.house = self._house()

    def _house(self) -> House:
        with self.database.read() as session:
            return house(session)

    def again(self) -> None:
        """Read the plant anew, after it was changed."""
        self.house = self._house()

    def file(self, text: str | bytes, name: str = "sheet.csv", reason: str = "") -> FileResult:
        """Take in a file."""
        return take_in_file(
            self.database,
            self.house,
            self._stream(text),
            name,
            self.sender,
            self.now_ms,
            self.settings,
            reason,
        )

    def preview(self, text: str | bytes, name: str = "sheet.csv") -> FilePreview:
        """Preview a file."""
        with self.database.read() as session:
            return preview_file(
                session, self.house, self._stream(text), name, self.now_ms, self.settings
            )

    def records(
        self, kind: str, *records: Mapping[str, object], reason: str = "", source: str = "API"
    ) -> list[RecordResult]:
        """Take in records of a call."""
        with self.database.write() as session:
            return take_in_records(
                session,
                self.house,
                kind,
                records,
                self.sender,
                self.now_ms,
                self.settings,
                source,
                reason,
            )

    def record(self, kind: str, reason: str = "", **record: object) -> RecordResult:
        """Take in one record."""
        return self.records(kind, record, reason=reason)[0]

    def rows(self, sql: str, *parameters: Any) -> list[tuple[Any, ...]]:
        """Rows as they are in the database now."""
        with self.database.read() as session:
            return fetch_rows(session, sql, parameters)

    def cell(self, section: str, number: int) -> int:
        """Id of a cell."""
        return self.house.section(section).cell_id(number)

    def series(self, section: str = "EW1", known_ms: int | None = None) -> Series:
        """The effective readings of a section."""
        with self.database.read() as session:
            return between(session, self.house.section(section).cell_ids, 0, 2**53, known_ms)

    def stale(self) -> list[tuple[str, str, int, int]]:
        """What is to be worked out anew: (section, kind, from, to)."""
        with self.database.read() as session:
            return [
                (self.house.section_of_id(s.section_id).name, s.kind, s.from_ms, s.to_ms)
                for s in pending(session)
            ]

    def settle(self) -> None:
        """Take everything as brought up to date."""
        with self.database.write() as session:
            for s in pending(session):
                settle(session, s.section_id, s.kind, s.from_ms, s.to_ms)

    def contents(self) -> dict[str, list[tuple[Any, ...]]]:
        """Everything that is recorded, apart from the list of deliveries."""
        tables = {
            "reading": "cell_id, at_ms, revision",
            "current_sample": "section_id, at_ms, revision",
            "counter_sample": "section_id, at_ms, revision",
            "lot": "id",
            "outage": "id",
            "bypassed_cell": "cell_id, from_ms",
            "electrolyte_sample": "section_id, stream, at_ms, revision",
            "find": "id",
            "held_row": "id",
            "suspicion": "id",
            "sent_id": "id",
        }
        return {
            table: self.rows(f"SELECT * FROM {table} ORDER BY {order}")
            for table, order in tables.items()
        }

    @staticmethod
    def _stream(text: str | bytes) -> io.BytesIO:
        return io.BytesIO(text.encode() if isinstance(text, str) else text)


@pytest.fixture
def books(database: Database) -> Books:
    """Books of a small plant, on each kind of database in turn."""
    return Books(database)


def rounds(
    section: str,
    volts: Sequence[float],
    count: int,
    *,
    every_ms: int = 8 * HOUR_MS,
    noise: float = 0.004,
) -> list[dict[str, object]]:
    """Rounds of a section up to now, each cell at its own level with a little noise."""
    first_ms = NOW_MS - count * every_ms
    return [
        {
            "at": iso(first_ms + number * every_ms + cell * 20_000),
            "section": section,
            "cell": cell + 1,
            "volts": round(level + noise * ((7 * number + 3 * cell) % 5 - 2) / 2, 3),
        }
        for number in range(count)
        for cell, level in enumerate(volts)
    ]


def iso(at_ms: int) -> str:
    """A moment as a sheet has it."""
    return datetime.fromtimestamp(at_ms / 1000, UTC).strftime("%Y-%m-%dT%H:%M:%SZ")


def as_csv(records: Sequence[Mapping[str, object]]) -> str:
    """Records as a sheet."""
    lines = [",".join(records[0]), *(",".join(map(str, row.values())) for row in records)]
    return "\n".join(lines) + "\n"


LEVELS = [2.013, 2.041, 1.987, 2.065, 2.022, 1.974, 2.050, 2.003, 2.034, 1.995]
"""Healthy voltages of the ten cells of EW1."""
