"""One sending before it is taken in: what its files would bring, and the word to take them in."""

from dataclasses import replace
from typing import Annotated

from fastapi import APIRouter, Form, Request
from starlette.responses import RedirectResponse, Response

from server.intake.looking import look_through, take_in_sending
from server.intake.spool import Ticket
from server.web.dependencies import (
    DbSession,
    Now,
    Operator,
    Superintendent,
    ThisHouse,
    ThisSite,
    Who,
    follow_in_own_session,
)
from server.web.i18n import gettext as _
from server.web.render import page
from server.web.sheet_words import sheet_name
from server.web.spooled import spool_of
from server.web.typed import one_line

router = APIRouter(include_in_schema=False)


@router.get("/readings-in/sent/{ticket_id}", name="sending")
def sending(
    request: Request, ticket_id: str, who: Operator, site: ThisSite, now_ms: Now
) -> Response:
    """Show what a sending would bring."""
    ticket = spool_of(site).waiting(ticket_id, who.sender, now_ms)
    return _page(request, who, ticket)


@router.post("/readings-in/sent/{ticket_id}/look", name="sending_look")
def sending_look(
    request: Request,
    ticket_id: str,
    who: Superintendent,
    db: DbSession,
    house: ThisHouse,
    site: ThisSite,
    now_ms: Now,
    kind: Annotated[str, Form()] = "",
    reason: Annotated[str, Form()] = "",
) -> Response:
    """Look through a sending again, as corrections of what is stored or as new records."""
    spool = spool_of(site)
    ticket = spool.waiting(ticket_id, who.sender, now_ms)
    why = one_line(reason) if kind == "corrections" else ""
    if kind == "corrections" and not why:
        fault = _("Say why what is stored is to be corrected.")
        return _page(request, who, ticket, fault, 422)
    look_through(db, house, spool, ticket, now_ms, site.settings, why)
    return RedirectResponse(request.url_for("sending", ticket_id=ticket_id).path, 303)


@router.post("/readings-in/sent/{ticket_id}/take-in", name="sending_take_in")
def sending_take_in(
    request: Request, ticket_id: str, who: Operator, house: ThisHouse, site: ThisSite, now_ms: Now
) -> Response:
    """Take a sending in; figures follow before the answer, as far as that is quickly done."""
    spool = spool_of(site)
    ticket = spool.waiting(ticket_id, who.sender, now_ms)
    if ticket.reason and not who.may("superintendent"):
        ticket = replace(ticket, reason="")
    results = take_in_sending(site.database, house, spool, ticket, now_ms, site.settings)
    follow_in_own_session(site)
    ids = ",".join(str(d.delivery_id) for result in results for d in result.deliveries)
    return RedirectResponse(f"{request.url_for('readings_in').path}?taken={ids}", 303)


@router.post("/readings-in/sent/{ticket_id}/drop", name="sending_drop")
def sending_drop(
    request: Request, ticket_id: str, who: Operator, site: ThisSite, now_ms: Now
) -> Response:
    """Forget a sending; nothing of it was stored."""
    spool = spool_of(site)
    spool.drop(spool.waiting(ticket_id, who.sender, now_ms))
    return RedirectResponse(request.url_for("readings_in").path, 303)


def _page(
    request: Request, who: Who, ticket: Ticket, fault: str = "", status: int = 200
) -> Response:
    context = {
        "ticket": ticket,
        "may_correct": who.may("superintendent"),
        "sheet_name": sheet_name,
        "fault": fault,
    }
    return page(request, "sending.html", context, status_code=status)
