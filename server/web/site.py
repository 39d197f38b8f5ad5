"""What one running server holds for all its requests."""

import asyncio
from dataclasses import dataclass, field

from starlette.requests import HTTPConnection

from server.settings import Settings
from server.storage.condition import newest_revision
from server.storage.database import Database
from server.web.live import Live
from server.web.metrics import Metrics
from server.web.security import Passwords
from server.web.sign_in import SignInLimit


@dataclass
class Site:
    """The settings, the books, and what is counted; one for each application."""

    settings: Settings
    database: Database
    passwords: Passwords
    sign_in_limit: SignInLimit
    live: Live
    metrics: Metrics = field(default_factory=Metrics)
    newest_revision: str | None = field(default_factory=newest_revision)
    turn_to_write: asyncio.Lock = field(default_factory=asyncio.Lock)
    """Writers wait here, where waiting takes no thread, instead of at the database's lock."""


def site(settings: Settings, database: Database | None = None) -> Site:
    """A site of these settings; its database is opened unless one is given."""
    books = database or Database(settings.database_url)
    return Site(
        settings=settings,
        database=books,
        passwords=Passwords(settings.password_memory_kib, settings.password_rounds),
        sign_in_limit=SignInLimit(settings.sign_in_tries),
        live=Live(books),
    )


def site_of(connection: HTTPConnection) -> Site:
    """The site that a request is made to."""
    found = connection.app.state.site
    assert isinstance(found, Site)
    return found
