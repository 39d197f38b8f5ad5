"""The page of one cell: its voltage, its crops, what happened to it, and its readings."""

from dataclasses import dataclass, replace
from typing import Annotated
from urllib.parse import urlencode

from fastapi import APIRouter, Depends, Form, Query, Request
from fastapi.responses import HTMLResponse, RedirectResponse
from sqlalchemy.orm import Session
from starlette.responses import Response

from server.accounts.cell import cell_events, cell_series
from server.accounts.cell_readings import ReadingTold, at_rated_current, cell_readings
from server.accounts.lots import cell_crops
from server.accounts.state import cell_states
from server.figures.layout import Outage, Window
from server.intake.corrections import correct_reading, withdraw_reading
from server.intake.suspicion import confirm
from server.storage.errors import Conflict
from server.storage.plant import House
from server.storage.recorded import last_recorded_ms
from server.watch.expected import expected_at
from server.watch.flags import flags_between
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
from server.web.live import live_token
from server.web.moments import moment_of
from server.web.pages import words
from server.web.pages.cell_figures import crops_figure, voltage_figure
from server.web.pages.period import ChosenPeriod, chosen_period
from server.web.render import page

router = APIRouter(include_in_schema=False)

DEFAULT_DAYS = 30
READINGS_AT_ONCE = 45

Text = Annotated[str, Form()]


@dataclass(frozen=True)
class Asked:
    """What the address of the page asks for."""

    first: Annotated[str | None, Query(alias="from")] = None
    last: Annotated[str | None, Query(alias="to")] = None
    known: str | None = None
    """A day or moment: the readings as they were known then."""
    before: int | None = None
    """Readings before this moment only."""
    reading: int | None = None
    """The reading that is to be corrected."""


@dataclass(frozen=True)
class Correction:
    """The form in which a reading is corrected, as it was sent."""

    volts: str = ""
    why: str = ""
    volts_fault: str | None = None
    why_fault: str | None = None
    fault: str | None = None


@router.get("/sections/{section_name}/cells/{number}", name="cell")
def cell(
    request: Request,
    section_name: str,
    number: int,
    who: Reader,
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    asked: Annotated[Asked, Depends()],
) -> HTMLResponse:
    """Show one cell over a period."""
    live = {"live": live_token(db)}
    view = _view(db, house, section_name, number, who, now_ms, asked, Correction())
    return page(request, "cell.html", live | view)


@router.post("/sections/{section_name}/cells/{number}/readings/{at_ms}", name="cell_correct")
def cell_correct(
    request: Request,
    section_name: str,
    number: int,
    at_ms: int,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
    action: Text = "correct",
    volts: Text = "",
    why: Text = "",
    doubt_id: Text = "",
    first: Annotated[str, Form(alias="from")] = "",
    last: Annotated[str, Form(alias="to")] = "",
) -> Response:
    """Correct or withdraw a reading, or confirm one that is doubted."""
    sent = _checked(Correction(volts, why), action)
    if not (sent.volts_fault or sent.why_fault):
        decision = Decision(action, at_ms, volts, why.strip(), doubt_id)
        sent = _decided(db, house, section_name, number, decision, who, now_ms, sent)
    if sent.volts_fault or sent.why_fault or sent.fault:
        asked = Asked(first or None, last or None, reading=at_ms)
        view = _view(db, house, section_name, number, who, now_ms, asked, sent)
        return page(request, "cell.html", view, status_code=422)
    path = request.url_for("cell", section_name=section_name, number=number).path
    query = urlencode({name: day for name, day in (("from", first), ("to", last)) if day})
    return RedirectResponse(f"{path}?{query}#readings", 303)


@dataclass(frozen=True)
class Decision:
    """What is to become of a reading."""

    action: str
    at_ms: int
    volts: str
    why: str
    doubt_id: str


def _checked(sent: Correction, action: str) -> Correction:
    """The form with what is wrong with its fields."""
    if action == "correct" and _volts_of(sent.volts) is None:
        sent = replace(sent, volts_fault=_("Volts as a number, such as 2.013."))
    if not sent.why.strip():
        sent = replace(sent, why_fault=_("Say why; the former value is kept beside it."))
    return sent


def _volts_of(text: str) -> float | None:
    try:
        volts = float(text.strip().replace(",", "."))
    except ValueError:
        return None
    return volts if 0 < volts < 1000 else None


