"""Rows that could not be taken, until someone mends or drops them."""

from typing import Annotated, Literal

from fastapi import Query
from starlette.responses import Response

from server.intake.held import HeldResult, drop, held_row, held_rows, mend
from server.web.api.parameters import Before, Limit, RowId
from server.web.api.resource import problems, resource
from server.web.api.schemas import (
    Decision,
    HeldAnswer,
    HeldRows,
    Mending,
    RecordOutcome,
    SheetName,
)
from server.web.api.sent import KIND_OF
from server.web.dependencies import (
    DbSession,
    Now,
    Superintendent,
    ThisHouse,
    ThisSite,
    WriteSession,
    requires,
)

router = resource("held and suspect")

OfSheet = Annotated[SheetName | None, Query(description="Only rows of this sheet.")]
InState = Annotated[
    Literal["held", "mended", "dropped"],
    Query(description="`held`: nobody has decided yet."),
]


@router.get("/held", summary="Rows held", dependencies=[requires("reader")])
def get_held(
    db: DbSession,
    sheet: OfSheet = None,
    state: InState = "held",
    limit: Limit = 100,
    before: Before = None,
) -> HeldRows:
    """Answer the rows that could not be taken, the newest first, each with its reason."""
    kind = KIND_OF.get(sheet, sheet) if sheet else None
    found = held_rows(db, kind, state, limit + 1, before)
    shown = found[:limit]
    return HeldRows(
        held=[_held(row) for row in shown], next=shown[-1].id if len(found) > limit else None
    )


@router.get(
    "/held/{held_id}",
    summary="One row that was held",
    dependencies=[requires("reader")],
    responses=problems(404),
)
def get_held_row(db: DbSession, held_id: RowId) -> HeldAnswer:
    """Answer one row, held or decided on."""
    return _held(held_row(db, held_id))


@router.post(
    "/held/{held_id}/mend",
    summary="Mend a row and take it in",
    responses=problems(404, 409),
)
def post_held_mend(
    held_id: RowId,
    mending: Mending,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    site: ThisSite,
    now_ms: Now,
) -> RecordOutcome:
    """Take the row in as it should have been; `held` says that something is still wrong."""
    changed = {name: "" if text is None else str(text) for name, text in mending.fields.items()}
    fields = {**held_row(db, held_id).fields, **changed}
    result = mend(db, house, held_id, fields, who.sender, now_ms, site.settings, mending.reason)
    return RecordOutcome(id=result.id, status=result.status, reason=result.reason)


@router.post(
    "/held/{held_id}/drop",
    summary="Drop a row",
    status_code=204,
    responses=problems(404, 409),
)
def post_held_drop(
    held_id: RowId, decision: Decision, who: Superintendent, db: WriteSession, now_ms: Now
) -> Response:
    """Decide that the row is not to be taken in; it stays on record with who, when and why."""
    drop(db, held_id, who.sender, decision.reason, now_ms)
    return Response(status_code=204)


def _held(row: HeldResult) -> HeldAnswer:
    return HeldAnswer(
        id=row.id,
        sheet=row.sheet,
        source=row.source,
        sender=row.sender,
        received_at=row.received_ms,
        line=row.line,
        column=row.column or None,
        found=row.found,
        expected=row.expected,
        reason=row.reason,
        fields=dict(row.fields),
        raw=row.raw,
        state=row.state,
        decided_at=row.decided_ms,
        decided_by=row.decided_by,
        decided_why=row.decided_why,
    )
