"""How commands speak: one clear line for an error, a bar for what takes long."""

import getpass
import os
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import NoReturn

import typer
from pydantic import ValidationError
from rich.console import Console
from rich.progress import (
    BarColumn,
    MofNCompleteColumn,
    Progress,
    SpinnerColumn,
    TaskID,
    TextColumn,
    TimeElapsedColumn,
    TimeRemainingColumn,
)

from server import settings as site_settings
from server.settings import Settings
from server.storage.condition import newest_revision, readiness
from server.storage.database import Database

FAILED, REFUSED, HELD = 1, 2, 3
"""What a command ends with when it could not be done, when its input was refused, and when rows
were held."""

said = Console(soft_wrap=True, highlight=False)
complained = Console(stderr=True, soft_wrap=True, highlight=False)


def fail(words: str, status: int = FAILED) -> NoReturn:
    """Say in one line what is wrong, and end."""
    complained.print(f"ampledger: {words}", markup=False)
    raise typer.Exit(status)


def settings() -> Settings:
    """The settings of this process; a wrong one is named."""
    try:
        return site_settings.settings()
    except ValidationError as error:
        for found in error.errors():
            name = "_".join(str(step) for step in found["loc"]).upper()
            fault = f"AMPLEDGER_{name}: found {found['input']!r}; {found['msg']}"
            complained.print(f"ampledger: {fault}", markup=False)
        raise typer.Exit(REFUSED) from None


@contextmanager
def books(chosen: Settings, *, upgrades: bool = True) -> Iterator[Database]:
    """The books of these settings, which must be there; older tables are brought up to date."""
    database = Database(chosen.database_url)
    try:
        path = sqlite_path(database)
        if path is not None and not path.is_file():
            fail(f"there is no database {path}; `ampledger init --plant FILE` makes one")
        newest = newest_revision()
        found = readiness(database, newest)
        if not found.is_reachable:
            fail(f"the database {shown(database)} cannot be reached or is none of ours")
        if found.revision is None:
            fail(f"{shown(database)} holds no books; `ampledger init --plant FILE` makes them")
        if upgrades and not found.is_at_head:
            database.upgrade()
        yield database
    finally:
        database.close()


def sqlite_path(database: Database) -> Path | None:
    """The file of a SQLite database; None of another."""
    name = database.url.database
    return Path(name) if database.is_sqlite and name else None


def shown(database: Database) -> str:
    """Name a database without its password."""
    path = sqlite_path(database)
    return str(path) if path else database.url.render_as_string(hide_password=True)


def sender() -> str:
    """Who works at the terminal."""
    try:
        return f"{getpass.getuser()} (command line)"
    except (KeyError, OSError, ImportError):
        return "command line"


@dataclass(frozen=True)
class Bar:
    """A bar that shows how far a piece of work has come."""

    progress: Progress
    task: TaskID

    def __call__(self, done: float, total: float | None = None) -> None:
        """Show that so much of so much is done."""
        self.progress.update(self.task, completed=done, total=total)


@contextmanager
def bar(words: str, *, counts: bool = False) -> Iterator[Bar]:
    """A bar on the terminal while something is done; nothing where nobody looks."""
    columns = [SpinnerColumn(), TextColumn("{task.description}"), BarColumn()]
    if counts:
        columns.append(MofNCompleteColumn())
    with Progress(
        *columns,
        TimeElapsedColumn(),
        TimeRemainingColumn(),
        console=complained,
        transient=True,
        disable=not complained.is_terminal or bool(os.environ.get("CI")),
    ) as progress:
        yield Bar(progress, progress.add_task(words, total=None))
