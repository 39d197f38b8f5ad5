"""Work that is done after a delivery, or when the books are to be rebuilt."""

import time
from collections.abc import Callable

from sqlalchemy.orm import Session

from server.accounts.rollup import bring_up_to_date, next_block
from server.intake.outages import refresh_bypasses
from server.settings import Settings
from server.storage.database import Database
from server.storage.kept_house import kept_house
from server.storage.rebuild import forget_derived, record_span
from server.storage.stale import mark, pending

Progress = Callable[[int], None]
"""Told how many stretches are left."""


def catch_up(session: Session, settings: Settings, budget_s: float | None = None) -> int:
    """Bring derived figures up to date within a session; answers how many stretches are left."""
    until = None if budget_s is None else time.monotonic() + budget_s
    plant = kept_house(session)
    while (block := next_block(session)) is not None:
        bring_up_to_date(session, plant, block, settings.max_hold_ms)
        if until is not None and time.monotonic() > until:
            break
    return len(pending(session))


def catch_up_fully(
    database: Database, settings: Settings, progress: Progress | None = None
) -> None:
    """Bring derived figures up to date, one block a transaction, so that it can be resumed."""
    while True:
        with database.write() as session:
            block = next_block(session)
            if block is None:
                return
            bring_up_to_date(session, kept_house(session), block, settings.max_hold_ms)
            left = len(pending(session))
        if progress is not None:
            progress(left)


def recompute(database: Database, settings: Settings, progress: Progress | None = None) -> None:
    """Forget everything derived and work it out again from what was recorded."""
    with database.write() as session:
        forget_derived(session)
        for section in kept_house(session).sections:
            refresh_bypasses(session, section)
            for kind, span in record_span(session, section).items():
                mark(session, section.id, kind, *span)
    catch_up_fully(database, settings, progress)
