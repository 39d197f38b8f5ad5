"""What happens around each request: its id, one line in the log, its place in the metrics.

Also the net below it: whatever goes wrong unforeseen becomes an answer while the middleware above
still stands, so that it carries the same headers as any other.
"""

import re
from secrets import token_hex
from time import perf_counter

import structlog
from starlette.datastructures import Headers, MutableHeaders
from starlette.requests import Request
from starlette.types import ASGIApp, Message, Receive, Scope, Send

from server.web.metrics import Metrics

REQUEST_ID = "x-request-id"
_SENSIBLE_ID = re.compile(r"[A-Za-z0-9._-]{8,64}")
_UNKNOWN = "(none)"

log = structlog.get_logger()


class RequestLogMiddleware:
    """Gives each request an id, and writes and counts what became of it.

    The line names the route as it is declared, never the address itself: names of people, ids and
    queries stay out of the log. Requests for static files are counted and not written.
    """

    def __init__(self, app: ASGIApp, metrics: Metrics) -> None:
        self.app = app
        self._metrics = metrics

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request and note it."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        request_id = _request_id(scope)
        status = 500
        started_s = perf_counter()

        async def send_with_id(message: Message) -> None:
            nonlocal status
            if message["type"] == "http.response.start":
                status = message["status"]
                MutableHeaders(scope=message)[REQUEST_ID] = request_id
            await send(message)

        structlog.contextvars.bind_contextvars(request_id=request_id)
        self._metrics.underway.inc()
        try:
            await self.app(scope, receive, send_with_id)
        finally:
            self._metrics.underway.dec()
            self._note(scope, status, perf_counter() - started_s)
            structlog.contextvars.unbind_contextvars("request_id")

    def _note(self, scope: Scope, status: int, lasted_s: float) -> None:
        route = _route(scope)
        self._metrics.requests.labels(scope["method"], route, str(status)).inc()
        self._metrics.durations_s.labels(route).observe(lasted_s)
        if not scope["path"].startswith("/static/"):
            log.info(
                "request",
                method=scope["method"],
                route=route,
                status=status,
                ms=round(lasted_s * 1000, 1),
            )


class UnforeseenMiddleware:
    """Answers what nobody foresaw; the error itself is written in the log by its handler."""

    def __init__(self, app: ASGIApp) -> None:
        self.app = app

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request, whatever happens."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        has_begun = False

        async def send_and_note(message: Message) -> None:
            nonlocal has_begun
            has_begun = True
            await send(message)

        try:
            await self.app(scope, receive, send_and_note)
        except Exception as error:
            if has_begun:
                raise
            handler = scope["app"].exception_handlers[Exception]
            await handler(Request(scope), error)(scope, receive, send)


def _request_id(scope: Scope) -> str:
    """The id that the caller gave, where it is one; else a new one."""
    given = Headers(scope=scope).get(REQUEST_ID, "")
    return given if _SENSIBLE_ID.fullmatch(given) else token_hex(8)


def _route(scope: Scope) -> str:
    """The route as declared, such as /api/v1/held/{held_id}/drop."""
    if scope["path"].startswith("/static/"):
        return "/static"
    return getattr(scope.get("route"), "path_format", _UNKNOWN)
