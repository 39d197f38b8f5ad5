"""Readings of a rectifier's own ampere-hour counter."""

from starlette.responses import Response

from server.web.api.resource import problems, resource
from server.web.api.schemas import Outcomes
from server.web.api.sent import SentCounter, Taken
from server.web.api.sheet_schemas import body_of

router = resource("records")


@router.post(
    "/counter",
    summary="Send readings of the ampere-hour counter",
    response_model=Outcomes,
    openapi_extra=body_of("counter"),
    responses=problems(413),
)
def post_counter(sent: SentCounter, taken: Taken) -> Response:
    """Take readings of the counter in; roll-over and exchange are recognised."""
    return taken.take_in("counter", sent)
