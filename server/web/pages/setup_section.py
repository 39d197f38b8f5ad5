"""One section's set-up: what it is, changes from a date on, and what changed before."""

from collections.abc import Mapping

from fastapi import APIRouter, Request
from sqlalchemy.orm import Session
from starlette.responses import RedirectResponse, Response

from server.intake.plant_change import change_section, section_fields
from server.intake.plant_faults import PlantFileWrong
from server.intake.plant_history import section_history
from server.storage.errors import Conflict
from server.storage.plant import House, SectionPlan
from server.web.dependencies import Now, Reader, Superintendent, ThisHouse, Who, WriteSession
from server.web.i18n import gettext as _
from server.web.moments import moment_of
from server.web.pages.words import metal_words, process_words
from server.web.plant_form import (
    as_typed,
    changes_of,
    faults_by_field,
    from_suggested,
    section_fields_flat,
    section_groups,
)
from server.web.refusals import Refused
from server.web.render import page
from server.web.sentences import sentence_of
from server.web.typed import one_line
from server.web.uploads import FormFields

router = APIRouter(include_in_schema=False)


@router.get("/setup/sections/{section_name}", name="setup_section")
def setup_section(
    request: Request,
    section_name: str,
    who: Reader,
    house: ThisHouse,
    now_ms: Now,
    changed: bool = False,
) -> Response:
    """Show a section's set-up."""
    return _page(request, who, house, house.section(section_name), now_ms, {}, {}, changed)


@router.post("/setup/sections/{section_name}", name="setup_section_change")
def setup_section_change(
    request: Request,
    section_name: str,
    who: Superintendent,
    form: FormFields,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Response:
    """Let a section be another from a date on."""
    plan = house.section(section_name)
    typed = {name: one_line(str(value), 4000) for name, value in form.multi_items()}
    faults = _change(db, house, plan, typed, who.sender, now_ms)
    if faults:
        return _page(request, who, house, plan, now_ms, typed, faults)
    path = request.url_for("setup_section", section_name=plan.name).path
    return RedirectResponse(f"{path}?changed=yes", 303)


def _change(
    session: Session,
    house: House,
    plan: SectionPlan,
    typed: Mapping[str, str],
    who: str,
    now_ms: int,
) -> dict[str, str]:
    """Change the section; answers what is wrong, by field."""
    changes = changes_of(typed, as_typed(section_fields(plan, now_ms)))
    if not changes:
        return {"": _("Nothing differs from what holds now.")}
    if not typed.get("why"):
        return {"why": _("Say why it changes.")}
    try:
        from_ms = moment_of(typed.get("from", ""), house, "form.from")
        with session.begin_nested():
            change_section(session, plan.name, changes, from_ms, who, typed["why"], now_ms)
    except Refused as error:
        return {"from": error.faults[0]["what"]}
    except PlantFileWrong as error:
        return faults_by_field(error.faults, list(section_fields_flat()))
    except Conflict as error:
        return {"from": sentence_of(error)}
    return {}


def _page(
    request: Request,
    who: Who,
    house: House,
    plan: SectionPlan,
    now_ms: int,
    typed: Mapping[str, str],
    faults: Mapping[str, str],
    changed: bool = False,
) -> Response:
    context = {
        "section": plan,
        "process": process_words(plan.process),
        "metal": metal_words(plan.metal),
        "groups": section_groups(house.currency),
        "labels": {key: field.label for key, field in section_fields_flat().items()},
        "shown": as_typed(section_fields(plan, now_ms)),
        "typed": typed,
        "from_ms": from_suggested(now_ms, house.time_zone, plan.terms),
        "faults": faults,
        "history": section_history(plan),
        "may_change": who.may("superintendent"),
        "changed": changed,
        "now_ms": now_ms,
    }
    return page(request, "setup_section.html", context, status_code=422 if faults else 200)
