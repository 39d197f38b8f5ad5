"""Readings in: files are sent here, and every delivery that ever came is listed."""

import re
from typing import Annotated

from fastapi import APIRouter, Query, Request
from sqlalchemy.orm import Session
from starlette.responses import RedirectResponse, Response

from server.intake.columns import SHEETS
from server.intake.held import held_counts
from server.intake.looking import keep_and_look
from server.intake.suspicion import suspect_count
from server.storage.delivery_list import deliveries, deliveries_with, still_doubted, still_held
from server.web.dependencies import DbSession, Now, Operator, Reader, ThisHouse, ThisSite, Who
from server.web.i18n import gettext as _
from server.web.render import page
from server.web.sheet_words import sheet_name, source_name
from server.web.site import Site
from server.web.spooled import spool_of
from server.web.typed import one_line, whole_numbers
from server.web.uploads import Uploads

ON_ONE_PAGE = 30
_LONGEST_NAME = 200

router = APIRouter(include_in_schema=False)


@router.get("/readings-in", name="readings_in")
def readings_in(
    request: Request,
    who: Reader,
    db: DbSession,
    site: ThisSite,
    before: Annotated[int | None, Query(ge=1, lt=2**53)] = None,
    taken: Annotated[str, Query(max_length=2000)] = "",
) -> Response:
    """Show where files are sent, what waits for somebody, and what came in."""
    return _page(request, who, db, site, before, taken)


@router.post("/readings-in", name="readings_in_send")
def readings_in_send(
    request: Request,
    who: Operator,
    uploads: Uploads,
    db: DbSession,
    house: ThisHouse,
    site: ThisSite,
    now_ms: Now,
) -> Response:
    """Keep files that were sent and look through them; nothing is stored yet."""
    if not uploads:
        fault = _("Choose one or several files first.")
        return _page(request, who, db, site, fault=fault, status=422)
    files = [(_bare(upload.filename or ""), upload.file) for upload in uploads]
    spool = spool_of(site)
    ticket = keep_and_look(db, house, spool, files, who.sender, now_ms, site.settings)
    return RedirectResponse(request.url_for("sending", ticket_id=ticket.id).path, 303)


def _page(
    request: Request,
    who: Who,
    session: Session,
    site: Site,
    before: int | None = None,
    taken: str = "",
    fault: str = "",
    status: int = 200,
) -> Response:
    found = deliveries(session, ON_ONE_PAGE + 1, before)
    shown = found[:ON_ONE_PAGE]
    ids = [delivery.id for delivery in shown]
    context = {
        "may_send": who.may("operator"),
        "held": sum(held_counts(session).values()),
        "suspects": suspect_count(session),
        "taken": deliveries_with(session, whole_numbers(taken.split(","))) if taken else [],
        "deliveries": shown,
        "still_held": still_held(session, ids),
        "still_doubted": still_doubted(session, ids),
        "is_first": before is None,
        "older": shown[-1].id if len(found) > ON_ONE_PAGE else None,
        "sheets": [(sheet_name(kind.name), kind.names) for kind in SHEETS.values()],
        "most_mib": site.settings.upload_max_mib,
        "sheet_name": sheet_name,
        "source_name": source_name,
        "fault": fault,
    }
    return page(request, "readings_in.html", context, status_code=status)


def _bare(name: str) -> str:
    """A file's own name, without the folders that some browsers send with it."""
    return one_line(re.split(r"[/\\]", name)[-1], _LONGEST_NAME)
