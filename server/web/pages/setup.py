"""Plant set-up: what the tankhouse and its sections are now, and the same as a file."""

from fastapi import APIRouter, Request
from starlette.responses import Response

from server.intake.plant_change import house_fields, plant_toml, section_fields
from server.web.dependencies import DbSession, Now, Reader, ThisHouse
from server.web.pages.words import process_words
from server.web.render import page

router = APIRouter(include_in_schema=False)


@router.get("/setup", name="setup")
def setup(request: Request, who: Reader, house: ThisHouse, now_ms: Now) -> Response:
    """Show the plant as it is now."""
    context = {
        "house": house_fields(house, now_ms),
        "sections": [
            (section, section_fields(section, now_ms), section.terms_at(now_ms).from_ms)
            for section in house.sections
        ],
        "may_change": who.may("superintendent"),
        "process_words": process_words,
    }
    return page(request, "setup.html", context)


@router.get("/setup/plant.toml", name="setup_file")
def setup_file(_who: Reader, db: DbSession, now_ms: Now) -> Response:
    """Give the plant as it is now as a plant file."""
    headers = {"content-disposition": 'attachment; filename="plant.toml"'}
    return Response(plant_toml(db, now_ms), headers=headers, media_type="application/toml")
