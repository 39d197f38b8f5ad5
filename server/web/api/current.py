"""Samples of a section's current."""

from starlette.responses import Response

from server.web.api.resource import problems, resource
from server.web.api.schemas import Outcomes
from server.web.api.sent import SentCurrent, Taken
from server.web.api.sheet_schemas import body_of

router = resource("records")


@router.post(
    "/current",
    summary="Send samples of the section's current",
    response_model=Outcomes,
    openapi_extra=body_of("current"),
    responses=problems(413),
)
def post_current(sent: SentCurrent, taken: Taken) -> Response:
    """Take samples of current in; each holds until the next."""
    return taken.take_in("current", sent)
