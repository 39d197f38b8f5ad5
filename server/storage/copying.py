"""Copies whole books: into a backup, which is a SQLite file, and back into either database."""

import sqlite3
from collections.abc import Callable
from pathlib import Path
from typing import Any

from sqlalchemy import Engine, Table, insert, select, text

from server.storage.condition import readiness
from server.storage.database import Database
from server.storage.errors import Conflict
from server.storage.tables import METADATA

Progress = Callable[[float, float], None]
"""Told how much of how much is done."""

_ROWS_AT_ONCE = 20_000
_PAGES_AT_ONCE = 4_096


def back_up(database: Database, file: Path, progress: Progress) -> None:
    """Write everything into a new SQLite file, as it is at one moment, while others go on."""
    file.unlink(missing_ok=True)
    if database.is_sqlite:
        _copy_file(Path(str(database.url.database)), file, progress)
    else:
        copy = Database(f"sqlite:///{file}")
        try:
            copy.upgrade()
            _copy_rows(database.engine, copy.engine, progress)
        finally:
            copy.close()
    _as_one_file(file)


def restore(file: Path, database: Database, progress: Progress) -> None:
    """Put what a backup holds into a database whose tables are there and empty.

    Raises
    ------
    Conflict
        When the database holds something.
    """
    full = [table.name for table in METADATA.sorted_tables if _has_rows(database.engine, table)]
    if full:
        raise Conflict(f"the database is not empty: there are rows in {', '.join(full)}")
    source = Database(f"sqlite:///{file}")
    try:
        _copy_rows(source.engine, database.engine, progress)
    finally:
        source.close()


def faults_of_backup(file: Path, newest: str | None) -> list[str]:
    """What is wrong with a backup; empty when it can be restored."""
    if not file.is_file():
        return ["there is no such file"]
    with file.open("rb") as stream:
        if stream.read(16) != b"SQLite format 3\0":
            return ["this is not a backup"]
    source = Database(f"sqlite:///{file}")
    try:
        found = readiness(source, newest)
        if not found.is_reachable or found.revision is None:
            return ["this is a database, and not one of ours"]
        return source.integrity_errors()
    except sqlite3.DatabaseError as error:
        return [str(error)]
    finally:
        source.close()


def _copy_file(source: Path, target: Path, progress: Progress) -> None:
    def follow(_status: int, remaining: int, total: int) -> None:
        progress(total - remaining, total)

    reader, writer = sqlite3.connect(source), sqlite3.connect(target)
    try:
        # Nothing is written while a step copies; between two steps others may write.
        reader.backup(writer, pages=_PAGES_AT_ONCE, progress=follow)
    finally:
        reader.close()
        writer.close()


def _as_one_file(file: Path) -> None:
    """Leave nothing of the copy in a file beside it."""
    connection = sqlite3.connect(file)
    try:
        connection.execute("PRAGMA journal_mode=DELETE")
    finally:
        connection.close()


def _copy_rows(source: Engine, target: Engine, progress: Progress) -> None:
    tables = METADATA.sorted_tables
    with source.connect() as reading, target.begin() as writing:
        if source.dialect.name == "postgresql":
            reading = reading.execution_options(isolation_level="REPEATABLE READ")
        for number, table in enumerate(tables):
            rows = reading.execution_options(stream_results=True).execute(select(table))
            for part in rows.mappings().partitions(_ROWS_AT_ONCE):
                writing.execute(insert(table), [dict(row) for row in part])
            progress(number + 1, len(tables))
        if target.dialect.name == "postgresql":
            for table in tables:
                _continue_numbers(writing, table)


def _has_rows(engine: Engine, table: Table) -> bool:
    with engine.connect() as connection:
        return connection.execute(select(text("1")).select_from(table).limit(1)).first() is not None


def _continue_numbers(connection: Any, table: Table) -> None:
    """Let PostgreSQL count new rows on from those that were copied."""
    column = table.autoincrement_column
    if column is None:
        return
    name = f"pg_get_serial_sequence('{table.name}', '{column.name}')"
    if connection.scalar(text(f"SELECT {name}")) is None:
        return
    connection.execute(
        text(
            f"SELECT setval({name}, COALESCE((SELECT MAX({column.name}) FROM {table.name}), 0) + 1,"
            " false)"
        )
    )
