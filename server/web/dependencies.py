"""What a route may ask for by name: sessions, the house, the time, and who is asking.

Who asks, the house and the time are found out in one step with a short session of its own, so
that no connection is held while a body arrives or a thread is waited for. The sessions of a route
end before its answer is sent: what is confirmed to the sender is committed.
"""

from collections.abc import AsyncIterator, Iterator
from dataclasses import dataclass
from typing import Annotated, Any

import structlog
from fastapi import Depends, Request
from fastapi.security import APIKeyCookie, HTTPAuthorizationCredentials, HTTPBearer
from sqlalchemy.orm import Session
from starlette.datastructures import FormData
from starlette.exceptions import HTTPException

from server import clock
from server.accounts.periods import shift_of
from server.jobs import catch_up
from server.storage.kept_house import kept_house
from server.storage.people import ROLES, Person, token_with_hash
from server.storage.plant import House, tankhouse
from server.web import csrf
from server.web.errors import NotAllowed, SignInNeeded, is_api
from server.web.i18n import gettext as _
from server.web.render import Frame
from server.web.security import token_hash
from server.web.sign_in import SESSION_COOKIE, SignedIn, session_of
from server.web.site import Site, site_of

CATCH_UP_AT_ONCE_S = 0.5
"""Longest time for which an answer waits for figures; the rest is worked off in the background."""

MOST_FILES = 50
MOST_FIELDS = 5_000
"""Of one form: a round typed into a plain one sends a few fields for each of a thousand cells."""

_bearer = HTTPBearer(
    auto_error=False,
    scheme_name="token",
    description="A program's token, made on the command line or on the page of people.",
)
_cookie = APIKeyCookie(
    name=SESSION_COOKIE,
    auto_error=False,
    scheme_name="signed-in",
    description="The cookie of someone who is signed in; what writes also needs the header "
    f"{csrf.HEADER}.",
)

log = structlog.get_logger()


@dataclass(frozen=True)
class Who:
    """Who asks: a person who is signed in, or a program with a token."""

    name: str
    role: str
    signed_in: SignedIn | None = None
    """The person's session; None for a program."""

    @property
    def is_program(self) -> bool:
        """Whether a token was sent rather than a cookie."""
        return self.signed_in is None

    @property
    def sender(self) -> str:
        """The name under which the books keep what this one sends."""
        return f"token {self.name}" if self.is_program else self.name

    def may(self, role: str) -> bool:
        """Whether this one may do what takes that role."""
        return ROLES.index(self.role) >= ROLES.index(role)


@dataclass(frozen=True)
class Standing:
    """Where a request stands: the house, the time there, and who asks, where that is known."""

    house: House
    now_ms: int
    who: Who | None
    key: str
    """Signs the cookies."""


def standing(
    request: Request,
    bearer: Annotated[HTTPAuthorizationCredentials | None, Depends(_bearer)],
    cookie: Annotated[str | None, Depends(_cookie)],
) -> Standing:
    """Find out where a request stands, and lay what stands around every page."""
    site = site_of(request)
    now_ms = clock.now_ms()
    with site.database.read() as session:
        house = kept_house(session)
        key = signing_key(site, session)
        if bearer:
            who = _program(session, bearer.credentials)
        else:
            who = _person(session, session_of(cookie, key, now_ms, _lasts_ms(site)))
    found = Standing(house, now_ms, who, key)
    if not is_api(request):
        request.state.frame = frame(found)
    return found


def signing_key(site: Site, session: Session) -> str:
    """The key that signs cookies: the site's own setting, else the one kept with the books."""
    own = site.settings.secret_key
    return own.get_secret_value() if own else tankhouse(session).signing_key


def frame(here: Standing) -> Frame:
    """What stands around a page of someone who stands here."""
    who = here.who
    signed_in = who.signed_in if who else None
    return Frame(
        tankhouse=here.house.name,
        zone=here.house.time_zone,
        now_ms=here.now_ms,
        shift=shift_of(here.now_ms, here.house).name,
        person=who.name if who else "",
        role=who.role if who else "",
        form_token=lambda: csrf.form_token(signed_in.nonce, here.key) if signed_in else "",
    )


def _program(session: Session, token: str) -> Who | None:
    found = token_with_hash(session, token_hash(token))
    return Who(found.name, found.role) if found else None


def _person(session: Session, signed_in: SignedIn | None) -> Who | None:
    person = session.get(Person, signed_in.person_id) if signed_in else None
    if person is None or signed_in is None:
        return None
    if not person.is_active or person.session_epoch != signed_in.epoch:
        return None
    return Who(person.name, person.role, signed_in)


def _lasts_ms(site: Site) -> int:
    return round(site.settings.session_h * 3_600_000)


