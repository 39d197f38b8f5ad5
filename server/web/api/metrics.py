"""What the server counts of itself and of the books, for Prometheus."""

from starlette.responses import Response

from server.storage.condition import condition
from server.web.api.resource import resource
from server.web.dependencies import DbSession, ThisSite, requires
from server.web.metrics import CONTENT_TYPE

router = resource("server")


@router.get(
    "/metrics",
    summary="Metrics of the server and of the books",
    dependencies=[requires("reader")],
    response_class=Response,
    responses={
        200: {
            "description": "Prometheus text.",
            "content": {
                "text/plain": {
                    "schema": {"type": "string"},
                    "example": "# TYPE ampledger_held_rows gauge\nampledger_held_rows 2.0\n",
                }
            },
        }
    },
)
def get_metrics(db: DbSession, site: ThisSite) -> Response:
    """Answer the metrics as Prometheus text."""
    return Response(site.metrics.text(condition(db)), media_type=CONTENT_TYPE)
