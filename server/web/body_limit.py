"""What one request may send: not too much, counted while it arrives, and no NUL in its words."""

from collections.abc import Mapping

from starlette.datastructures import Headers
from starlette.exceptions import HTTPException
from starlette.requests import Request
from starlette.types import ASGIApp, Message, Receive, Scope, Send

from server.web.errors import answer
from server.web.i18n import gettext as _

MIB = 1024 * 1024

_NUL_IN = {"application/json": b"\\u0000", "application/x-www-form-urlencoded": b"%00"}
"""How a NUL is written in bodies of words. PostgreSQL keeps none, and nobody means one."""


class BodyLimitMiddleware:
    """Refuses what is too large before it is read, or as soon as it has grown too large.

    `larger_at` names the beginnings of the paths at which files are taken, with their own limit
    in MiB; everywhere else `most_mib` holds.
    """

    def __init__(self, app: ASGIApp, most_mib: int, larger_at: Mapping[str, int]) -> None:
        self.app = app
        self._most_mib = most_mib
        self._larger_at = dict(larger_at)

    def limit_mib(self, path: str) -> int:
        """The limit that holds for a path, MiB."""
        limits = (most for start, most in self._larger_at.items() if path.startswith(start))
        return max(limits, default=self._most_mib)

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request, unless it sends what is not taken."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        most_mib = self.limit_mib(scope["path"])
        headers = Headers(scope=scope)
        announced = headers.get("content-length", "")
        if announced.isdecimal() and int(announced) > most_mib * MIB:
            response = answer(Request(scope), 413, _("Too large"), _too_large(most_mib))
            response.headers["connection"] = "close"
            await response(scope, receive, send)
            return
        if b"%00" in scope.get("query_string", b"") or "\0" in scope["path"]:
            response = answer(Request(scope), 400, _("Not understood"), _nul_found())
            await response(scope, receive, send)
            return
        nul = _NUL_IN.get(headers.get("content-type", "").partition(";")[0].strip().lower())
        received, seam = 0, b""

        async def receive_within_limit() -> Message:
            nonlocal received, seam
            message = await receive()
            body = message.get("body", b"")
            received += len(body)
            if received > most_mib * MIB:
                raise HTTPException(413, _too_large(most_mib))
            if nul and nul in seam + body:
                raise HTTPException(400, _nul_found())
            seam = (seam + body)[-8:]
            return message

        await self.app(scope, receive_within_limit, send)


def _too_large(most_mib: int) -> str:
    return _("At most %(most)d MiB are taken; split what you send in two.") % {"most": most_mib}


def _nul_found() -> str:
    return _("There is a NUL character in what was sent; take it out.")