class Requires:
    """Lets in whoever has a role, or a higher one; every route has one of these.

    What writes with a cookie must also carry the form token of the session, in the header or in
    the form's field, so that no other site can make a browser send it.
    """

    def __init__(self, role: str, *, person: bool = False) -> None:
        assert role in ROLES
        self.role = role
        self.is_for_people = person

    async def __call__(self, request: Request, here: Annotated[Standing, Depends(standing)]) -> Who:
        """Give who asks, or refuse."""
        who = here.who
        if who is None or (self.is_for_people and who.is_program):
            raise SignInNeeded
        if not who.may(self.role):
            raise NotAllowed(who.role, self.role)
        if who.signed_in and request.method not in csrf.SAFE_METHODS:
            token = request.headers.get(csrf.HEADER) or await _field(request, csrf.FIELD)
            host = request.headers.get("host", "")
            try:
                csrf.checked(token, who.signed_in.nonce, here.key, request.headers, host)
            except csrf.ForeignForm:
                await request.close()
                raise
        return who


async def _field(request: Request, name: str) -> str | None:
    """A field of the form that was sent, if one was."""
    kind = request.headers.get("content-type", "").partition(";")[0].strip().lower()
    if kind not in ("application/x-www-form-urlencoded", "multipart/form-data"):
        return None
    value = (await sent_form(request)).get(name)
    return value if isinstance(value, str) else None


async def sent_form(request: Request) -> FormData:
    """The form that was sent, read once however often it is asked for."""
    form = await request.form(max_files=MOST_FILES, max_fields=MOST_FIELDS)
    if any("\0" in value for value in form.values() if isinstance(value, str)):
        await form.close()
        raise HTTPException(400, _("There is a NUL character in what was sent; take it out."))
    return form


def requires(role: str) -> Any:
    """For `dependencies=[...]` of a route that lets a role in and asks no more of who it is."""
    return Depends(Requires(role))


def _house(here: Annotated[Standing, Depends(standing)]) -> House:
    return here.house


def _now_ms(here: Annotated[Standing, Depends(standing)]) -> int:
    return here.now_ms


def _site(request: Request) -> Site:
    return site_of(request)


def read_session(site: Annotated[Site, Depends(_site)]) -> Iterator[Session]:
    """A session that reads, for as long as the route works."""
    with site.database.read() as session:
        yield session


async def _turn_to_write(site: Annotated[Site, Depends(_site)]) -> AsyncIterator[None]:
    async with site.turn_to_write:
        yield


def write_session(
    site: Annotated[Site, Depends(_site)],
    _turn: Annotated[None, Depends(_turn_to_write, scope="function")],
) -> Iterator[Session]:
    """A session that writes; committed when the route has ended well, before the answer is sent.

    Figures that depend on what was written are brought up to date first, as far as that is
    quickly done.
    """
    with site.database.write() as session:
        yield session
        follow(session, site)


def follow(session: Session, site: Site) -> int | None:
    """Bring figures up to date with what the session has just written.

    Answers how many stretches of time are left to do, or None after a fault. A fault in the
    figures must not refuse what was read off a meter: it is undone alone, counted and written in
    the log, and what has yet to be done stays marked.
    """
    session.flush()
    try:
        with session.begin_nested():
            return catch_up(session, site.settings, budget_s=CATCH_UP_AT_ONCE_S)
    except Exception as error:
        site.metrics.catch_up_failures.inc()
        log.error("figures could not follow", exc_info=error)
        return None


def follow_in_own_session(site: Site) -> int | None:
    """Bring figures up to date after a delivery that was stored in transactions of its own."""
    with site.database.write() as session:
        return follow(session, site)


ThisSite = Annotated[Site, Depends(_site)]
"""Settings, database, passwords, sign-in limit and metrics of the server."""

Here = Annotated[Standing, Depends(standing)]
"""The house, the time and who asks, whoever it is: for the few routes open to all."""

DbSession = Annotated[Session, Depends(read_session, scope="function")]
"""A session that sees one moment of the books and writes nothing."""

WriteSession = Annotated[Session, Depends(write_session, scope="function")]
"""A session that commits before the answer is sent."""

ThisHouse = Annotated[House, Depends(_house)]
"""The tankhouse as it is set up."""

Now = Annotated[int, Depends(_now_ms)]
"""This moment, ms since 1970-01-01T00:00Z."""

Reader = Annotated[Who, Depends(Requires("reader"))]
Operator = Annotated[Who, Depends(Requires("operator"))]
Planner = Annotated[Who, Depends(Requires("planner"))]
Superintendent = Annotated[Who, Depends(Requires("superintendent"))]
SignedInPerson = Annotated[Who, Depends(Requires("reader", person=True))]
"""Someone signed in with a password, of any role: for a person's own page."""
