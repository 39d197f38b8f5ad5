"""Readings that can be read and not believed, until somebody confirms, corrects or withdraws."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from math import isfinite
from typing import Annotated, Literal
from urllib.parse import urlencode

from fastapi import APIRouter, Depends, Query, Request
from sqlalchemy.orm import Session
from starlette.datastructures import FormData
from starlette.responses import RedirectResponse, Response

from server.intake.suspicion import confirm, correct, suspect_count, suspect_readings, withdraw
from server.storage.errors import StorageError
from server.storage.plant import House
from server.web.dependencies import (
    DbSession,
    Now,
    Reader,
    Superintendent,
    ThisHouse,
    Who,
    WriteSession,
)
from server.web.i18n import gettext as _
from server.web.i18n import ngettext
from server.web.render import page
from server.web.sentences import sentence_of
from server.web.sheet_words import source_name
from server.web.typed import one_line, whole_number, whole_numbers
from server.web.uploads import FormFields

ON_ONE_PAGE = 50
_MOST_VOLTS = 1000.0

router = APIRouter(include_in_schema=False)


@dataclass(frozen=True)
class Shown:
    """Which readings are shown: of one section or of all, waiting or decided on, from where on."""

    section: Annotated[str, Query(max_length=200)] = ""
    state: Literal["open", "confirmed", "corrected", "withdrawn"] = "open"
    before: Annotated[int | None, Query(ge=1, lt=2**53)] = None
    decision: Annotated[str, Query(max_length=20)] = ""
    done: Annotated[int, Query(ge=0, lt=2**31)] = 0

    def address(self, **other: object) -> str:
        """The address of the same list, with some of it changed."""
        kept = {"section": self.section, "state": self.state, "before": self.before} | other
        wanted = {name: value for name, value in kept.items() if value not in ("", None, "open")}
        return f"?{urlencode(wanted)}" if wanted else "?"


@dataclass(frozen=True)
class Decided:
    """What was decided on which readings, as it was sent."""

    decision: str = ""
    why: str = ""
    ids: tuple[int, ...] = ()
    volts: Mapping[int, str] = field(default_factory=dict)
    faults: Mapping[int, str] = field(default_factory=dict)
    """By reading; what is wrong with the whole stands under 0."""


@router.get("/readings-in/suspects", name="suspects")
def suspects(
    request: Request,
    who: Reader,
    db: DbSession,
    house: ThisHouse,
    shown: Annotated[Shown, Depends()],
) -> Response:
    """Show the readings that are not believed."""
    return _page(request, who, db, house, shown, Decided())


@router.post("/readings-in/suspects", name="suspects_decide")
def suspects_decide(
    request: Request,
    who: Superintendent,
    form: FormFields,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Response:
    """Confirm, correct or withdraw the readings that were ticked: all of them, or none."""
    decided = _decided(form)
    faults = _faults(decided)
    if not faults:
        with db.begin_nested() as attempt:
            faults = _decide(db, house, decided, who.sender, now_ms)
            if faults:
                attempt.rollback()
    section = str(form.get("section", ""))
    if faults:
        decided = Decided(decided.decision, decided.why, decided.ids, decided.volts, faults)
        return _page(request, who, db, house, Shown(section), decided)
    told = {"section": section, "decision": decided.decision, "done": len(decided.ids)}
    return RedirectResponse(f"{request.url_for('suspects').path}?{urlencode(told)}", 303)


def _decided(form: FormData) -> Decided:
    volts = {
        number: str(value).strip()
        for name, value in form.multi_items()
        if name.startswith("volts-")
        and (number := whole_number(name.removeprefix("volts-"))) is not None
    }
    ids = tuple(whole_numbers(form.getlist("reading")))
    return Decided(str(form.get("decision", "")), one_line(str(form.get("why", ""))), ids, volts)


def _faults(decided: Decided) -> dict[int, str]:
    """What is wrong with a decision before it is tried."""
    if not decided.ids:
        return {0: _("Tick the readings that are meant.")}
    if not decided.why:
        return {0: _("Say why.")}
    if decided.decision == "correct":
        return {
            place: _("Type the right voltage, in V.")
            for place in decided.ids
            if _volts(decided.volts.get(place, "")) is None
        }
    return {}


def _decide(
    session: Session, house: House, decided: Decided, who: str, now_ms: int
) -> dict[int, str]:
    """Do what was decided; answers what could not be done, by reading."""
    faults = {}
    for place in decided.ids:
        try:
            match decided.decision:
                case "confirm":
                    confirm(session, house, place, who, decided.why, now_ms)
                case "correct":
                    volts = _volts(decided.volts[place])
                    assert volts is not None
                    correct(session, house, place, volts, who, decided.why, now_ms)
                case "withdraw":
                    withdraw(session, house, place, who, decided.why, now_ms)
                case _:
                    return {0: _("Nothing was changed: the form did not say what to do.")}
        except StorageError as error:
            faults[place] = sentence_of(error)
    return faults


def _volts(text: str) -> float | None:
    """The voltage of a text, with a decimal point or comma; None where it is none."""
    try:
        volts = float(text.replace(",", "."))
    except ValueError:
        return None
    return volts if isfinite(volts) and abs(volts) < _MOST_VOLTS else None


def _page(
    request: Request, who: Who, session: Session, house: House, shown: Shown, decided: Decided
) -> Response:
    found = suspect_readings(
        session, house, shown.state, shown.section or None, ON_ONE_PAGE + 1, shown.before
    )
    rows = found[:ON_ONE_PAGE]
    context = {
        "rows": rows,
        "all": suspect_count(session),
        "sections": [section.name for section in house.sections],
        "shown": shown,
        "older": rows[-1].id if len(found) > ON_ONE_PAGE else None,
        "decided": decided,
        "may_decide": who.may("superintendent") and shown.state == "open",
        "source_name": source_name,
        "done": _done_words(shown.decision, shown.done),
    }
    status = 422 if decided.faults else 200
    return page(request, "suspects.html", context, status_code=status)


def _done_words(decision: str, count: int) -> str:
    """What became of the readings that were decided on last."""
    words = {
        "confirm": ngettext(
            "%(num)s reading is confirmed and counts from now on.",
            "%(num)s readings are confirmed and count from now on.",
            count,
        ),
        "correct": ngettext(
            "%(num)s reading is corrected; what was entered is kept beside it.",
            "%(num)s readings are corrected; what was entered is kept beside them.",
            count,
        ),
        "withdraw": ngettext(
            "%(num)s reading is withdrawn; what was entered stays on record.",
            "%(num)s readings are withdrawn; what was entered stays on record.",
            count,
        ),
    }
    return words[decision] % {"num": count} if decision in words and count else ""