def _decided(
    session: Session,
    house: House,
    section_name: str,
    number: int,
    decision: Decision,
    who: Who,
    now_ms: int,
    sent: Correction,
) -> Correction:
    """Write the decision; the form comes back with a fault where the books say no."""
    place = (session, house, section_name, number, decision.at_ms)
    volts = _volts_of(decision.volts)
    try:
        if decision.action == "withdraw":
            withdraw_reading(*place, who.sender, decision.why, now_ms)
        elif decision.action == "confirm" and decision.doubt_id.isdecimal():
            confirm(session, house, int(decision.doubt_id), who.sender, decision.why, now_ms)
        elif volts is not None:
            correct_reading(*place, volts, who.sender, decision.why, now_ms)
    except Conflict as conflict:
        return replace(sent, fault=str(conflict))
    return sent


def _view(
    session: Session,
    house: House,
    section_name: str,
    number: int,
    who: Who,
    now_ms: int,
    asked: Asked,
    sent: Correction,
) -> dict[str, object]:
    section = house.section(section_name)
    section.cell_id(number)
    kept = {"known": asked.known} if asked.known else {}
    period = chosen_period(
        house,
        now_ms,
        asked.first,
        asked.last,
        days=DEFAULT_DAYS,
        last_ms=last_recorded_ms(session, section),
        kept=kept,
    )
    known_ms = moment_of(asked.known, house, "query.known") if asked.known else None
    where = (session, house, section_name, number, period.from_ms, period.to_ms)
    series = cell_series(*where, known_ms)
    referred_v = at_rated_current(session, section, series.at_ms, series.volts)
    # What the watch expected rests on all that is known by now.
    healthy = None if known_ms else expected_at(session, section, number, series.at_ms)
    events = cell_events(*where)
    flags = [
        flag
        for flag in flags_between(session, house, period.from_ms, period.to_ms, section_name)
        if flag.cell == number
    ]
    crops = cell_crops(*where)
    terms = section.terms_at(period.to_ms - 1)
    window = Window(period.from_ms, period.to_ms, house.time_zone)
    out = [
        Outage(event.at_ms, event.to_ms or period.to_ms)
        for event in events
        if event.kind == "outage"
    ]
    readings = cell_readings(
        session,
        house,
        section_name,
        number,
        period.from_ms,
        min(period.to_ms, asked.before or period.to_ms),
        READINGS_AT_ONCE,
        known_ms,
    )
    states = cell_states(session, house, section_name, now_ms)
    state = next((one for one in states if one.number == number), None)
    return {
        "section": section,
        "number": number,
        "last_number": section.terms_at(now_ms).cells,
        "state": state,
        "deposit_age_ms": now_ms - state.deposit_started_ms
        if state and state.deposit_started_ms
        else None,
        "terms": terms,
        "period": period,
        "known_ms": known_ms,
        "known": asked.known or "",
        "voltage": voltage_figure(window, series, referred_v, terms, flags, out, healthy),
        "crops_figure": crops_figure(window, crops, terms.target_current_efficiency),
        "crops": crops,
        "flags": list(reversed(flags)),
        "events": events,
        "readings": readings.readings,
        "older_url": _address(period, kept, before=readings.before_ms),
        "newer_url": _address(period, kept) if asked.before else None,
        "may_correct": who.may("superintendent") and known_ms is None,
        "correct_url": {
            told.at_ms: _address(period, kept, before=asked.before, reading=told.at_ms)
            for told in readings.readings
        },
        "chosen": _chosen(readings.readings, asked.reading),
        "sent": sent,
        "mm": words.mm,
        "state_words": words.state_words,
        "event_words": words.event_words,
    }


def _chosen(readings: tuple[ReadingTold, ...], at_ms: int | None) -> ReadingTold | None:
    return next((told for told in readings if told.at_ms == at_ms), None)


def _address(period: ChosenPeriod, kept: dict[str, str], **more: int | None) -> str | None:
    """The address of this page with the same period; None where nothing is asked for."""
    if more and all(value is None for value in more.values()):
        return None
    query: dict[str, object] = {**kept, "from": period.from_day, "to": period.to_day}
    query |= {name: value for name, value in more.items() if value is not None}
    return "?" + urlencode(query)
