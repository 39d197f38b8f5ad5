"""The first page: every section now, what adds up over the house, and which cell to see to."""

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse
from sqlalchemy.orm import Session

from server.accounts.periods import DAY_MS
from server.accounts.today import house_today
from server.intake.held import held_counts
from server.intake.suspicion import suspect_count
from server.storage.plant import House
from server.watch.worklist import worklist
from server.web.dependencies import DbSession, Now, Reader, ThisHouse, ThisSite
from server.web.live import live_token
from server.web.pages.words import metal_words, process_words
from server.web.render import page

router = APIRouter(include_in_schema=False)

FIRST_FLAGS, MOST_FLAGS = 8, 40
"""Open flags that are listed at once, and that are listed at all; the others are folded away."""

_LONG_AGO_MS = 7 * DAY_MS
"""With nothing newer than this, every figure of the page would be missing."""


@router.get("/", name="today")
def today(
    request: Request, _who: Reader, db: DbSession, house: ThisHouse, now_ms: Now, site: ThisSite
) -> HTMLResponse:
    """Show the house as it is now."""
    live = {"live": live_token(db)}
    return page(request, "today.html", live | _view(db, house, now_ms, site.settings.max_hold_ms))


def _view(session: Session, house: House, now_ms: int, max_hold_ms: int) -> dict[str, object]:
    found = house_today(session, house, now_ms, max_hold_ms)
    flags = worklist(session, house, now_ms)
    last_ms = found.last_recorded_ms
    return {
        "house": found,
        "is_long_ago": last_ms is not None and last_ms < now_ms - _LONG_AGO_MS,
        "currency": house.currency,
        "first": flags[:FIRST_FLAGS],
        "others": flags[FIRST_FLAGS:MOST_FLAGS],
        "unlisted": max(len(flags) - MOST_FLAGS, 0),
        "held": sum(held_counts(session).values()),
        "doubted": suspect_count(session),
        "metal_words": metal_words,
        "process_words": process_words,
    }
