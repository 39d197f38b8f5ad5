"""Log a shift: a round of one section typed into a plain form, one field a cell."""

from typing import Annotated
from urllib.parse import urlencode

from fastapi import APIRouter, Depends, Query, Request
from sqlalchemy.orm import Session
from starlette.datastructures import FormData
from starlette.exceptions import HTTPException
from starlette.responses import RedirectResponse, Response

from server.accounts.state import round_state, states_of_cells
from server.intake.round_sheet import round_sheet
from server.intake.rounds import RoundOutcome, TypedRound, take_in_round
from server.storage.plant import House, SectionPlan
from server.web import csrf
from server.web.dependencies import (
    DbSession,
    Now,
    Operator,
    Requires,
    Standing,
    ThisHouse,
    ThisSite,
    Who,
    WriteSession,
    standing,
)
from server.web.errors import SignInNeeded
from server.web.render import page
from server.web.round_words import fault_words
from server.web.site import Site
from server.web.typed import whole_number
from server.web.uploads import FormFields

router = APIRouter(include_in_schema=False)


class _MayLog(Requires):
    """As `Operator`; whose session is over signs in again without losing what was typed."""

    async def __call__(self, request: Request, here: Annotated[Standing, Depends(standing)]) -> Who:
        """Give who logs, or send what was typed on to the sign-in."""
        try:
            return await super().__call__(request, here)
        except (SignInNeeded, csrf.ForeignForm):
            if not _brings_a_form(request):
                raise
            where = {"location": request.url_for("sign_in_again").path}
            raise HTTPException(307, headers=where) from None


MayLog = Annotated[Who, Depends(_MayLog("operator"))]


class Saved:
    """What became of the round that was saved last, as the address tells it."""

    def __init__(
        self,
        stored: Annotated[int | None, Query(ge=0)] = None,
        suspect: Annotated[int, Query(ge=0)] = 0,
        known: Annotated[int, Query(ge=0)] = 0,
        skipped: Annotated[int, Query(ge=0)] = 0,
        current: bool = False,
        decimal: str = "",
        draft: Annotated[str, Query(max_length=64)] = "",
    ) -> None:
        self.is_told = stored is not None
        self.stored, self.suspect, self.known = stored or 0, suspect, known
        self.skipped, self.current = skipped, current
        self.decimal, self.draft = decimal, draft


@router.get("/log-shift", name="log_shift")
def log_shift(
    request: Request,
    _who: Operator,
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    site: ThisSite,
    saved: Annotated[Saved, Depends()],
    section: str = "",
) -> Response:
    """Show the empty form of a section, by default the first."""
    plan = house.section(section) if section else house.sections[0]
    typed = TypedRound(plan.name, "")
    return _page(request, db, house, plan, typed, RoundOutcome(), now_ms, site, saved)


@router.post("/log-shift", name="log_shift_send")
def log_shift_send(
    request: Request,
    who: MayLog,
    form: FormFields,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
    site: ThisSite,
) -> Response:
    """Take in a round, or ask about what cannot be taken or believed as it stands."""
    typed = typed_round(form)
    plan = house.section(typed.section)
    outcome = RoundOutcome()
    if "look" not in form:
        outcome = take_in_round(db, house, typed, who.sender, now_ms, site.settings)
        if outcome.is_taken:
            skipped = _skipped(db, plan, typed, outcome)
            return _told(request, plan, outcome, skipped, str(form.get("draft", "")))
    status = 200 if "look" in form else 422
    return _page(request, db, house, plan, typed, outcome, now_ms, site, Saved(), status)


def typed_round(form: FormData) -> TypedRound:
    """The round that a form holds."""
    offset = str(form.get("offset", ""))
    return TypedRound(
        section=str(form.get("section", "")),
        at=offset or str(form.get("at", "")),
        current=str(form.get("current", "")),
        volts=_by_cell(form, "volts"),
        answers=_by_cell(form, "answer"),
        asked=_by_cell(form, "asked"),
    )


def _by_cell(form: FormData, name: str) -> dict[int, str]:
    """The fields of one name for each cell, `volts-12`, by the number of the cell."""
    found = {}
    for key, value in form.multi_items():
        start, _dash, text = key.partition("-")
        number = whole_number(text)
        if start == name and number is not None:
            found[number] = str(value)
    return found


def _brings_a_form(request: Request) -> bool:
    kind = request.headers.get("content-type", "").partition(";")[0].strip().lower()
    return kind in ("application/x-www-form-urlencoded", "multipart/form-data")


def _skipped(session: Session, plan: SectionPlan, typed: TypedRound, outcome: RoundOutcome) -> int:
    """How many cells in service were left blank."""
    assert outcome.at_ms is not None
    _is_off, states = states_of_cells(session, plan, outcome.at_ms)
    return sum(
        state == "in service" and not typed.volts.get(number, "").strip()
        for number, state in states.items()
    )


def _told(
    request: Request, plan: SectionPlan, outcome: RoundOutcome, skipped: int, draft: str
) -> Response:
    """Go to the empty form, which tells what became of the round."""
    told = {
        "section": plan.name,
        "stored": outcome.stored,
        "suspect": outcome.suspect,
        "known": outcome.known,
        "skipped": skipped,
        "current": "yes" if outcome.has_current else "no",
        "decimal": outcome.decimal,
        "draft": draft[:64],
    }
    return RedirectResponse(f"{request.url_for('log_shift').path}?{urlencode(told)}", 303)


def _page(
    request: Request,
    session: Session,
    house: House,
    plan: SectionPlan,
    typed: TypedRound,
    outcome: RoundOutcome,
    now_ms: int,
    site: Site,
    saved: Saved,
    status: int = 200,
) -> Response:
    at_ms = outcome.at_ms or now_ms
    names = [section.name for section in house.sections]
    context = {
        "sections": names,
        "next_section": _after(plan.name, names),
        "sheet": round_sheet(session, plan, at_ms, site.settings.max_hold_ms),
        "round": round_state(session, house, plan.name, now_ms),
        "typed": typed,
        "is_typed": bool(typed.at),
        "at": typed.at[:16] or now_ms,
        "outcome": outcome,
        "saved": saved,
        "fault_words": fault_words,
    }
    return page(request, "log_shift.html", context, status_code=status)


def _after(name: str, names: list[str]) -> str | None:
    """The section after this one in the house, where there is another."""
    place = names.index(name) + 1
    return names[place] if place < len(names) else None
