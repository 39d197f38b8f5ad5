"""`ampledger backup` and `ampledger restore`: the whole books as one file, and back."""

import os
from pathlib import Path
from typing import Annotated

import typer

from server.commands.terminal import REFUSED, bar, books, fail, said, settings, shown, sqlite_path
from server.storage.condition import newest_revision
from server.storage.copying import back_up, faults_of_backup
from server.storage.copying import restore as put_back
from server.storage.database import Database
from server.storage.plant import has_plant

Backup = Annotated[Path, typer.Argument(metavar="FILE", help="The backup.", dir_okay=False)]


def backup(file: Backup) -> None:
    """Write everything into one file, while the server goes on; the file is checked."""
    with books(settings(), upgrades=False) as database:
        if file.resolve() == _own_file(database):
            fail("a backup cannot be written over the database itself", REFUSED)
        if not file.resolve().parent.is_dir():
            fail(f"there is no folder {file.parent}", REFUSED)
        unfinished = file.with_name(f".{file.name}.{os.getpid()}.unfinished")
        try:
            with bar("Copying") as progress:
                back_up(database, unfinished, progress)
            faults = faults_of_backup(unfinished, newest_revision())
            if faults:
                fail(f"the copy is not sound: {faults[0]}")
            _settle(unfinished)
            unfinished.replace(file)
        finally:
            unfinished.unlink(missing_ok=True)
    size_mib = file.stat().st_size / (1 << 20)
    said.print(f"{file}: {size_mib:,.1f} MiB, checked", markup=False)


def restore(
    file: Backup,
    yes: Annotated[
        bool, typer.Option("--yes", help="Replace the books that are in the database now.")
    ] = False,
) -> None:
    """Put a backup into the database; stop the server before. What is there is not replaced."""
    faults = faults_of_backup(file, newest_revision())
    if faults:
        fail(f"{file} cannot be restored: {faults[0]}", REFUSED)
    database = Database(settings().database_url)
    try:
        if database.is_sqlite:
            _restore_file(file, database, yes)
        else:
            _restore_rows(file, database, yes)
    finally:
        database.close()
    said.print(f"{shown(database)}: restored from {file}", markup=False)


def _restore_file(file: Path, database: Database, yes: bool) -> None:
    path = sqlite_path(database)
    if path is None:
        fail("a database in memory cannot be restored into", REFUSED)
    if path.resolve() == file.resolve():
        fail("this is the database itself", REFUSED)
    if path.exists() and not yes:
        fail(f"{path} is there already; make a backup of it and say --yes to replace it", REFUSED)
    # The copy is made beside the database, so that it takes its place in one step.
    unfinished = path.with_name(f".{path.name}.{os.getpid()}.unfinished")
    copy = Database(f"sqlite:///{file}")
    try:
        with bar("Restoring") as progress:
            back_up(copy, unfinished, progress)
        _settle(unfinished)
        for ending in ("-wal", "-shm"):
            path.with_name(path.name + ending).unlink(missing_ok=True)
        unfinished.replace(path)
    finally:
        copy.close()
        unfinished.unlink(missing_ok=True)
    database.upgrade()


def _restore_rows(file: Path, database: Database, yes: bool) -> None:
    if yes:
        fail(
            "books in PostgreSQL are not replaced: restore into an empty database"
            " (createdb, then AMPLEDGER_DATABASE_URL)",
            REFUSED,
        )
    database.upgrade()
    with database.read() as session:
        if has_plant(session):
            fail(f"{shown(database)} holds books already; restore into an empty one", REFUSED)
    with bar("Restoring") as progress:
        put_back(file, database, progress)


def _own_file(database: Database) -> Path | None:
    path = sqlite_path(database)
    return path.resolve() if path else None


def _settle(file: Path) -> None:
    """Have the file on the disk before it takes its name."""
    with file.open("rb+") as stream:
        os.fsync(stream.fileno())
