"""Readings that can be read and not believed, until someone decides."""

from typing import Annotated, Literal

from fastapi import Query
from starlette.responses import Response

from server.intake.suspicion import SuspectResult, confirm, correct, suspect_readings, withdraw
from server.web.api.parameters import Before, Limit, RowId, SectionIfAny
from server.web.api.resource import problems, resource
from server.web.api.schemas import CorrectVolts, Decision, SuspectAnswer, Suspects
from server.web.dependencies import (
    DbSession,
    Now,
    Superintendent,
    ThisHouse,
    WriteSession,
    requires,
)

router = resource("held and suspect")

InState = Annotated[
    Literal["open", "confirmed", "corrected", "withdrawn"],
    Query(description="`open`: nobody has decided yet."),
]


@router.get(
    "/suspects",
    summary="Readings that are not believed",
    dependencies=[requires("reader")],
    responses=problems(404),
)
def get_suspects(
    db: DbSession,
    house: ThisHouse,
    section: SectionIfAny = None,
    state: InState = "open",
    limit: Limit = 100,
    before: Before = None,
) -> Suspects:
    """Answer the doubted readings, the newest first, each with the reason for the doubt."""
    found = suspect_readings(db, house, state, section, limit + 1, before)
    shown = found[:limit]
    return Suspects(
        suspects=[_suspect(row) for row in shown],
        next=shown[-1].id if len(found) > limit else None,
    )


@router.post(
    "/suspects/{suspect_id}/confirm",
    summary="Believe a reading",
    status_code=204,
    responses=problems(404, 409),
)
def post_suspect_confirm(
    suspect_id: RowId,
    decision: Decision,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Response:
    """Let the reading count in the figures as it stands."""
    confirm(db, house, suspect_id, who.sender, decision.reason, now_ms)
    return Response(status_code=204)


@router.post(
    "/suspects/{suspect_id}/correct",
    summary="Correct a reading",
    status_code=204,
    responses=problems(404, 409),
)
def post_suspect_correct(
    suspect_id: RowId,
    decision: CorrectVolts,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Response:
    """Put the right voltage beside the wrong one; the former value is kept."""
    correct(db, house, suspect_id, decision.volts, who.sender, decision.reason, now_ms)
    return Response(status_code=204)


@router.post(
    "/suspects/{suspect_id}/withdraw",
    summary="Withdraw a reading",
    status_code=204,
    responses=problems(404, 409),
)
def post_suspect_withdraw(
    suspect_id: RowId,
    decision: Decision,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Response:
    """Leave the reading out for good; what was entered is kept."""
    withdraw(db, house, suspect_id, who.sender, decision.reason, now_ms)
    return Response(status_code=204)


def _suspect(row: SuspectResult) -> SuspectAnswer:
    return SuspectAnswer(
        id=row.id,
        section=row.section,
        cell=row.cell,
        at=row.at_ms,
        volts=row.volts,
        suggested_volts=row.suggested_volts,
        reason=row.reason,
        found=row.found,
        expected=row.expected,
        source=row.source,
        line=row.line,
        state=row.state,
        decided_at=row.decided_ms,
        decided_by=row.decided_by,
        decided_why=row.decided_why,
    )
