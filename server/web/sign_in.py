"""Who is signed in: the signed cookie, and the pause after wrong passwords."""

from collections import OrderedDict
from dataclasses import dataclass
from secrets import token_urlsafe
from threading import Lock
from urllib.parse import urlsplit

from itsdangerous import BadData, URLSafeSerializer
from starlette.requests import HTTPConnection
from starlette.responses import Response

SESSION_COOKIE = "ampledger_session"
_SALT = "ampledger.session"

_FIRST_PAUSE_MS = 2_000
_LONGEST_PAUSE_MS = 15 * 60_000
_FORGOTTEN_AFTER_MS = 60 * 60_000
_ADDRESS_FACTOR = 10
_MOST_KEPT = 10_000


@dataclass(frozen=True)
class SignedIn:
    """What the cookie says: who signed in, when, and in which epoch of that person's sessions."""

    person_id: int
    epoch: int
    since_ms: int
    nonce: str
    """Random for each sign-in; tokens of forms are bound to it."""


def signed_in(person_id: int, epoch: int, now_ms: int) -> SignedIn:
    """A new session of this person."""
    return SignedIn(person_id, epoch, now_ms, token_urlsafe(16))


def cookie_text(session: SignedIn, key: str) -> str:
    """The session as the cookie carries it, signed with the key."""
    return str(
        URLSafeSerializer(key, salt=_SALT).dumps(
            [session.person_id, session.epoch, session.since_ms, session.nonce]
        )
    )


def session_of(text: str | None, key: str, now_ms: int, lasts_ms: int) -> SignedIn | None:
    """The session a cookie carries; None where it is not ours, or over.

    Whether the person is still active and the epoch still theirs is for the caller to ask.
    """
    if not text:
        return None
    try:
        found = URLSafeSerializer(key, salt=_SALT).loads(text)
    except BadData:
        return None
    match found:
        case [int(person_id), int(epoch), int(since_ms), str(nonce)]:
            if since_ms <= now_ms + 60_000 and now_ms < since_ms + lasts_ms:
                return SignedIn(person_id, epoch, since_ms, nonce)
    return None


def is_secure(request: HTTPConnection, secure_cookies: str) -> bool:
    """Whether cookies of this answer go over TLS only; 'auto' follows the request's scheme."""
    return secure_cookies == "always" or (
        secure_cookies == "auto" and request.url.scheme in ("https", "wss")
    )


def set_cookie(
    response: Response, name: str, value: str, *, secure: bool, lasts_s: int | None = None
) -> None:
    """Lay a cookie that no script reads and no other site sends."""
    response.set_cookie(
        name, value, max_age=lasts_s, path="/", secure=secure, httponly=True, samesite="lax"
    )


def drop_cookie(response: Response, name: str, *, secure: bool) -> None:
    """Take a cookie away."""
    response.delete_cookie(name, path="/", secure=secure, httponly=True, samesite="lax")


def safe_next(wanted: str | None) -> str:
    """Where to go after signing in: a path on this server, never another site."""
    if not wanted or not wanted.startswith("/") or wanted.startswith(("//", "/\\")):
        return "/"
    parts = urlsplit(wanted)
    if parts.scheme or parts.netloc or any(ord(letter) < 32 for letter in wanted):
        return "/"
    return wanted


class SignInLimit:
    """Asks for an ever longer pause after wrong passwords of one name from one address.

    Names that one address tries are counted together too, more loosely, so that going through
    many names is slow as well. It lives in memory and is asked by the sign-in form alone: who is
    signed in, and every program with a token, goes on logging whatever happens here.
    """

    def __init__(self, tries: int) -> None:
        self._tries = tries
        self._wrong: OrderedDict[tuple[str, str], tuple[int, int]] = OrderedDict()
        self._lock = Lock()

    def wait_ms(self, name: str, address: str, now_ms: int) -> int:
        """How long to wait before the next try, ms; 0 when it may be made now."""
        with self._lock:
            return max(
                self._pause_left((name.casefold(), address), self._tries, now_ms),
                self._pause_left(("", address), self._tries * _ADDRESS_FACTOR, now_ms),
            )

    def was_wrong(self, name: str, address: str, now_ms: int) -> None:
        """Count a wrong password."""
        with self._lock:
            for key in ((name.casefold(), address), ("", address)):
                count, last_ms = self._wrong.pop(key, (0, now_ms))
                if now_ms - last_ms > _FORGOTTEN_AFTER_MS:
                    count = 0
                self._wrong[key] = (count + 1, now_ms)
            while len(self._wrong) > _MOST_KEPT:
                self._wrong.popitem(last=False)

    def was_right(self, name: str, address: str) -> None:
        """Forget the wrong passwords of a name from an address, once the right one came."""
        with self._lock:
            self._wrong.pop((name.casefold(), address), None)

    def _pause_left(self, key: tuple[str, str], tries: int, now_ms: int) -> int:
        count, last_ms = self._wrong.get(key, (0, 0))
        if count < tries or now_ms - last_ms > _FORGOTTEN_AFTER_MS:
            return 0
        pause_ms = min(_FIRST_PAUSE_MS << min(count - tries, 20), _LONGEST_PAUSE_MS)
        return max(0, last_ms + pause_ms - now_ms)
