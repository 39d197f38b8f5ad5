"""The page on which people sign in, and the way out.

Whoever's session ended while a round was being typed signs in here without losing it: what was
sent is carried through the form and can be sent again afterwards.
"""

import asyncio
from collections.abc import AsyncIterator
from dataclasses import dataclass
from typing import Annotated
from urllib.parse import parse_qsl, urlencode

import structlog
from fastapi import APIRouter, Depends, Form, Query, Request
from starlette.responses import RedirectResponse, Response

from server.storage.people import Person, person_named, person_with_id
from server.web import csrf
from server.web.dependencies import (
    Here,
    SignedInPerson,
    Standing,
    ThisSite,
    Who,
    frame,
    sent_form,
)
from server.web.i18n import gettext as _
from server.web.i18n import ngettext
from server.web.render import page
from server.web.sign_in import (
    SESSION_COOKIE,
    SignedIn,
    cookie_text,
    drop_cookie,
    is_secure,
    safe_next,
    set_cookie,
    signed_in,
)
from server.web.site import Site

AT_ONCE = 2
MOST_WAITING = 20
_LONGEST_NAME = 200

log = structlog.get_logger()
router = APIRouter(include_in_schema=False)


@dataclass(frozen=True)
class Wanted:
    """Where to go after signing in, and what had been typed there."""

    path: str = "/"
    kept: str = ""
    """The fields of a form, as an address writes them; empty where nothing was typed."""


async def _turn(request: Request) -> AsyncIterator[bool]:
    """Wait for a turn where waiting takes no thread, so that rounds go on being logged.

    Answers whether there was room to wait at all.
    """
    state = request.app.state
    if not hasattr(state, "sign_in_turns"):
        state.sign_in_turns, state.sign_ins = asyncio.Semaphore(AT_ONCE), 0
    if state.sign_ins >= AT_ONCE + MOST_WAITING:
        yield False
        return
    state.sign_ins += 1
    try:
        async with state.sign_in_turns:
            yield True
    finally:
        state.sign_ins -= 1


async def _typed(request: Request) -> str:
    """The fields of a form as an address writes them, without the token of the session."""
    if csrf.comes_from_elsewhere(request.headers, request.headers.get("host", "")):
        raise csrf.ForeignForm
    return urlencode(
        [
            (field, value)
            for field, value in (await sent_form(request)).multi_items()
            if isinstance(value, str) and field != csrf.FIELD
        ]
    )


Turn = Annotated[bool, Depends(_turn, scope="function")]
Text = Annotated[str, Form()]


@router.get("/sign-in", name="sign_in")
def sign_in(
    request: Request, here: Here, site: ThisSite, after: Annotated[str, Query(alias="next")] = ""
) -> Response:
    """Ask for name and password, unless somebody is signed in already."""
    if here.who and not here.who.is_program:
        return RedirectResponse(safe_next(after), 303)
    return _form(request, here, site, Wanted(safe_next(after)))


@router.post("/sign-in/again", name="sign_in_again")
def sign_in_again(
    request: Request, here: Here, site: ThisSite, typed: Annotated[str, Depends(_typed)]
) -> Response:
    """Keep what was typed into a form whose session is over, and ask to sign in."""
    wanted = Wanted(request.url_for("log_shift").path, typed)
    if here.who and not here.who.is_program:
        return _carry_on(request, wanted)
    return _form(request, here, site, wanted)


@router.post("/sign-in", name="sign_in_send")
def sign_in_send(
    request: Request,
    here: Here,
    site: ThisSite,
    turn: Turn,
    name: Text = "",
    password: Text = "",
    after: Annotated[str, Form(alias="next")] = "",
    kept: Text = "",
    csrf_token: Text = "",
) -> Response:
    """Let somebody in whose name and password belong together."""
    wanted = Wanted(safe_next(after), kept)
    if not _is_ours(request, here, csrf_token):
        fault = _("Try once more; the browser has to take the cookie of this site.")
        return _form(request, here, site, wanted, name, fault, 403)
    if not turn:
        fault = _("Many are signing in at this moment; try again shortly.")
        return _form(request, here, site, wanted, name, fault, 429)
    person, fault, status = _admitted(request, here, site, name.strip(), password)
    if person is None:
        return _form(request, here, site, wanted, name, fault, status)
    return _let_in(request, here, site, person, wanted)


