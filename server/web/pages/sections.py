"""All sections at a glance: the floor of each, as it stands now."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse
from sqlalchemy.orm import Session

from server.accounts.floor import section_floor
from server.accounts.standing import Standing, section_standing
from server.figures.floor import NARROW_LINE, Floor, floor
from server.storage.plant import House
from server.web.dependencies import DbSession, Now, Reader, ThisHouse, ThisSite
from server.web.pages.floor_words import floor_sentence, needle_words
from server.web.pages.words import process_words
from server.web.render import page

router = APIRouter(include_in_schema=False)


@dataclass(frozen=True)
class SectionOnFloor:
    """One section: how it stands, and its floor drawn for a desk and for a phone."""

    standing: Standing
    wide: Floor
    narrow: Floor
    sentence: str


@router.get("/sections", name="sections")
def sections(
    request: Request, _who: Reader, db: DbSession, house: ThisHouse, now_ms: Now, site: ThisSite
) -> HTMLResponse:
    """Show the floor of every section."""
    max_hold_ms = site.settings.max_hold_ms
    found = [_drawn(db, house, plan.name, now_ms, max_hold_ms) for plan in house.sections]
    words = {"needle_words": needle_words, "process_words": process_words}
    return page(request, "sections.html", {"sections": found, **words})


def _drawn(
    session: Session, house: House, name: str, now_ms: int, max_hold_ms: int
) -> SectionOnFloor:
    cells = section_floor(session, house, name, now_ms)
    rows = house.section(name).terms_at(now_ms).rows
    return SectionOnFloor(
        standing=section_standing(session, house, name, now_ms, max_hold_ms),
        wide=floor(cells, rows),
        narrow=floor(cells, rows, NARROW_LINE),
        sentence=floor_sentence(cells),
    )
