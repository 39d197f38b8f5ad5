"""In what condition the books are: reachable, at which tables, how much in them, what lags."""

from dataclasses import dataclass
from pathlib import Path

from alembic.config import Config
from alembic.runtime.migration import MigrationContext
from alembic.script import ScriptDirectory
from sqlalchemy import Select, func, select, text
from sqlalchemy.exc import SQLAlchemyError
from sqlalchemy.orm import Session

from server.settings import MIGRATIONS
from server.storage.database import Database
from server.storage.deliveries import Delivery, HeldRow, Suspicion
from server.storage.derived import Stale
from server.storage.flags import Flag


@dataclass(frozen=True)
class Readiness:
    """Whether the database answers, and at which tables it is."""

    is_reachable: bool
    revision: str | None
    """Revision of the tables; None where there are none."""
    newest_revision: str | None
    stale_stretches: int
    """Stretches of time whose figures have yet to be brought up to date."""

    @property
    def is_at_head(self) -> bool:
        """Whether the tables are those that this program expects."""
        return self.revision is not None and self.revision == self.newest_revision

    @property
    def is_ready(self) -> bool:
        """Whether requests can be answered."""
        return self.is_reachable and self.is_at_head


@dataclass(frozen=True)
class Condition:
    """How much is in the books, and what waits for somebody."""

    rows_stored: dict[str, int]
    """By sheet."""
    held_rows: int
    open_suspicions: int
    open_flags: int
    stale_stretches: int
    database_bytes: int


def newest_revision() -> str | None:
    """Revision of the newest migration that comes with the program."""
    config = Config()
    config.set_main_option("script_location", str(MIGRATIONS))
    return ScriptDirectory.from_config(config).get_current_head()


def readiness(database: Database, newest: str | None) -> Readiness:
    """Whether the database can be worked with; never raises, whatever is wrong with it.

    `newest` is the revision that the program expects, as `newest_revision` gives it.
    """
    try:
        with database.read() as session:
            revision = MigrationContext.configure(session.connection()).get_current_revision()
            is_at_head = revision is not None and revision == newest
            stale = session.scalar(select(func.count(Stale.id))) if is_at_head else 0
    except (SQLAlchemyError, OSError):
        return Readiness(False, None, newest, 0)
    return Readiness(True, revision, newest, stale or 0)


def condition(session: Session) -> Condition:
    """How much is in the books, and what waits for somebody."""
    stored = session.execute(
        select(Delivery.sheet, func.sum(Delivery.stored)).group_by(Delivery.sheet)
    )

    def counted(what: Select[int]) -> int:
        return session.scalar(what) or 0

    return Condition(
        rows_stored={sheet: int(rows or 0) for sheet, rows in stored},
        held_rows=counted(select(func.count(HeldRow.id)).where(HeldRow.state == "held")),
        open_suspicions=counted(select(func.count(Suspicion.id)).where(Suspicion.state == "open")),
        open_flags=counted(select(func.count(Flag.cell_id)).where(Flag.ended_ms.is_(None))),
        stale_stretches=counted(select(func.count(Stale.id))),
        database_bytes=_database_bytes(session),
    )


def _database_bytes(session: Session) -> int:
    engine = session.get_bind()
    if engine.dialect.name != "sqlite":
        size = session.scalar(text("SELECT pg_database_size(current_database())"))
        return int(size or 0)
    file = session.connection().engine.url.database
    if not file or file == ":memory:":
        return 0
    parts = (Path(f"{file}{ending}") for ending in ("", "-wal"))
    return sum(part.stat().st_size for part in parts if part.is_file())
