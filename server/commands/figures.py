"""Bringing derived figures up to date, with a bar."""

from collections.abc import Callable

from server import jobs
from server.commands.terminal import Bar, bar
from server.intake.outages import refresh_bypasses
from server.settings import Settings
from server.storage.database import Database
from server.storage.plant import house
from server.storage.stale import pending


def bring_up_to_date(database: Database, settings: Settings) -> None:
    """Work out what deliveries left to be worked out."""
    with bar("Working out the figures") as shown:
        jobs.catch_up_fully(database, settings, _followed(database, shown))


def recompute(database: Database, settings: Settings) -> None:
    """Work everything derived out anew, from the outages on."""
    with database.write() as session:
        for section in house(session).sections:
            refresh_bypasses(session, section)
    with bar("Working everything out anew") as shown:
        jobs.recompute(database, settings, _followed(database, shown))


def _followed(database: Database, shown: Bar) -> Callable[[int], None]:
    """Show how much of the time that was to be worked out is done."""
    most = 0

    def follow(_stretches: int) -> None:
        nonlocal most
        with database.read() as session:
            left_ms = sum(stretch.to_ms - stretch.from_ms for stretch in pending(session))
        most = max(most, left_ms)
        shown(most - left_ms, most or 1)

    follow(0)
    return follow
