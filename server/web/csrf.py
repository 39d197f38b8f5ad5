"""Proof that a form was sent from our own page: a token bound to the session.

Each answer carries the token under another random mask, so that compressed pages never repeat it
and its letters cannot be found out from their lengths. Requests with a bearer token need none.
"""

import hashlib
import hmac
from base64 import urlsafe_b64decode, urlsafe_b64encode
from binascii import Error as NotBase64
from collections.abc import Mapping
from secrets import token_bytes, token_urlsafe

FIELD = "csrf_token"
HEADER = "x-csrf-token"
VISIT_COOKIE = "ampledger_visit"
"""Holds a random value for whoever is not signed in, to which the sign-in form is bound."""

SAFE_METHODS = frozenset({"GET", "HEAD", "OPTIONS", "TRACE"})
_LENGTH = 32


class ForeignForm(Exception):
    """A form that was not sent from our own page, or from one that is too old."""


def new_visit() -> str:
    """A random value for the visit of someone who is not signed in."""
    return token_urlsafe(16)


def form_token(bound_to: str, key: str) -> str:
    """A token for one form, bound to the session's nonce or to the visit."""
    mask = token_bytes(_LENGTH)
    return urlsafe_b64encode(mask + _mixed(mask, _proof(bound_to, key))).decode()


def is_ours(token: str | None, bound_to: str, key: str) -> bool:
    """Whether the token was made for this session or visit."""
    if not token or not bound_to:
        return False
    try:
        parts = urlsafe_b64decode(token.encode("ascii"))
    except (NotBase64, ValueError):
        return False
    if len(parts) != 2 * _LENGTH:
        return False
    return hmac.compare_digest(_mixed(parts[:_LENGTH], parts[_LENGTH:]), _proof(bound_to, key))


def comes_from_elsewhere(headers: Mapping[str, str], host: str) -> bool:
    """Whether the browser itself says that another site made it send this request."""
    site = headers.get("sec-fetch-site")
    if site is not None:
        return site not in ("same-origin", "none")
    origin = headers.get("origin")
    return origin is not None and origin.partition("://")[2] != host


def checked(
    token: str | None, bound_to: str, key: str, headers: Mapping[str, str], host: str
) -> None:
    """Refuse a form that is not ours.

    Raises
    ------
    ForeignForm
        If the token is not the session's, or the browser names another site as the sender.
    """
    if comes_from_elsewhere(headers, host) or not is_ours(token, bound_to, key):
        raise ForeignForm


def _proof(bound_to: str, key: str) -> bytes:
    return hmac.new(key.encode(), b"ampledger.form:" + bound_to.encode(), hashlib.sha256).digest()


def _mixed(left: bytes, right: bytes) -> bytes:
    return bytes(a ^ b for a, b in zip(left, right, strict=True))
