"""A new section: everything that plant.toml says of one."""

from collections.abc import Mapping

from fastapi import APIRouter, Request
from sqlalchemy.orm import Session
from starlette.responses import RedirectResponse, Response

from server.intake.plant_change import add_section
from server.intake.plant_faults import PlantFileWrong
from server.science.processes import PROCESSES
from server.storage.errors import Conflict
from server.storage.plant import House
from server.web.dependencies import Now, Superintendent, ThisHouse, WriteSession
from server.web.i18n import gettext as _
from server.web.pages.words import process_words
from server.web.plant_form import (
    LIMITS,
    PlantField,
    faults_by_field,
    limits_of,
    section_fields_flat,
    section_groups,
    value_of,
)
from server.web.render import page
from server.web.sentences import sentence_of
from server.web.typed import one_line
from server.web.uploads import FormFields

OTHER = "other"
_FIRST = {
    "meter_accuracy_mv": "2",
    "current_accuracy_pct": "0.5",
    "scale_accuracy_pct": "0.2",
    "rows": "2",
}
"""What the form starts with: the plant file's own values where it names none."""

router = APIRouter(include_in_schema=False)


@router.get("/setup/new-section", name="setup_new")
def setup_new(request: Request, _who: Superintendent, house: ThisHouse) -> Response:
    """Show the empty form."""
    return _page(request, house, _FIRST, {})


@router.post("/setup/new-section", name="setup_new_send")
def setup_new_send(
    request: Request,
    who: Superintendent,
    form: FormFields,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Response:
    """Add a section."""
    typed = {name: one_line(str(value), 4000) for name, value in form.multi_items()}
    faults = _add(db, typed, who.sender, now_ms)
    if faults:
        return _page(request, house, typed, faults)
    name = typed["name"].strip()
    path = request.url_for("setup_section", section_name=name).path
    return RedirectResponse(f"{path}?changed=yes", 303)


def _add(session: Session, typed: Mapping[str, str], who: str, now_ms: int) -> dict[str, str]:
    """Add the section; answers what is wrong, by field."""
    if not typed.get("why"):
        return {"why": _("Say why it is added.")}
    own = {
        field.key: value_of(field, typed.get(field.key, ""))
        for field in section_fields_flat().values()
        if field.key not in LIMITS
    }
    is_other = typed.get("process") == OTHER
    named = {
        "name": typed.get("name", "").strip(),
        "process": typed.get("process", ""),
        "metal": (typed.get("metal", "").strip() or None) if is_other else None,
        "electrons": (
            value_of(PlantField("electrons", "", kind="whole"), typed.get("electrons", ""))
            if is_other
            else None
        ),
        "cell_volts": limits_of(typed),
    }
    try:
        with session.begin_nested():
            add_section(session, {**own, **named}, 0, who, typed["why"], now_ms)
    except PlantFileWrong as error:
        keys = ["name", "process", "metal", "electrons", *section_fields_flat()]
        return faults_by_field(error.faults, keys)
    except Conflict as error:
        return {"name": sentence_of(error)}
    return {}


def _page(
    request: Request, house: House, typed: Mapping[str, str], faults: Mapping[str, str]
) -> Response:
    context = {
        "groups": section_groups(house.currency),
        "processes": [(name, process_words(name)) for name in PROCESSES]
        + [(OTHER, _("Another, of the metal below"))],
        "typed": typed,
        "faults": faults,
    }
    return page(request, "setup_new.html", context, status_code=422 if faults else 200)
