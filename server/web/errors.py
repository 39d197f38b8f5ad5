"""Which error becomes which status: problem details (RFC 9457), or calm pages for people."""

from collections.abc import Mapping
from http import HTTPStatus
from typing import Any
from urllib.parse import quote

import orjson
import structlog
from fastapi import FastAPI
from fastapi.exceptions import RequestValidationError
from starlette.exceptions import HTTPException
from starlette.requests import Request
from starlette.responses import RedirectResponse, Response

from server.science.errors import ScienceError
from server.storage.errors import Conflict, NoPlant, NotFound
from server.web.csrf import SAFE_METHODS, ForeignForm
from server.web.headers import SECURITY_HEADERS
from server.web.i18n import LANGUAGE_COOKIE, SOURCE_LANGUAGE, chosen_language, speaking
from server.web.i18n import gettext as _
from server.web.render import page

PROBLEM_JSON = "application/problem+json"
API_PREFIX = "/api/"

log = structlog.get_logger()


class SignInNeeded(Exception):
    """Nobody is signed in, and no token came with the request."""


class NotAllowed(Exception):
    """Whoever asks has a role that may not do this."""

    def __init__(self, role: str, needed: str) -> None:
        self.role, self.needed = role, needed
        super().__init__(f"a {role} may not do this; it takes a {needed}")


class TooLarge(Exception):
    """What was sent is larger than the site takes."""

    def __init__(self, most_mib: int) -> None:
        self.most_mib = most_mib
        super().__init__(f"at most {most_mib} MiB are taken")


def is_api(request: Request) -> bool:
    """Whether a program asks, to which an error is told as problem details."""
    return request.url.path.startswith(API_PREFIX)


def problem(
    status: int, detail: str, *, headers: Mapping[str, str] | None = None, **more: Any
) -> Response:
    """An error for programs. `more` are further members, such as the list of faults."""
    body = {"type": "about:blank", "title": HTTPStatus(status).phrase, "status": status}
    body |= {"detail": detail} | more
    return Response(orjson.dumps(body), status, headers, media_type=PROBLEM_JSON)


def install(app: FastAPI) -> None:
    """Let the application answer every error in its one way."""
    app.add_exception_handler(SignInNeeded, _sign_in_needed)
    app.add_exception_handler(NotAllowed, _not_allowed)
    app.add_exception_handler(ForeignForm, _foreign_form)
    app.add_exception_handler(TooLarge, _too_large)
    app.add_exception_handler(NotFound, _not_found)
    app.add_exception_handler(Conflict, _conflict)
    app.add_exception_handler(NoPlant, _no_plant)
    app.add_exception_handler(ScienceError, _out_of_range)
    app.add_exception_handler(RequestValidationError, _not_understood)
    app.add_exception_handler(HTTPException, _http)
    app.add_exception_handler(Exception, _unforeseen)


def answer(
    request: Request,
    status: int,
    heading: str,
    detail: str,
    *,
    headers: Mapping[str, str] | None = None,
    **more: Any,
) -> Response:
    """The error in the form that whoever asked can read."""
    if is_api(request):
        return problem(status, detail, headers=headers, instance=request.url.path, **more)
    return page(
        request,
        "error.html",
        {"status": status, "heading": heading, "detail": detail, "faults": more.get("errors", [])},
        status_code=status,
        headers=headers,
    )


def _sign_in_needed(request: Request, _error: Exception) -> Response:
    if is_api(request):
        return problem(
            401,
            _("Sign in, or send a token: Authorization: Bearer ..."),
            headers={"www-authenticate": "Bearer"},
            instance=request.url.path,
        )
    wanted = request.url.path + (f"?{request.url.query}" if request.url.query else "")
    where = f"?next={quote(wanted)}" if request.method in SAFE_METHODS and wanted != "/" else ""
    return RedirectResponse(f"{request.url_for('sign_in').path}{where}", 303)


def _not_allowed(request: Request, error: Exception) -> Response:
    assert isinstance(error, NotAllowed)
    detail = _("This takes the role %(needed)s; you are signed in as %(role)s.") % {
        "needed": error.needed,
        "role": error.role,
    }
    return answer(request, 403, _("Not for your role"), detail)


def _foreign_form(request: Request, _error: Exception) -> Response:
    return answer(
        request,
        403,
        _("The form is too old"),
        _("Nothing was changed. Open the page again and send the form from there."),
    )


def _too_large(request: Request, error: Exception) -> Response:
    assert isinstance(error, TooLarge)
    detail = _("At most %(most)d MiB are taken; split the file in two.") % {"most": error.most_mib}
    return answer(request, 413, _("Too large"), detail)


def _not_found(request: Request, error: Exception) -> Response:
    return answer(request, 404, _("Not in the books"), _sentence(error))


def _conflict(request: Request, error: Exception) -> Response:
    return answer(request, 409, _("This contradicts the books"), _sentence(error))


def _no_plant(request: Request, error: Exception) -> Response:
    return answer(request, 503, _("No tankhouse yet"), _sentence(error))


def _out_of_range(request: Request, error: Exception) -> Response:
    return answer(request, 422, _("A number that cannot be"), _sentence(error))


def _not_understood(request: Request, error: Exception) -> Response:
    assert isinstance(error, RequestValidationError)
    faults = [
        {"where": ".".join(str(step) for step in fault["loc"]), "what": str(fault["msg"])}
        for fault in error.errors()
    ]
    detail = _("Something is missing or cannot be read.")
    return answer(request, 422, _("Not understood"), detail, errors=faults)


def _http(request: Request, error: Exception) -> Response:
    assert isinstance(error, HTTPException)
    headings = {
        404: (_("There is no such page"), _("Perhaps the address has a slip of the pen.")),
        405: (_("Not done this way"), _("This address does not take what was sent.")),
        429: (_("Too many at once"), _("Wait a moment and try again.")),
    }
    phrase = HTTPStatus(error.status_code).phrase
    heading, detail = headings.get(error.status_code, (phrase, str(error.detail)))
    if error.detail and error.detail != phrase:
        detail = str(error.detail)
    return answer(request, error.status_code, heading, detail, headers=error.headers)


def _unforeseen(request: Request, error: Exception) -> Response:
    """May answer outside of every middleware, so that language and headers are seen to here."""
    log.error("unforeseen error", exc_info=error)
    accepted = request.headers.get("accept-language", "")
    language = chosen_language(request.cookies.get(LANGUAGE_COOKIE), accepted, SOURCE_LANGUAGE)
    with speaking(language):
        response = answer(
            request,
            500,
            _("Something went wrong here"),
            _("It is written in the server's log. Nothing that was confirmed before is lost."),
        )
    response.headers.update(SECURITY_HEADERS)
    return response


def _sentence(error: Exception) -> str:
    """The error's own words as a sentence."""
    words = str(error)
    return words[:1].upper() + words[1:] + ("" if words.endswith((".", "!", "?")) else ".")
