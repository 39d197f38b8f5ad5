"""One delivery: what it brought, what of it still waits, and the way to take it back."""

from typing import Annotated

from fastapi import APIRouter, Form, Path, Request
from sqlalchemy.orm import Session
from starlette.responses import RedirectResponse, Response

from server.intake.corrections import withdraw_delivery
from server.storage.delivery_list import delivery, still_doubted, still_held
from server.storage.errors import Conflict
from server.storage.held_rows import drop_held_of
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
from server.web.render import page
from server.web.sheet_words import sheet_name, source_name
from server.web.typed import one_line

router = APIRouter(include_in_schema=False)

DeliveryId = Annotated[int, Path(ge=1, lt=2**53)]
Why = Annotated[str, Form()]


@router.get("/readings-in/deliveries/{delivery_id}", name="delivery")
def show_delivery(
    request: Request,
    delivery_id: DeliveryId,
    who: Reader,
    db: DbSession,
    withdrawn: int | None = None,
) -> Response:
    """Show one delivery."""
    return _page(request, who, db, delivery_id, withdrawn=withdrawn)


@router.post("/readings-in/deliveries/{delivery_id}/withdraw", name="delivery_withdraw")
def delivery_withdraw(
    request: Request,
    delivery_id: DeliveryId,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
    why: Why = "",
) -> Response:
    """Take back what a delivery brought; it stays on record with who, when and why."""
    why = one_line(why)
    if not why:
        faults = {"why": _("Say why it is taken back.")}
        return _page(request, who, db, delivery_id, faults)
    delivery(db, delivery_id)
    try:
        with db.begin_nested():
            count = withdraw_delivery(db, house, delivery_id, who.sender, why, now_ms)
    except Conflict:
        faults = {"why": _("Nothing of this delivery counts any more.")}
        return _page(request, who, db, delivery_id, faults)
    path = request.url_for("delivery", delivery_id=delivery_id).path
    return RedirectResponse(f"{path}?withdrawn={count}", 303)


@router.post("/readings-in/deliveries/{delivery_id}/drop-held", name="delivery_drop_held")
def delivery_drop_held(
    request: Request,
    delivery_id: DeliveryId,
    who: Superintendent,
    db: WriteSession,
    now_ms: Now,
    why_drop: Why = "",
) -> Response:
    """Drop every row of a delivery that is still held, for one reason."""
    delivery(db, delivery_id)
    why_drop = one_line(why_drop)
    if not why_drop:
        return _page(request, who, db, delivery_id, {"why_drop": _("Say why they are dropped.")})
    drop_held_of(db, delivery_id, who.sender, why_drop, now_ms)
    return RedirectResponse(request.url_for("delivery", delivery_id=delivery_id).path, 303)


def _page(
    request: Request,
    who: Who,
    session: Session,
    delivery_id: int,
    faults: dict[str, str] | None = None,
    withdrawn: int | None = None,
) -> Response:
    found = delivery(session, delivery_id)
    context = {
        "delivery": found,
        "sheet": sheet_name(found.sheet),
        "source": source_name(found.source),
        "still_held": still_held(session, [delivery_id]).get(delivery_id, 0),
        "still_doubted": still_doubted(session, [delivery_id]).get(delivery_id, 0),
        "may_withdraw": who.may("superintendent"),
        "faults": faults or {},
        "withdrawn": withdrawn,
    }
    return page(request, "delivery.html", context, status_code=422 if faults else 200)
