"""Whether the server lives and can work; open to whoever watches it."""

from fastapi import APIRouter
from starlette.responses import Response

from server import __version__
from server.storage.condition import readiness
from server.web.api.resource import PREFIX
from server.web.api.schemas import Health
from server.web.dependencies import ThisSite

router = APIRouter(prefix=PREFIX, tags=["server"])


@router.head("/health/live", include_in_schema=False, name="head_health_live")
@router.get("/health/live", summary="Whether the server lives", status_code=204)
def get_health_live() -> Response:
    """Answer at once, whatever the database does."""
    return Response(status_code=204)


@router.head("/health", include_in_schema=False, name="head_health")
@router.get(
    "/health",
    summary="Whether the server can work",
    responses={503: {"model": Health, "description": "The server lives and cannot work."}},
)
def get_health(response: Response, site: ThisSite) -> Health:
    """Answer whether the database is reachable, at the right tables, and how far figures lag."""
    found = readiness(site.database, site.newest_revision)
    if not found.is_ready:
        response.status_code = 503
    return Health(
        status="ready" if found.is_ready else "not ready",
        database="reachable" if found.is_reachable else "unreachable",
        tables=found.revision,
        expected_tables=found.newest_revision,
        stale_stretches=found.stale_stretches,
        version=__version__,
    )
