"""What was recorded wrongly: put right, or withdrawn; the former values are kept."""

from starlette.responses import Response

from server.intake.corrections import withdraw_delivery, withdraw_record
from server.web.api.parameters import RowId
from server.web.api.resource import problems, resource
from server.web.api.schemas import Correction, Decision, Outcomes
from server.web.api.schemas_plant import Withdrawal
from server.web.api.sent import KIND_OF, Taking
from server.web.dependencies import Now, Superintendent, ThisHouse, ThisSite, WriteSession

router = resource("corrections")


@router.post(
    "/corrections",
    summary="Correct records",
    response_model=Outcomes,
    responses=problems(409, 413),
)
def post_corrections(
    correction: Correction,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    site: ThisSite,
    now_ms: Now,
) -> Response:
    """Put right values beside wrong ones: records whose key is stored become new revisions."""
    taking = Taking(db, house, site, who, now_ms)
    return taking.take_in(correction.sheet, list(correction.records), correction.reason)


@router.post(
    "/withdrawals", summary="Withdraw records", status_code=204, responses=problems(404, 409, 413)
)
def post_withdrawals(
    correction: Correction,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    site: ThisSite,
    now_ms: Now,
) -> Response:
    """Leave records out for good, named by their key columns: all of them, or none after a fault.

    What was entered is kept, with who withdrew it, when and why.
    """
    kind = KIND_OF.get(correction.sheet, correction.sheet)
    for record in correction.records:
        fields = {name: "" if value is None else str(value) for name, value in record.items()}
        withdraw_record(
            db, house, kind, fields, who.sender, correction.reason, now_ms, site.settings
        )
    return Response(status_code=204)


@router.post(
    "/deliveries/{delivery_id}/withdraw",
    summary="Withdraw a whole delivery",
    responses=problems(404, 409),
)
def post_delivery_withdraw(
    delivery_id: RowId,
    decision: Decision,
    who: Superintendent,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
) -> Withdrawal:
    """Leave out everything that one file or call brought, such as the file of another plant."""
    withdrawn = withdraw_delivery(db, house, delivery_id, who.sender, decision.reason, now_ms)
    return Withdrawal(delivery=delivery_id, withdrawn=withdrawn)
