"""A sending before it is taken in: kept, looked through, and taken in when somebody says so."""

from collections.abc import Sequence
from dataclasses import replace
from typing import BinaryIO

from sqlalchemy.orm import Session

from server.intake.errors import FileRefused
from server.intake.preview import preview_file
from server.intake.results import FileResult
from server.intake.sitting import IntakeSettings
from server.intake.spool import KeptFile, Spool, Ticket
from server.intake.take_in import take_in_file
from server.storage.database import Database
from server.storage.plant import House


def look_through(
    session: Session,
    house: House,
    spool: Spool,
    ticket: Ticket,
    now_ms: int,
    settings: IntakeSettings,
    reason: str = "",
) -> Ticket:
    """Tell of each file of a sending what it would bring, and note it with the files.

    With a `reason` they are looked at as corrections of what is stored.
    """
    files = []
    for number, file in enumerate(ticket.files):
        try:
            preview = preview_file(
                session, house, spool.path(ticket, number), file.name, now_ms, settings, reason
            )
        except FileRefused as error:
            files.append(KeptFile(file.name, file.size_bytes, refusal=str(error)))
        else:
            files.append(KeptFile(file.name, file.size_bytes, preview))
    looked_at = replace(ticket, files=tuple(files), reason=reason)
    spool.note(looked_at)
    return looked_at


def keep_and_look(
    session: Session,
    house: House,
    spool: Spool,
    files: Sequence[tuple[str, BinaryIO]],
    owner: str,
    now_ms: int,
    settings: IntakeSettings,
) -> Ticket:
    """Keep what was sent, and tell what it would bring."""
    ticket = spool.keep(files, owner, now_ms)
    return look_through(session, house, spool, ticket, now_ms, settings)


def take_in_sending(
    database: Database,
    house: House,
    spool: Spool,
    ticket: Ticket,
    now_ms: int,
    settings: IntakeSettings,
) -> list[FileResult]:
    """Take in every file of a sending that can be read, in transactions of its own."""
    taken = [
        take_in_file(
            database,
            house,
            spool.path(ticket, number),
            file.name,
            ticket.owner,
            now_ms,
            settings,
            ticket.reason,
        )
        for number, file in enumerate(ticket.files)
        if file.preview is not None
    ]
    spool.drop(ticket)
    return taken
