"""`ampledger user` and `ampledger token`: who may sign in, and which programs may call."""

import getpass
import sys
from enum import StrEnum
from typing import Annotated

import typer
from rich.box import SIMPLE_HEAD
from rich.table import Table

from server import clock
from server.commands.terminal import REFUSED, books, complained, fail, said, sender, settings
from server.settings import Settings
from server.storage.people import (
    ROLES,
    Person,
    add_person,
    add_token,
    change_role,
    disable,
    enable,
    keep_password,
    people,
    person_named,
    revoke_token,
    tokens,
)
from server.web.security import Passwords, fault_of_password, new_token, token_hash

# The names come from the table of roles, which a type checker does not work out.
Role = StrEnum("Role", {role: role for role in ROLES})  # type: ignore[misc]

user = typer.Typer(no_args_is_help=True, help="People who sign in.")
token = typer.Typer(no_args_is_help=True, help="Tokens of programs that call the API.")

Name = Annotated[str, typer.Argument(metavar="NAME", help="The name, whatever its case.")]
WithRole = Annotated[Role, typer.Option("--role", help="What they may do.")]
FromStdin = Annotated[
    bool, typer.Option("--password-stdin", help="Read the password from standard input.")
]


@user.command("add")
def add_user(name: Name, role: WithRole, password_stdin: FromStdin = False) -> None:
    """Add somebody who signs in; the password is asked for twice."""
    chosen = settings()
    with books(chosen) as database:
        wanted = _name(name)
        with database.read() as session:
            if person_named(session, wanted) is not None:
                fail(f"there is somebody named {wanted} already", REFUSED)
        kept = _hashed(chosen, _password(wanted, password_stdin))
        with database.write() as session:
            add_person(session, wanted, role.value, kept, clock.now_ms(), sender())
    said.print(f"{wanted} can sign in as {role.value}", markup=False)


@user.command("list")
def list_users() -> None:
    """List everyone, with their roles."""
    with books(settings()) as database, database.read() as session:
        table = Table("name", "role", "may sign in", "added by", box=SIMPLE_HEAD)
        for person in people(session):
            is_active = "yes" if person.is_active else "no"
            table.add_row(person.name, person.role, is_active, person.made_by)
        said.print(table)


@user.command("password")
def new_password_of(name: Name, password_stdin: FromStdin = False) -> None:
    """Give somebody a new password; every session they have ends."""
    chosen = settings()
    with books(chosen) as database:
        with database.read() as session:
            known = person_named(session, _name(name))
            wanted = known.name if known else fail(f"there is nobody named {name}", REFUSED)
        kept = _hashed(chosen, _password(wanted, password_stdin))
        with database.write() as session:
            person = person_named(session, wanted)
            assert person is not None
            keep_password(person, kept)
    said.print(f"{wanted} has a new password", markup=False)


@user.command("role")
def new_role_of(name: Name, role: WithRole) -> None:
    """Give somebody another role."""
    with books(settings()) as database, database.write() as session:
        known = person_named(session, _name(name))
        person: Person = known or fail(f"there is nobody named {name}", REFUSED)
        change_role(session, person, role.value)
        said.print(f"{person.name} is a {role.value}", markup=False)


@user.command("disable")
def disable_user(name: Name) -> None:
    """Let somebody sign in no more; what they recorded keeps their name."""
    with books(settings()) as database, database.write() as session:
        known = person_named(session, _name(name))
        person: Person = known or fail(f"there is nobody named {name}", REFUSED)
        disable(session, person)
        said.print(f"{person.name} can no longer sign in", markup=False)


@user.command("enable")
def enable_user(name: Name) -> None:
    """Let somebody sign in again."""
    with books(settings()) as database, database.write() as session:
        known = person_named(session, _name(name))
        person: Person = known or fail(f"there is nobody named {name}", REFUSED)
        enable(person)
        said.print(f"{person.name} can sign in again", markup=False)


@token.command("new")
def make_token(name: Name, role: WithRole) -> None:
    """Make a token for a program; it is printed once and not kept."""
    secret = new_token()
    with books(settings()) as database, database.write() as session:
        add_token(session, _name(name), role.value, token_hash(secret), clock.now_ms(), sender())
    complained.print("This token is shown once; it is not kept:", markup=False)
    said.print(secret, markup=False)


@token.command("list")
def list_tokens() -> None:
    """List the tokens, without their secrets."""
    with books(settings()) as database, database.read() as session:
        table = Table("name", "role", "good", "made by", box=SIMPLE_HEAD)
        for known in tokens(session):
            is_good = "yes" if known.revoked_ms is None else "no"
            table.add_row(known.name, known.role, is_good, known.made_by)
        said.print(table)


@token.command("revoke")
def revoke(name: Name) -> None:
    """Make a token good for nothing, for ever."""
    with books(settings()) as database, database.write() as session:
        wanted = _name(name)
        known = [t for t in tokens(session) if t.name.casefold() == wanted.casefold()]
        if not known:
            fail(f"there is no token named {wanted}", REFUSED)
        revoke_token(session, known[0].id, clock.now_ms())
    said.print(f"the token {wanted} is good for nothing now", markup=False)


def _name(name: str) -> str:
    wanted = " ".join(name.split())
    if not wanted or not wanted.isprintable():
        fail("a name must be given", REFUSED)
    return wanted


def _password(name: str, is_piped: bool) -> str:
    """The password as somebody types it twice, or as another program pipes it in."""
    if is_piped:
        password = sys.stdin.readline().rstrip("\r\n")
    elif sys.stdin.isatty():
        password = getpass.getpass(f"Password of {name}: ")
        if getpass.getpass("Once more: ") != password:
            fail("the two are not the same", REFUSED)
    else:
        fail("there is no terminal to ask on; say --password-stdin and pipe the password", REFUSED)
    if fault := fault_of_password(password, name):
        fail(fault, REFUSED)
    return password


def _hashed(chosen: Settings, password: str) -> str:
    return Passwords(chosen.password_memory_kib, chosen.password_rounds).hashed(password)
