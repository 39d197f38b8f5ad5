"""The tankhouse's set-up: its name, currency, price of energy and shifts."""

from collections.abc import Mapping
from typing import Any

from fastapi import APIRouter, Request
from sqlalchemy.orm import Session
from starlette.responses import RedirectResponse, Response

from server.intake.plant_change import change_house, house_fields
from server.intake.plant_faults import PlantFileWrong
from server.intake.plant_history import house_history
from server.science.equilibrium.tables import DEFAULT_TABLE, potential_table, table_titles
from server.storage.errors import Conflict
from server.storage.plant import House
from server.web.dependencies import Now, Reader, Superintendent, ThisHouse, Who, WriteSession
from server.web.i18n import gettext as _
from server.web.moments import moment_of
from server.web.plant_form import PlantField, faults_by_field, from_suggested, value_of
from server.web.refusals import Refused
from server.web.render import page
from server.web.sentences import sentence_of
from server.web.typed import one_line
from server.web.uploads import FormFields

MOST_SHIFTS = 6
KEYS = ("name", "currency", "energy_price_per_kwh", "standard_potentials", "shifts", "starts")

router = APIRouter(include_in_schema=False)


@router.get("/setup/house", name="setup_house")
def setup_house(
    request: Request, who: Reader, house: ThisHouse, now_ms: Now, changed: bool = False
) -> Response:
    """Show the tankhouse's set-up."""
    return _page(request, who, house, now_ms, {}, {}, changed)


@router.post("/setup/house", name="setup_house_change")
def setup_house_change(
    request: Request,
    who: Superintendent,
    form: FormFields,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Response:
    """Let the tankhouse be another from a date on."""
    typed = {name: one_line(str(value), 4000) for name, value in form.multi_items()}
    faults = _change(db, house, typed, who.sender, now_ms)
    if faults:
        return _page(request, who, house, now_ms, typed, faults)
    return RedirectResponse(f"{request.url_for('setup_house').path}?changed=yes", 303)


def _change(
    session: Session, house: House, typed: Mapping[str, str], who: str, now_ms: int
) -> dict[str, str]:
    """Change the house; answers what is wrong, by field."""
    former = house_fields(house, now_ms)
    wanted = _wanted(typed)
    changes = {key: value for key, value in wanted.items() if value != former[key]}
    if not changes:
        return {"": _("Nothing differs from what holds now.")}
    if not typed.get("why"):
        return {"why": _("Say why it changes.")}
    try:
        from_ms = moment_of(typed.get("from", ""), house, "form.from")
        with session.begin_nested():
            change_house(session, changes, from_ms, who, typed["why"], now_ms)
    except Refused as error:
        return {"from": error.faults[0]["what"]}
    except PlantFileWrong as error:
        faults = faults_by_field(error.faults, KEYS)
        return {("shifts" if key == "starts" else key): said for key, said in faults.items()}
    except Conflict as error:
        return {"from": sentence_of(error)}
    return {}


def _wanted(typed: Mapping[str, str]) -> dict[str, Any]:
    """What was typed, in the keys of the plant file; shifts that are left blank are gone."""
    shifts = [
        {
            "name": typed.get(f"shift-{place}", "").strip(),
            "starts": typed.get(f"starts-{place}", "").strip(),
        }
        for place in range(MOST_SHIFTS)
        if typed.get(f"shift-{place}", "").strip() or typed.get(f"starts-{place}", "").strip()
    ]
    price = PlantField("energy_price_per_kwh", "")
    return {
        "name": typed.get("name", "").strip(),
        "currency": typed.get("currency", "").strip().upper(),
        price.key: value_of(price, typed.get(price.key, "")),
        "standard_potentials": typed.get("standard_potentials", "").strip() or None,
        "shifts": sorted(shifts, key=lambda shift: shift["starts"]),
    }


def _page(
    request: Request,
    who: Who,
    house: House,
    now_ms: int,
    typed: Mapping[str, str],
    faults: Mapping[str, str],
    changed: bool = False,
) -> Response:
    fields = house_fields(house, now_ms)
    shifts = [(shift["name"], shift["starts"]) for shift in fields["shifts"]]
    rows = max(min(len(shifts) + 1, MOST_SHIFTS), len(shifts))
    context = {
        "house": fields,
        "shifts": [
            (
                typed.get(f"shift-{place}", shifts[place][0] if place < len(shifts) else ""),
                typed.get(f"starts-{place}", shifts[place][1] if place < len(shifts) else ""),
            )
            for place in range(rows)
        ],
        "tables": list(table_titles().items()),
        "own_table": DEFAULT_TABLE.title,
        "chosen_table": potential_table(fields["standard_potentials"] or DEFAULT_TABLE.key).title,
        "typed": typed,
        "from_ms": from_suggested(now_ms, house.time_zone, house.terms),
        "faults": faults,
        "history": house_history(house),
        "may_change": who.may("superintendent"),
        "changed": changed,
        "now_ms": now_ms,
    }
    return page(request, "setup_house.html", context, status_code=422 if faults else 200)
