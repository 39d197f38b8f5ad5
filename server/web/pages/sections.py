"""All sections at a glance: the floor of each, as it stands now."""

from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse
from sqlalchemy.orm import Session

from server.accounts.floor import house_floors
from server.accounts.standing import Standing, section_standing
from server.figures.floor import SMALL_LINE, Floor, floor
from server.storage.plant import House
from server.web.dependencies import DbSession, Now, Reader, ThisHouse, ThisSite
from server.web.pages.floor_words import floor_sentence
from server.web.pages.words import process_words
from server.web.render import page

router = APIRouter(include_in_schema=False)


@dataclass(frozen=True)
class SectionOnFloor:
    """One section: how it stands, and its floor in small."""

    standing: Standing
    drawing: Floor
    sentence: str


@router.get("/sections", name="sections")
def sections(
    request: Request, _who: Reader, db: DbSession, house: ThisHouse, now_ms: Now, site: ThisSite
) -> HTMLResponse:
    """Show the floor of every section."""
    found = _drawn(db, house, now_ms, site.settings.max_hold_ms)
    return page(request, "sections.html", {"sections": found, "process_words": process_words})


def _drawn(session: Session, house: House, now_ms: int, max_hold_ms: int) -> list[SectionOnFloor]:
    floors = house_floors(session, house, now_ms)
    return [
        SectionOnFloor(
            standing=section_standing(session, house, plan.name, now_ms, max_hold_ms),
            drawing=floor(cells, plan.terms_at(now_ms).rows, SMALL_LINE),
            sentence=floor_sentence(cells),
        )
        for plan, cells in zip(house.sections, floors, strict=True)
    ]
