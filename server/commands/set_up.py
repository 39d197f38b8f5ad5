"""`ampledger init`, `check` and `recompute`: the books made, examined, and worked out anew."""

from pathlib import Path
from typing import Annotated

import typer

from server import clock
from server.accounts.soundness import unsound
from server.clock import as_datetime
from server.commands import figures
from server.commands.terminal import (
    FAILED,
    REFUSED,
    bar,
    books,
    complained,
    fail,
    said,
    sender,
    settings,
    shown,
    sqlite_path,
)
from server.intake.outages import OPEN_END_MS, bypasses_recorded
from server.intake.plant_file import PlantFile, PlantFileWrong, found_plant, read_plant
from server.storage.condition import newest_revision, readiness
from server.storage.current import bypasses_of
from server.storage.database import Database
from server.storage.derived_rows import orphaned_readings
from server.storage.flag_acts import acts_without_flag
from server.storage.plant import has_plant, house


def init(
    plant: Annotated[
        Path,
        typer.Option("--plant", help="The plant file, plant.toml.", metavar="FILE", dir_okay=False),
    ],
) -> None:
    """Make the database and the plant that a plant file describes."""
    try:
        read = read_plant(plant)
    except PlantFileWrong as wrong:
        for fault in wrong.faults:
            complained.print(f"ampledger: {wrong.file}, {fault}", markup=False)
        raise typer.Exit(REFUSED) from None
    database = Database(settings().database_url)
    try:
        path = sqlite_path(database)
        if path is not None and not path.resolve().parent.is_dir():
            fail(f"there is no folder {path.parent}", REFUSED)
        make_books(database, read, sender())
        cells = sum(section.cells for section in read.section)
        said.print(
            f"{shown(database)}: {read.tankhouse.name} with {len(read.section)} sections and"
            f" {cells} cells",
            markup=False,
        )
    finally:
        database.close()


def make_books(database: Database, plant: PlantFile, who: str) -> None:
    """Make the tables and the plant in a database that has none."""
    database.upgrade()
    with database.write() as session:
        found_plant(session, plant, clock.now_ms(), who)


def check() -> None:
    """Examine the books: ends with 0 when they are sound, and says what is wrong otherwise."""
    with books(settings(), upgrades=False) as database:
        faults = database.integrity_errors()
        found = readiness(database, newest_revision())
        if not found.is_at_head:
            faults.append(
                f"the tables are at revision {found.revision}, this program expects"
                f" {found.newest_revision}: `ampledger serve` brings them up to date"
            )
        else:
            faults += _unsound(database)
            for lone in _acts_without_flag(database):
                said.print(lone, markup=False)
        if faults:
            for fault in faults:
                complained.print(f"ampledger: {fault}", markup=False)
            raise typer.Exit(FAILED)
        said.print(f"{shown(database)}: sound", markup=False)
        if found.stale_stretches:
            said.print(
                f"{found.stale_stretches} stretches of time have figures that are yet to follow",
                markup=False,
            )


def _unsound(database: Database) -> list[str]:
    with database.read() as session:
        if not has_plant(session):
            return ["there is no tankhouse in these books"]
        plant = house(session)
        faults = [
            f"readings point to a {what} that is not in the books ({count} such)"
            for what, count in orphaned_readings(session).items()
            if count
        ]
        with bar("Checking", counts=True) as progress:
            for number, section in enumerate(plant.sections):
                faults += unsound(session, section)
                kept = bypasses_of(session, section.cell_ids, 0, OPEN_END_MS)
                if kept != bypasses_recorded(session, section):
                    faults.append(
                        f"{section.name}: the bypasses are not those of the outages;"
                        " `ampledger recompute` mends it"
                    )
                progress(number + 1, len(plant.sections))
        return faults


def _acts_without_flag(database: Database) -> list[str]:
    """What people did about flags that the watch no longer raises: kept, and told."""
    with database.read() as session:
        if not has_plant(session):
            return []
        plant = house(session)
        owner = {cell_id: section for section in plant.sections for cell_id in section.cell_ids}
        return [
            f"{owner[cell_id].name}, cell {owner[cell_id].number_of(cell_id)}: the flag"
            f" “{kind}” of {as_datetime(raised_ms, plant.time_zone):%Y-%m-%d %H:%M} is raised no"
            f" more; what people did about it is kept ({count})"
            for (cell_id, kind, raised_ms), count in acts_without_flag(session)
        ]


def recompute() -> None:
    """Work out everything that rests on what was recorded, from the start."""
    chosen = settings()
    with books(chosen) as database:
        figures.recompute(database, chosen)
        said.print(f"{shown(database)}: every figure was worked out anew", markup=False)
