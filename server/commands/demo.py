"""`ampledger demo`: a made-up tankhouse with months of readings, taken in and served."""

import os
import tempfile
from pathlib import Path
from typing import Annotated

import typer
from rich.box import SIMPLE_HEAD
from rich.table import Table

from server import clock
from server.commands.figures import bring_up_to_date
from server.commands.importing import files_of, take_in_all
from server.commands.serving import is_free, serve_books
from server.commands.set_up import make_books
from server.commands.terminal import bar, fail, said, settings
from server.demo.house import House, demo_house
from server.demo.people import DEMO_PEOPLE, random_password
from server.demo.sheets import write_sheets
from server.intake.plant_file import read_plant
from server.settings import Settings
from server.storage.condition import newest_revision, readiness
from server.storage.database import Database
from server.storage.people import add_person, enable, keep_password, person_named
from server.storage.plant import has_plant, house, tankhouse
from server.web.security import Passwords

FILE = "ampledger-demo.db"
HOST, FIRST_PORT, PORTS_TRIED = "127.0.0.1", 8000, 20

FRESH_MS = 6 * 3_600_000
"""A made-up tankhouse ends when it was made; later than this its last shift is missing."""

_ENDINGS = ("", "-wal", "-shm", "-journal")


def demo(
    port: Annotated[
        int | None, typer.Option(min=1, max=65_535, help="Port; the first free one from 8000 on.")
    ] = None,
    again: Annotated[bool, typer.Option("--again", help="Make the tankhouse up anew.")] = False,
    serves: Annotated[
        bool, typer.Option("--serve/--no-serve", help="Serve it, or only make it.")
    ] = True,
) -> None:
    """Make up a tankhouse, take its sheets in, print three sign-ins, and serve it on this machine.

    The database is ampledger-demo.db in this folder; nothing else is touched.
    """
    path = _place()
    chosen = settings().model_copy(update={"database_url": f"sqlite:///{path}"})
    if again or not _is_fresh(path):
        _make(path, chosen)
    database = Database(chosen.database_url)
    try:
        passwords = _sign_ins(database, chosen)
        if not serves:
            said.print(f"{path}: made; `ampledger demo` serves it", markup=False)
            return
        chosen_port = port or _free_port()
        said.print(_welcome(passwords, f"http://{HOST}:{chosen_port}"))
        serve_books(chosen, database, HOST, chosen_port)
    finally:
        database.close()


def _place() -> Path:
    """The database of the demonstration: in this folder, or where temporary files are kept."""
    here = Path.cwd()
    folder = here if os.access(here, os.W_OK) else Path(tempfile.gettempdir())
    return folder / FILE


def _is_fresh(path: Path) -> bool:
    """Whether a made-up tankhouse is there that was finished a short while ago."""
    if not path.is_file():
        return False
    database = Database(f"sqlite:///{path}")
    try:
        if not readiness(database, newest_revision()).is_ready:
            return False
        with database.read() as session:
            return has_plant(session) and clock.now_ms() - tankhouse(session).made_ms < FRESH_MS
    finally:
        database.close()


def _make(path: Path, chosen: Settings) -> None:
    """Make the books beside their place, so that only finished ones are ever found there."""
    unfinished = path.with_name(f".{path.name}.{os.getpid()}.unfinished")
    with tempfile.TemporaryDirectory(prefix="ampledger-demo-") as folder:
        with bar("Making up a tankhouse") as progress:
            made_up = demo_house(clock.now_ms(), progress=progress)
            write_sheets(made_up, Path(folder))
        try:
            _fill(unfinished, made_up, Path(folder), chosen)
            _put_in_place(unfinished, path)
        finally:
            for ending in _ENDINGS:
                unfinished.with_name(unfinished.name + ending).unlink(missing_ok=True)


def _fill(unfinished: Path, made_up: House, folder: Path, chosen: Settings) -> None:
    """Take the made-up sheets in as anybody's would be."""
    database = Database(f"sqlite:///{unfinished}")
    try:
        make_books(database, read_plant(folder / "plant.toml"), made_up.name)
        with database.read() as session:
            plant = house(session)
        taken = take_in_all(database, plant, files_of([folder]), "the demo", chosen)
        if taken.refusals:
            fail(f"the made-up sheets were refused: {taken.refusals[0]}")
        bring_up_to_date(database, chosen)
    finally:
        database.close()


def _put_in_place(unfinished: Path, path: Path) -> None:
    for ending in _ENDINGS[1:]:
        path.with_name(path.name + ending).unlink(missing_ok=True)
    unfinished.replace(path)


def _sign_ins(database: Database, chosen: Settings) -> dict[str, str]:
    """Give each of the three people a new random password, by name."""
    hashing = Passwords(chosen.password_memory_kib, chosen.password_rounds)
    passwords = {person.user_name: random_password() for person in DEMO_PEOPLE}
    kept = {name: hashing.hashed(password) for name, password in passwords.items()}
    with database.write() as session:
        for person in DEMO_PEOPLE:
            name = person.user_name
            known = person_named(session, name)
            if known is None:
                add_person(session, name, person.role, kept[name], clock.now_ms(), "the demo")
            else:
                keep_password(known, kept[name])
                enable(known)
    return passwords


def _free_port() -> int:
    ports = range(FIRST_PORT, FIRST_PORT + PORTS_TRIED)
    free = next((port for port in ports if is_free(HOST, port)), None)
    return free or fail(f"every port from {ports[0]} to {ports[-1]} is taken; give a --port")


def _welcome(passwords: dict[str, str], address: str) -> Table:
    table = Table(
        "name",
        "password",
        "role",
        box=SIMPLE_HEAD,
        title=f"A made-up tankhouse on {address}",
        title_justify="left",
    )
    for person in DEMO_PEOPLE:
        table.add_row(person.user_name, passwords[person.user_name], person.role)
    table.caption = "These passwords are new each time. Ctrl+C stops it."
    return table
