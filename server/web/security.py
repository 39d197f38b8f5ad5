"""Secrets: passwords and the hashes kept of them, tokens of programs, random passwords."""

import hashlib
import secrets
import unicodedata
from threading import BoundedSemaphore

from pwdlib import PasswordHash
from pwdlib.hashers.argon2 import Argon2Hasher

from server.web.i18n import gettext as _

PASSWORD_LEAST = 10
PASSWORD_MOST = 256
TOKEN_PREFIX = "amp_"  # noqa: S105 - a mark by which a lost token is recognised, not a secret
_ALPHABET = "abcdefghjkmnpqrstuvwxyz23456789"
_PARALLEL_LANES = 1


class Passwords:
    """Hashes and verifies passwords with argon2id, few at a time.

    Each takes `memory_kib` of memory while it works; the others wait, so that many sign-ins at
    once cannot take the server's memory.
    """

    def __init__(self, memory_kib: int, rounds: int, at_once: int = 2) -> None:
        self._hash = PasswordHash(
            [Argon2Hasher(time_cost=rounds, memory_cost=memory_kib, parallelism=_PARALLEL_LANES)]
        )
        self._room = BoundedSemaphore(at_once)
        self._nobody: str | None = None

    def hashed(self, password: str) -> str:
        """What is kept of a password."""
        with self._room:
            return self._hash.hash(_normal(password))

    def holds(self, password: str, kept: str | None) -> bool:
        """Whether the password is the one of which this was kept.

        `kept` is None where there is no such person; the work is done all the same, so that the
        time taken does not tell whether a name exists.
        """
        if len(password) > PASSWORD_MOST:
            return False
        with self._room:
            if not kept:
                self._hash.verify(_normal(password), self._of_nobody())
                return False
            return self._hash.verify(_normal(password), kept)

    def wants_new_hash(self, kept: str) -> bool:
        """Whether a hash was made with other settings than today's and should be made anew."""
        return self._hash.current_hasher.check_needs_rehash(kept)

    def _of_nobody(self) -> str:
        if self._nobody is None:
            self._nobody = self._hash.hash(secrets.token_urlsafe(16))
        return self._nobody


def fault_of_password(password: str, name: str) -> str | None:
    """What is wrong with a new password, as a sentence; None where nothing is."""
    if len(password) < PASSWORD_LEAST:
        return _("Use at least %(least)d characters; a few words are easiest to remember.") % {
            "least": PASSWORD_LEAST
        }
    if len(password) > PASSWORD_MOST:
        return _("Use at most %(most)d characters.") % {"most": PASSWORD_MOST}
    if len(set(password.casefold())) < 5:
        return _("Use more than four different characters.")
    if name and name.casefold() in password.casefold():
        return _("Leave your name out of the password.")
    return None


def new_password() -> str:
    """A random password that can be read out: four groups of four, 79 bits."""
    letters = [secrets.choice(_ALPHABET) for _place in range(16)]
    return "-".join("".join(letters[start : start + 4]) for start in range(0, 16, 4))


def new_token() -> str:
    """A random token for a program, 256 bits; it is shown once."""
    return TOKEN_PREFIX + secrets.token_urlsafe(32)


def token_hash(token: str) -> str:
    """What is kept of a token. It is random, so that a plain SHA-256 cannot be guessed back."""
    return hashlib.sha256(token.encode()).hexdigest()


def new_key() -> str:
    """A random key for signing cookies, 384 bits."""
    return secrets.token_urlsafe(48)


def _normal(password: str) -> str:
    """The password with its letters composed one way, whatever keyboard typed them."""
    return unicodedata.normalize("NFKC", password)
