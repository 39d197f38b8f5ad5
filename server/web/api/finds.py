"""What people found at a cell, and did about it."""

from starlette.responses import Response

from server.web.api.resource import problems, resource
from server.web.api.schemas import Outcomes
from server.web.api.sent import SentFinds, Taken
from server.web.api.sheet_schemas import body_of

router = resource("records")


@router.post(
    "/finds",
    summary="Send what was found at a cell",
    response_model=Outcomes,
    openapi_extra=body_of("finds"),
    responses=problems(413),
)
def post_finds(sent: SentFinds, taken: Taken) -> Response:
    """Take finds in."""
    return taken.take_in("finds", sent)
