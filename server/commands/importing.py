"""`ampledger import`: files and folders of sheets into the books."""

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Annotated

import typer
from rich.box import SIMPLE_HEAD
from rich.table import Table

from server import clock
from server.commands.figures import bring_up_to_date
from server.commands.terminal import HELD, REFUSED, bar, books, complained, said, sender, settings
from server.intake.errors import FileRefused
from server.intake.held import held_rows
from server.intake.kinds import ORDER
from server.intake.results import FileResult
from server.intake.sheets import open_sheets
from server.intake.sitting import limits_of
from server.intake.take_in import take_in_file
from server.settings import Settings
from server.storage.database import Database
from server.storage.plant import House, house

SHEET_ENDINGS = {".csv", ".xlsx", ".xlsm"}
"""What is taken from a folder; a file that is named is tried whatever its ending."""

_SHOWN_ROWS = 5


@dataclass(frozen=True)
class Taken:
    """What became of the files of one import."""

    results: tuple[FileResult, ...]
    refusals: tuple[FileRefused, ...]


def import_sheets(
    paths: Annotated[
        list[Path], typer.Argument(help="Sheets (CSV or XLSX), or folders of them.", metavar="PATH")
    ],
    reason: Annotated[
        str,
        typer.Option(
            help="Import as a correction, and why: rows whose key is stored with other values"
            " take their place; the former values are kept."
        ),
    ] = "",
) -> None:
    """Take sheets in: ends with 0, with 3 when rows were held, with 2 when a file was refused."""
    chosen = settings()
    with books(chosen) as database:
        with database.read() as session:
            plant = house(session)
        taken = take_in_all(database, plant, files_of(paths), sender(), chosen, reason)
        bring_up_to_date(database, chosen)
        _tell(database, taken)
    if taken.refusals:
        raise typer.Exit(REFUSED)
    if any(result.held for result in taken.results):
        raise typer.Exit(HELD)


def files_of(paths: Sequence[Path]) -> list[Path]:
    """The files that are named, and the sheets of the folders."""
    files: list[Path] = []
    for path in paths:
        if path.is_dir():
            files.extend(
                sorted(
                    entry
                    for entry in path.iterdir()
                    if entry.is_file()
                    and entry.suffix.lower() in SHEET_ENDINGS
                    and not entry.name.startswith((".", "~"))
                )
            )
        else:
            files.append(path)
    return list(dict.fromkeys(files))


def take_in_all(
    database: Database,
    plant: House,
    files: Sequence[Path],
    who: str,
    chosen: Settings,
    reason: str = "",
) -> Taken:
    """Take files in, in the order in which one sheet serves to judge the next."""
    refusals: list[FileRefused] = []
    ordered: list[tuple[int, Path]] = []
    for file in files:
        try:
            with open_sheets(file, limits=limits_of(chosen)) as opened:
                first = min(ORDER.index(sheet.kind) for sheet in opened.sheets)
                ordered.append((first, file))
        except FileRefused as refused:
            refusals.append(refused)
    results = []
    for _, file in sorted(ordered, key=lambda pair: pair[0]):
        try:
            with bar(file.name) as shown:
                results.append(
                    take_in_file(
                        database, plant, file, file.name, who, clock.now_ms(), chosen, reason, shown
                    )
                )
        except FileRefused as refused:
            refusals.append(refused)
    return Taken(tuple(results), tuple(refusals))


def _tell(database: Database, taken: Taken) -> None:
    if not taken.results and not taken.refusals:
        complained.print("ampledger: there is no sheet (CSV or XLSX) in that folder")
    if taken.results:
        said.print(summary(taken.results))
    for result in taken.results:
        for delivery in result.deliveries:
            said.print(f"{_name(result, delivery.worksheet)}: {delivery.dialect}", markup=False)
            if delivery.unknown_columns:
                columns = ", ".join(delivery.unknown_columns)
                said.print(f"  columns left unread: {columns}", markup=False)
        for note in result.notes:
            said.print(f"{result.name}: {note}", markup=False)
    _tell_held(database, taken)
    for refused in taken.refusals:
        complained.print(f"ampledger: {refused}", markup=False)


def summary(results: Sequence[FileResult]) -> Table:
    """The table of what became of each sheet."""
    table = Table(box=SIMPLE_HEAD, pad_edge=False)
    table.add_column("file", overflow="fold")
    table.add_column("sheet", no_wrap=True)
    for heading in ("rows", "stored", "known already", "held", "not believed"):
        table.add_column(heading, justify="right")
    for result in results:
        for delivery in result.deliveries:
            counts = (
                delivery.rows,
                delivery.stored,
                delivery.duplicates,
                delivery.held,
                delivery.suspect,
            )
            table.add_row(
                _name(result, delivery.worksheet),
                delivery.sheet,
                *(f"{count:,}" if count else "-" for count in counts),
            )
    return table


def _name(result: FileResult, worksheet: str | None) -> str:
    return f"{result.name}, {worksheet}" if worksheet else result.name


def _tell_held(database: Database, taken: Taken) -> None:
    """Show the first rows that each file holds, and where the others are."""
    if not any(result.held for result in taken.results):
        return
    with database.read() as session:
        for result in taken.results:
            for delivery in result.deliveries:
                rows = held_rows(session, limit=_SHOWN_ROWS, delivery_id=delivery.delivery_id)
                for row in rows:
                    said.print(f"{row.source}, line {row.line}: {row.reason}", markup=False)
    said.print(
        "Held rows wait on the page “Readings in” (or GET /api/v1/held) until someone mends or"
        " drops them.",
        markup=False,
    )