@router.post("/sign-out", name="sign_out")
def sign_out(request: Request, _who: SignedInPerson, site: ThisSite) -> Response:
    """Take the cookie away."""
    response = RedirectResponse(request.url_for("sign_in").path, 303)
    secure = is_secure(request, site.settings.secure_cookies)
    drop_cookie(response, SESSION_COOKIE, secure=secure)
    return response


def lay_session(response: Response, request: Request, site: Site, key: str, own: SignedIn) -> None:
    """Lay the cookie of a session, which lasts as long as the site wants."""
    set_cookie(
        response,
        SESSION_COOKIE,
        cookie_text(own, key),
        secure=is_secure(request, site.settings.secure_cookies),
        lasts_s=round(site.settings.session_h * 3600),
    )


def address_of(request: Request) -> str:
    """The address from which a request comes."""
    return request.client.host if request.client else ""


def pause_words(wait_ms: int) -> str:
    """How long to wait after wrong passwords, as a sentence."""
    seconds = -(-wait_ms // 1000)
    if seconds < 120:
        return ngettext(
            "Too many wrong passwords: try again in %(num)s second.",
            "Too many wrong passwords: try again in %(num)s seconds.",
            seconds,
        ) % {"num": seconds}
    return _("Too many wrong passwords: try again in %(num)s minutes.") % {"num": -(-seconds // 60)}


def _admitted(
    request: Request, here: Standing, site: Site, name: str, password: str
) -> tuple[Person | None, str, int]:
    """The person of this name and password, or what is wrong and its status."""
    limit, address = site.sign_in_limit, address_of(request)
    if wait_ms := limit.wait_ms(name, address, here.now_ms):
        return None, pause_words(wait_ms), 429
    with site.database.read() as session:
        person = person_named(session, name) if len(name) <= _LONGEST_NAME else None
    kept = person.password_hash if person and person.is_active else None
    if not site.passwords.holds(password, kept) or person is None:
        limit.was_wrong(name[:_LONGEST_NAME], address, here.now_ms)
        log.warning("wrong password", address=address)
        return None, _("Name and password do not belong together."), 422
    limit.was_right(name, address)
    _keep_hash_of_today(site, person, password)
    return person, "", 200


def _keep_hash_of_today(site: Site, person: Person, password: str) -> None:
    """Hash the password anew where the site has since chosen other settings."""
    if site.passwords.wants_new_hash(person.password_hash):
        new = site.passwords.hashed(password)
        with site.database.write() as session:
            person_with_id(session, person.id).password_hash = new


def _let_in(
    request: Request, here: Standing, site: Site, person: Person, wanted: Wanted
) -> Response:
    own = signed_in(person.id, person.session_epoch, here.now_ms)
    if wanted.kept:
        who = Who(person.name, person.role, own)
        request.state.frame = frame(Standing(here.house, here.now_ms, who, here.key))
        response = _carry_on(request, wanted)
    else:
        response = RedirectResponse(wanted.path, 303)
    lay_session(response, request, site, here.key, own)
    return response


def _form(
    request: Request,
    here: Standing,
    site: Site,
    wanted: Wanted,
    name: str = "",
    fault: str = "",
    status: int = 200,
) -> Response:
    """The form, bound to the cookie of this visit, which is laid where there is none."""
    visit = request.cookies.get(csrf.VISIT_COOKIE) or csrf.new_visit()
    context = {
        "wanted": wanted,
        "name": name,
        "fault": fault,
        "form_token": csrf.form_token(visit, here.key),
    }
    response = page(request, "sign_in.html", context, status_code=status)
    secure = is_secure(request, site.settings.secure_cookies)
    set_cookie(response, csrf.VISIT_COOKIE, visit, secure=secure)
    return response


def _is_ours(request: Request, here: Standing, token: str) -> bool:
    visit, host = request.cookies.get(csrf.VISIT_COOKIE, ""), request.headers.get("host", "")
    try:
        csrf.checked(token, visit, here.key, request.headers, host)
    except csrf.ForeignForm:
        return False
    return True


def _carry_on(request: Request, wanted: Wanted) -> Response:
    fields = parse_qsl(wanted.kept, keep_blank_values=True)
    context = {"path": request.url_for("log_shift").path, "fields": fields}
    return page(request, "carry_on.html", context, headers={"cache-control": "no-store"})
