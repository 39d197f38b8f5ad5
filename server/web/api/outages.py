"""Sections that were off and cells that were bypassed."""

from starlette.responses import Response

from server.web.api.resource import problems, resource
from server.web.api.schemas import Outcomes
from server.web.api.sent import SentOutages, Taken
from server.web.api.sheet_schemas import body_of

router = resource("records")


@router.post(
    "/outages",
    summary="Send outages",
    response_model=Outcomes,
    openapi_extra=body_of("outages"),
    responses=problems(413),
)
def post_outages(sent: SentOutages, taken: Taken) -> Response:
    """Take outages in; one that still lasts has no `to`."""
    return taken.take_in("outages", sent)
