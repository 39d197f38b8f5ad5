"""The engine and its sessions; how SQLite and PostgreSQL are set up."""

import threading
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

from alembic import command
from alembic.config import Config
from sqlalchemy import Engine, create_engine, event, text
from sqlalchemy.engine import make_url
from sqlalchemy.orm import Session

from server.settings import MIGRATIONS
from server.storage.turns import take_turn

_WRITER_CACHE_KIB = 65_536
_READER_CACHE_KIB = 8_192
_CHECKPOINT_PAGES = 8_192
"""Pages of the log after which they are copied into the file: 32 MiB."""


class Database:
    """The books' database: sessions that read, sessions that write, and its migrations.

    A session that writes holds the write lock of SQLite from its first statement
    (BEGIN IMMEDIATE), so that it never fails half-way for want of the lock.
    """

    def __init__(self, url: str) -> None:
        self.url = make_url(url)
        if self.url.drivername == "postgresql":
            self.url = self.url.set(drivername="postgresql+psycopg")
        self.is_sqlite = self.url.get_backend_name() == "sqlite"
        self._writing = threading.Lock()
        if self.is_sqlite:
            self._reader = self._sqlite_engine(writes=False)
            self._writer = self._sqlite_engine(writes=True)
        else:
            self._reader = create_engine(
                self.url, pool_size=8, pool_pre_ping=True, hide_parameters=True
            )
            self._writer = self._reader

    def _sqlite_engine(self, writes: bool) -> Engine:
        engine = create_engine(
            self.url,
            pool_size=1 if writes else 6,
            max_overflow=0 if writes else 4,
            hide_parameters=True,
            connect_args={"check_same_thread": False, "timeout": 30, "isolation_level": None},
        )
        cache_kib = _WRITER_CACHE_KIB if writes else _READER_CACHE_KIB

        @event.listens_for(engine, "connect")
        def _set_up(connection: Any, _record: Any) -> None:
            for pragma in (
                "journal_mode=WAL",
                "synchronous=FULL",
                "foreign_keys=ON",
                "busy_timeout=30000",
                f"cache_size=-{cache_kib}",
                f"wal_autocheckpoint={_CHECKPOINT_PAGES}",
                "temp_store=MEMORY",
            ):
                connection.execute(f"PRAGMA {pragma}").close()

        @event.listens_for(engine, "begin")
        def _begin(connection: Any) -> None:
            connection.exec_driver_sql("BEGIN IMMEDIATE" if writes else "BEGIN")

        return engine

    @property
    def engine(self) -> Engine:
        """The engine that reads."""
        return self._reader

    @contextmanager
    def read(self) -> Iterator[Session]:
        """A session that sees one moment of the books and writes nothing."""
        with Session(self._reader) as session:
            yield session

    @contextmanager
    def write(self) -> Iterator[Session]:
        """A session that commits when the block ends well, and leaves no trace when it does not."""
        if not self.is_sqlite:
            with Session(self._writer) as session, session.begin():
                # Figures are brought up to date from records that nobody is adding to meanwhile.
                take_turn(session)
                yield session
            return
        with self._writing, Session(self._writer) as session, session.begin():
            yield session

    def _alembic(self) -> Config:
        config = Config()
        config.set_main_option("script_location", str(MIGRATIONS))
        config.attributes["database"] = self
        return config

    def upgrade(self, revision: str = "head") -> None:
        """Bring the tables to a revision, by default the newest."""
        command.upgrade(self._alembic(), revision)

    def downgrade(self, revision: str) -> None:
        """Take the tables back to a revision."""
        command.downgrade(self._alembic(), revision)

    def integrity_errors(self) -> list[str]:
        """What the database itself finds wrong with its file; empty when all is well."""
        with self._reader.connect() as connection:
            if not self.is_sqlite:
                connection.execute(text("SELECT 1"))
                return []
            found = [row[0] for row in connection.exec_driver_sql("PRAGMA integrity_check")]
            keys = [
                f"row {row[1]} of {row[0]} points to a missing row of {row[2]}"
                for row in connection.exec_driver_sql("PRAGMA foreign_key_check")
            ]
        return [line for line in found if line != "ok"] + keys

    def close(self) -> None:
        """Give back every connection."""
        self._reader.dispose()
        self._writer.dispose()
