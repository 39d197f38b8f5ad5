"""The commands of the contract, put together."""

import logging
import sys
from collections.abc import Sequence
from typing import Annotated

import typer
from sqlalchemy.exc import DatabaseError

from server import __version__
from server.commands import backup, demo, importing, people, serving, set_up
from server.commands.terminal import FAILED, REFUSED, complained
from server.intake.errors import IntakeError
from server.storage.errors import StorageError

app = typer.Typer(
    name="ampledger",
    help="The books of a tankhouse: current efficiency, energy per tonne, cells that need a visit.",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
)
app.command("init")(set_up.init)
app.command("import")(importing.import_sheets)
app.command("serve")(serving.serve)
app.command("demo")(demo.demo)
app.add_typer(people.user, name="user")
app.add_typer(people.token, name="token")
app.command("backup")(backup.backup)
app.command("restore")(backup.restore)
app.command("check")(set_up.check)
app.command("recompute")(set_up.recompute)


def _say_version(is_wanted: bool) -> None:
    if is_wanted:
        typer.echo(__version__)
        raise typer.Exit


@app.callback()
def ampledger(
    version: Annotated[
        bool,
        typer.Option("--version", help="Say the version.", callback=_say_version, is_eager=True),
    ] = False,
) -> None:
    """Keep the books of a tankhouse."""


def main(arguments: Sequence[str] | None = None) -> None:
    """Run one command; an error that people can mend is told in one line."""
    logging.getLogger("alembic").setLevel(logging.WARNING)
    try:
        app(args=None if arguments is None else list(arguments))
    except (IntakeError, StorageError) as error:
        complained.print(f"ampledger: {error}", markup=False)
        sys.exit(REFUSED)
    except DatabaseError as error:
        complained.print(f"ampledger: the database says: {error.orig}", markup=False)
        sys.exit(FAILED)
    except OSError as error:
        where = f"{error.filename}: " if error.filename else ""
        complained.print(f"ampledger: {where}{error.strerror or error}", markup=False)
        sys.exit(FAILED)
