"""The stream by which open pages hear that something changed; it says nothing of what."""

from fastapi import APIRouter, Request
from starlette.exceptions import HTTPException
from starlette.responses import Response, StreamingResponse

from server.web.dependencies import ThisSite, requires
from server.web.i18n import gettext as _

router = APIRouter(include_in_schema=False)

EVENT_STREAM = "text/event-stream"


@router.get("/events", name="events", dependencies=[requires("reader")])
async def events(request: Request, site: ThisSite) -> Response:
    """Tell a page whenever it should fetch itself anew, for as long as it listens."""
    if EVENT_STREAM not in request.headers.get("accept", ""):
        raise HTTPException(406, _("There is nothing to read here: open pages listen to it."))
    if site.live.is_full:
        raise HTTPException(
            503,
            _("Too many pages listen; this one does not change by itself."),
            {"retry-after": "60"},
        )
    # Buffers on the way, such as those of nginx, would keep what is told to themselves.
    headers = {"cache-control": "no-store", "x-accel-buffering": "no"}
    return StreamingResponse(site.live.events(), media_type=EVENT_STREAM, headers=headers)
