"""Rows that are held, word for word, until somebody mends or drops them."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Annotated, Literal
from urllib.parse import urlencode

from fastapi import APIRouter, Depends, Form, Path, Query, Request
from sqlalchemy.orm import Session
from starlette.responses import RedirectResponse, Response

from server.intake.columns import SHEETS
from server.intake.held import drop, held_counts, held_row, held_rows, mend
from server.intake.results import RecordResult
from server.storage.errors import Conflict
from server.web.dependencies import (
    DbSession,
    Now,
    Reader,
    Superintendent,
    ThisHouse,
    ThisSite,
    Who,
    WriteSession,
)
from server.web.i18n import gettext as _
from server.web.render import page
from server.web.sentences import sentence_of
from server.web.sheet_words import sheet_name
from server.web.typed import one_line, whole_numbers
from server.web.uploads import FormFields

ON_ONE_PAGE = 25
_LONGEST_VALUE = 4000

router = APIRouter(include_in_schema=False)

RowId = Annotated[int, Path(ge=1, lt=2**53)]
Why = Annotated[str, Form()]


@dataclass(frozen=True)
class Shown:
    """Which rows are shown: of one sheet or of all, held or decided on, from where on."""

    sheet: Annotated[str, Query(max_length=20)] = ""
    state: Literal["held", "mended", "dropped"] = "held"
    before: Annotated[int | None, Query(ge=1, lt=2**53)] = None
    done: Annotated[str, Query(max_length=20)] = ""

    def address(self, **other: object) -> str:
        """The address of the same list, with some of it changed."""
        kept = {"sheet": self.sheet, "state": self.state, "before": self.before} | other
        wanted = {name: value for name, value in kept.items() if value not in ("", None, "held")}
        return f"?{urlencode(wanted)}" if wanted else "?"


@dataclass(frozen=True)
class Tried:
    """What was tried with rows, and what is wrong with it."""

    row: int | None = None
    fields: Mapping[str, str] = field(default_factory=dict)
    reason: str = ""
    why: str = ""
    fault_of_mending: str = ""
    fault_of_dropping: str = ""
    fault: str = ""
    ticked: frozenset[int] = frozenset()


@router.get("/readings-in/held", name="held")
def held(
    request: Request, who: Reader, db: DbSession, shown: Annotated[Shown, Depends()]
) -> Response:
    """Show the rows that are held."""
    return _page(request, who, db, shown, Tried())


@router.post("/readings-in/held/drop", name="held_drop_ticked")
def held_drop_ticked(
    request: Request, who: Superintendent, form: FormFields, db: WriteSession, now_ms: Now
) -> Response:
    """Drop the rows that were ticked, all for one reason."""
    why = one_line(str(form.get("why", "")))
    ticked = whole_numbers(form.getlist("row"))
    if not ticked or not why:
        fault = _("Say why they are dropped.") if ticked else _("Tick the rows to be dropped.")
        tried = Tried(why=why, fault=fault, ticked=frozenset(ticked))
        return _page(request, who, db, Shown(), tried)
    for held_id in ticked:
        if held_row(db, held_id).state == "held":
            drop(db, held_id, who.sender, why, now_ms)
    return RedirectResponse(f"{request.url_for('held').path}?done=dropped", 303)


@router.post("/readings-in/held/{held_id}/drop", name="held_drop")
def held_drop(
    request: Request,
    held_id: RowId,
    who: Superintendent,
    db: WriteSession,
    now_ms: Now,
    why: Why = "",
) -> Response:
    """Drop one row."""
    why = one_line(why)
    try:
        drop(db, held_id, who.sender, why, now_ms)
    except Conflict as error:
        fault = sentence_of(error) if why else _("Say why it is dropped.")
        return _page(request, who, db, Shown(), Tried(held_id, why=why, fault_of_dropping=fault))
    return RedirectResponse(f"{request.url_for('held').path}?done=dropped", 303)


@router.post("/readings-in/held/{held_id}/mend", name="held_mend")
def held_mend(
    request: Request,
    held_id: RowId,
    who: Superintendent,
    form: FormFields,
    db: WriteSession,
    house: ThisHouse,
    site: ThisSite,
    now_ms: Now,
) -> Response:
    """Take a row in as it should have been; it stays held where something is still wrong."""
    fields = {
        name.removeprefix("f-"): one_line(str(value), _LONGEST_VALUE)
        for name, value in form.multi_items()
        if name.startswith("f-")
    }
    reason = one_line(str(form.get("reason", "")))
    try:
        result = mend(db, house, held_id, fields, who.sender, now_ms, site.settings, reason)
    except Conflict as error:
        result = RecordResult(None, "held", sentence_of(error))
    if result.status == "held":
        tried = Tried(held_id, fields, reason, fault_of_mending=result.reason or "")
        return _page(request, who, db, Shown(), tried)
    return RedirectResponse(f"{request.url_for('held').path}?done={result.status}", 303)


def _page(request: Request, who: Who, session: Session, shown: Shown, tried: Tried) -> Response:
    found = held_rows(session, shown.sheet or None, shown.state, ON_ONE_PAGE + 1, shown.before)
    rows = found[:ON_ONE_PAGE]
    if tried.row is not None and all(row.id != tried.row for row in rows):
        rows.insert(0, held_row(session, tried.row))
    counts = held_counts(session)
    refusal = tried.fault_of_dropping or tried.fault_of_mending
    is_decided = any(row.id == tried.row and row.state != "held" for row in rows)
    context = {
        "rows": rows,
        "columns": {name: kind.columns for name, kind in SHEETS.items()},
        "counts": counts,
        "all": sum(counts.values()),
        "shown": shown,
        "older": rows[-1].id if len(found) > ON_ONE_PAGE else None,
        "tried": tried,
        "may_decide": who.may("superintendent") and shown.state == "held",
        "sheet_name": sheet_name,
        "done": _done_words(shown.done),
        "too_late": refusal if is_decided else "",
    }
    return page(request, "held.html", context, status_code=422 if refusal or tried.fault else 200)


def _done_words(done: str) -> str:
    """What became of the row that was decided on last."""
    words = {
        "stored": _("The row is in the books."),
        "suspect": _("The row is in the books, and its reading is suspect until it is confirmed."),
        "duplicate": _("The books have this row already; it is held no longer."),
        "dropped": _("Dropped. What was sent stays on record with who dropped it, when and why."),
    }
    return words.get(done, "")
