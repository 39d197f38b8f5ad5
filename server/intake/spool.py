"""Files that were sent and looked at, kept until somebody says that they are to be taken in.

They lie in a folder of their own beside the books, each sending under a random name that only its
sender is told, and are gone after two hours.
"""

import re
import shutil
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path
from secrets import token_urlsafe
from typing import BinaryIO

from pydantic import TypeAdapter

from server.intake.results import FilePreview
from server.storage.errors import NotFound

LASTS_MS = 2 * 3_600_000

MOST_OF_ONE = 3
"""Sendings of one person that wait at a time; the oldest ones make room."""

_TICKET = "ticket.json"
_ID = re.compile(r"[A-Za-z0-9_-]{20,60}")


@dataclass(frozen=True)
class KeptFile:
    """One file of a sending."""

    name: str
    """As its sender called it."""
    size_bytes: int
    preview: FilePreview | None = None
    refusal: str = ""
    """Why it cannot be taken in, where it cannot."""


@dataclass(frozen=True)
class Ticket:
    """What is kept of one sending."""

    id: str
    owner: str
    sent_ms: int
    files: tuple[KeptFile, ...]
    reason: str = ""
    """Why, where the files correct what is stored."""

    @property
    def can_be_taken(self) -> bool:
        """Whether any of the files can be taken in."""
        return any(file.preview is not None for file in self.files)


_TICKETS = TypeAdapter(Ticket)


class Spool:
    """The folder in which what was sent waits."""

    def __init__(self, folder: Path) -> None:
        self._folder = folder

    def keep(self, files: Iterable[tuple[str, BinaryIO]], owner: str, now_ms: int) -> Ticket:
        """Keep files, each with its name, for their sender."""
        self._folder.mkdir(mode=0o700, parents=True, exist_ok=True)
        self._make_room(owner, now_ms)
        ticket_id = token_urlsafe(24)
        place = self._folder / ticket_id
        place.mkdir(mode=0o700)
        kept = []
        for number, (name, source) in enumerate(files):
            with (place / str(number)).open("wb") as target:
                shutil.copyfileobj(source, target, 1024 * 1024)
                kept.append(KeptFile(name, target.tell()))
        ticket = Ticket(ticket_id, owner, now_ms, tuple(kept))
        self.note(ticket)
        return ticket

    def note(self, ticket: Ticket) -> None:
        """Write down what has become known of a sending."""
        (self._folder / ticket.id / _TICKET).write_bytes(_TICKETS.dump_json(ticket))

    def waiting(self, ticket_id: str, owner: str, now_ms: int) -> Ticket:
        """What waits under a ticket.

        Raises
        ------
        NotFound
            If nothing does: it was taken in, its time is over, or somebody else sent it.
        """
        ticket = self._read(ticket_id)
        if ticket is None or ticket.owner != owner or _is_over(ticket, now_ms):
            raise NotFound(
                "file waiting here", ticket_id[:60], "it was taken in or dropped; send it again"
            )
        return ticket

    def path(self, ticket: Ticket, number: int) -> Path:
        """Where a file of a sending lies."""
        return self._folder / ticket.id / str(number)

    def drop(self, ticket: Ticket) -> None:
        """Forget a sending."""
        shutil.rmtree(self._folder / ticket.id, ignore_errors=True)

    def _make_room(self, owner: str, now_ms: int) -> None:
        """Drop what is over, what cannot be read, and the oldest sendings of this person."""
        own = []
        for place in self._folder.iterdir():
            ticket = self._read(place.name)
            if ticket is None or _is_over(ticket, now_ms):
                if ticket is not None or _was_left(place, now_ms):
                    shutil.rmtree(place, ignore_errors=True)
            elif ticket.owner == owner:
                own.append(ticket)
        own.sort(key=lambda ticket: ticket.sent_ms)
        for ticket in own[: max(len(own) - MOST_OF_ONE + 1, 0)]:
            self.drop(ticket)

    def _read(self, ticket_id: str) -> Ticket | None:
        if not _ID.fullmatch(ticket_id):
            return None
        try:
            content = (self._folder / ticket_id / _TICKET).read_bytes()
        except OSError:
            return None
        return _TICKETS.validate_json(content)


def _is_over(ticket: Ticket, now_ms: int) -> bool:
    return now_ms - ticket.sent_ms > LASTS_MS


def _was_left(place: Path, now_ms: int) -> bool:
    """Whether a folder without a ticket has been lying about: its sending broke off."""
    try:
        return now_ms - place.stat().st_mtime * 1000 > LASTS_MS
    except OSError:
        return False
