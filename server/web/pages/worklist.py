"""The work list: open flags with what they cost, and what people do about them."""

from dataclasses import dataclass
from typing import Annotated
from urllib.parse import urlencode

from fastapi import APIRouter, Depends, Query, Request
from sqlalchemy.orm import Session
from starlette.datastructures import FormData
from starlette.responses import RedirectResponse, Response

from server.intake.take_in import take_in_records
from server.settings import Settings
from server.storage.plant import House
from server.watch.acts import ActRefused, Meant, Wanted, act_on, flag_meant
from server.watch.life import DAY_MS, LONGEST_SHELF_MS
from server.watch.planned import planned_stops
from server.watch.record import coming_back
from server.watch.worklist import worklist as open_flags
from server.web.act_words import act_fault
from server.web.api.times import written
from server.web.dependencies import (
    DbSession,
    Now,
    Operator,
    Planner,
    Reader,
    ThisHouse,
    ThisSite,
    Who,
    WriteSession,
)
from server.web.i18n import gettext as _
from server.web.live import live_token
from server.web.pages import worklist_words as words
from server.web.pages.worklist_view import (
    ON_ONE_PAGE,
    ON_ONE_SHEET,
    Shown,
    groups,
    shown_of,
    totals,
    who_can_work,
)
from server.web.render import page
from server.web.typed import one_line, whole_number
from server.web.uploads import FormFields

router = APIRouter(include_in_schema=False)

_MOST_AGAIN = 15
"""Cells that come back again and again or deserve a planned stop, as far as they are listed."""

_SHELF_DAYS = (1, 2, 3, 5, LONGEST_SHELF_MS // DAY_MS)


@dataclass(frozen=True)
class Told:
    """What was done last, as the address tells it."""

    done: Annotated[str, Query(max_length=20)] = ""
    where: Annotated[str, Query(max_length=250)] = ""


@dataclass(frozen=True)
class Tried:
    """A form that could not be taken: of which flag, what is wrong, and what was typed."""

    meant: Meant | None = None
    panel: str = ""
    """find or more."""
    fault: str = ""
    reason: str = ""
    cathode: str = ""
    action: str = ""


@router.get("/worklist", name="worklist")
def worklist(
    request: Request,
    who: Reader,
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    shown: Annotated[Shown, Depends()],
    told: Annotated[Told, Depends()],
) -> Response:
    """Show what to see to."""
    return _page(request, who, db, house, now_ms, shown, told, Tried())


@router.post("/worklist/acts", name="worklist_act")
def worklist_act(
    request: Request,
    who: Planner,
    form: FormFields,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Response:
    """Mark a flag as seen, give it to somebody, shelve or close it."""
    meant, shown = _meant(form), shown_of(_text(form, "back"))
    act, reason = _text(form, "act"), one_line(_text(form, "reason"))
    days = whole_number(_text(form, "days"))
    until_ms = None if days is None else now_ms + days * DAY_MS
    wanted = Wanted(act, until_ms, reason, one_line(_text(form, "assigned_to"), 200))
    try:
        if act not in ("seen", "working", "shelved", "unshelved", "closed"):
            raise ActRefused("act", act)
        act_on(db, house, meant, wanted, who.sender, now_ms)
    except ActRefused as error:
        fault = act_fault(error)
        tried = Tried(meant, "more", fault, reason=reason)
        return _page(request, who, db, house, now_ms, shown, Told(), tried)
    return _back(request, shown, act, meant)


@router.post("/worklist/finds", name="worklist_find")
def worklist_find(
    request: Request,
    who: Operator,
    form: FormFields,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
    site: ThisSite,
) -> Response:
    """Record what was found at a flagged cell, and close the flag with it."""
    meant, shown = _meant(form), shown_of(_text(form, "back"))
    find = {
        "found": _text(form, "found"),
        "cathode": _text(form, "cathode").strip(),
        "action": one_line(_text(form, "action")),
    }
    fault = _find_fault(db, house, meant, find, who, now_ms, site.settings)
    if fault:
        tried = Tried(meant, "find", fault, cathode=find["cathode"], action=find["action"])
        return _page(request, who, db, house, now_ms, shown, Told(), tried)
    return _back(request, shown, "found", meant)


def _find_fault(
    session: Session,
    house: House,
    meant: Meant,
    find: dict[str, str],
    who: Who,
    now_ms: int,
    settings: Settings,
) -> str:
    """Take a find in and close the flag with it; answers what is wrong, or nothing.

    What a sheet's row would be held for is told at once here, and nothing is stored.
    """
    flag_meant(session, house, meant)
    if find["found"] not in words.FOUND:
        return _("Choose what was found.")
    at_ms = now_ms - now_ms % 1000
    record = {"at": written(at_ms), "section": meant.section, "cell": meant.cell}
    record |= {name: value for name, value in find.items() if value}
    with session.begin_nested() as attempt:
        (result,) = take_in_records(
            session, house, "finds", [record], who.sender, now_ms, settings, source="form"
        )
        if result.status == "held":
            attempt.rollback()
            return result.reason or _("The find cannot be taken.")
    closing = Wanted("closed", find=(at_ms, int(find["cathode"] or 0)), reason=find["action"])
    act_on(session, house, meant, closing, who.sender, now_ms)
    return ""


def _meant(form: FormData) -> Meant:
    return Meant(
        _text(form, "section"),
        whole_number(_text(form, "cell")) or 0,
        _text(form, "kind"),
        whole_number(_text(form, "raised_ms")) or 0,
    )


def _text(form: FormData, name: str) -> str:
    value = form.get(name, "")
    return value if isinstance(value, str) else ""


def _back(request: Request, shown: Shown, done: str, meant: Meant) -> Response:
    told = urlencode({"done": done, "where": _where(meant.section, meant.cell)})
    query = "&".join(part for part in (shown.address(start=0), told) if part)
    return RedirectResponse(f"{request.url_for('worklist').path}?{query}", 303)


def _where(section: str, cell: int) -> str:
    return f"{section}, {_('cell %(number)s') % {'number': cell}}"


def _page(
    request: Request,
    who: Who,
    session: Session,
    house: House,
    now_ms: int,
    shown: Shown,
    told: Told,
    tried: Tried,
) -> Response:
    # A page that tells of a fault in a form stays as it is.
    live = {} if tried.fault else {"live": live_token(session)}
    every = open_flags(session, house, now_ms)
    items = [item for item in every if shown.holds(item)]
    following = shown.start + ON_ONE_PAGE
    context = live | {
        "shown": shown,
        "groups": groups(session, house, items, shown, now_ms),
        "totals": totals(items),
        "open_flags": len(every),
        "shelved": sum(item.life.state == "shelved" for item in every),
        "on_one_sheet": ON_ONE_SHEET,
        "next_start": following if following < len(items) else None,
        "coming_back": coming_back(session, house, now_ms),
        "planned": planned_stops(session, house, every, now_ms),
        "most_again": _MOST_AGAIN,
        "sections": words.section_choices([section.name for section in house.sections]),
        "kinds": words.kind_choices(),
        "states": words.state_choices(),
        "currency": house.currency,
        "people": who_can_work(session, who.name) if who.may("planner") else [],
        "shelf_days": _SHELF_DAYS,
        "may_act": who.may("planner"),
        "may_find": who.may("operator"),
        "done": words.done_words(told.done, told.where),
        "tried": tried,
        "words": words,
    }
    return page(request, "worklist.html", context, status_code=422 if tried.fault else 200)
