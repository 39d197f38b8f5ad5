"""Assays, temperatures and flows of the electrolyte."""

from starlette.responses import Response

from server.web.api.resource import problems, resource
from server.web.api.schemas import Outcomes
from server.web.api.sent import SentElectrolyte, Taken
from server.web.api.sheet_schemas import body_of

router = resource("records")


@router.post(
    "/electrolyte",
    summary="Send assays of the electrolyte",
    response_model=Outcomes,
    openapi_extra=body_of("electrolyte"),
    responses=problems(413),
)
def post_electrolyte(sent: SentElectrolyte, taken: Taken) -> Response:
    """Take assays of feed or spent electrolyte in."""
    return taken.take_in("electrolyte", sent)
