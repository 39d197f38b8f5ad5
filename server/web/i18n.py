"""Languages of the pages: which one a request speaks, its words, and how it writes numbers.

The language and the tankhouse's zone of the request at hand are kept in context variables, so that
filters and plain functions of `web` can ask for them at render time without being handed them.
"""

from collections.abc import Iterator
from contextlib import contextmanager
from contextvars import ContextVar
from dataclasses import dataclass
from functools import lru_cache
from io import BytesIO
from pathlib import Path
from typing import Any, NamedTuple

from babel import Locale, UnknownLocaleError, negotiate_locale
from babel.dates import get_day_names, get_month_names
from babel.messages.mofile import write_mo
from babel.messages.pofile import read_po
from babel.numbers import get_decimal_symbol
from babel.support import NullTranslations, Translations
from starlette.requests import HTTPConnection
from starlette.types import ASGIApp, Receive, Scope, Send

LOCALE_FOLDER = Path(__file__).resolve().parent.parent / "locale"
DOMAIN = "messages"
LANGUAGE_COOKIE = "ampledger_language"
SOURCE_LANGUAGE = "en"


class Manner(NamedTuple):
    """How the request at hand is answered: in which language, and with which zone's clock."""

    language: str = SOURCE_LANGUAGE
    zone: str = "UTC"


_manner: ContextVar[Manner] = ContextVar("manner", default=Manner())  # noqa: B039


def manner() -> Manner:
    """Language and zone of the request at hand."""
    return _manner.get()


@contextmanager
def speaking(language: str | None = None, zone: str | None = None) -> Iterator[None]:
    """Answer in this language, with this zone's clock, until the block ends."""
    now = _manner.get()
    token = _manner.set(Manner(language or now.language, zone or now.zone))
    try:
        yield
    finally:
        _manner.reset(token)


def gettext(message: str) -> str:
    """The message in the language of the request at hand; only at render time."""
    return _translations(manner().language).gettext(message)


def ngettext(one: str, many: str, count: int) -> str:
    """The message for this count in the language of the request at hand."""
    return _translations(manner().language).ngettext(one, many, count)


def pgettext(context: str, message: str) -> str:
    """The message in its context, for words that mean two things."""
    return str(_translations(manner().language).pgettext(context, message))


def npgettext(context: str, one: str, many: str, count: int) -> str:
    """The message in its context for this count."""
    return str(_translations(manner().language).npgettext(context, one, many, count))


@lru_cache
def languages() -> tuple[str, ...]:
    """Every language there is a catalogue for, the language of the source first."""
    found = (path.parent.parent.name for path in LOCALE_FOLDER.glob(f"*/LC_MESSAGES/{DOMAIN}.po"))
    return (SOURCE_LANGUAGE, *sorted(set(found) - {SOURCE_LANGUAGE}))


def chosen_language(cookie: str | None, accepted: str, otherwise: str) -> str:
    """The language that the visitor chose, else the best one the browser asks for.

    Parameters
    ----------
    cookie : str or None
        Language chosen on an earlier page.
    accepted : str
        The request's Accept-Language header, perhaps empty.
    otherwise : str
        Language of the site where the two say nothing that we have.
    """
    if cookie in languages():
        return str(cookie)
    return negotiate_locale(_in_order(accepted), languages(), sep="-") or otherwise


@lru_cache
def locale(language: str) -> Locale:
    """What Babel knows of the language; English for one it does not know."""
    try:
        return Locale.parse(language, sep="-")
    except (UnknownLocaleError, ValueError):
        return Locale.parse(SOURCE_LANGUAGE)


@dataclass(frozen=True)
class Writing:
    """How a language writes numbers and days; weeks start on Monday."""

    decimal_sign: str
    short_days: tuple[str, ...]
    days: tuple[str, ...]
    short_months: tuple[str, ...]
    months: tuple[str, ...]


@lru_cache
def writing(language: str) -> Writing:
    """How the language writes numbers and days."""
    spoken = locale(language)
    short_days = get_day_names("abbreviated", locale=spoken)
    days = get_day_names("wide", locale=spoken)
    short_months = get_month_names("abbreviated", locale=spoken)
    months = get_month_names("wide", locale=spoken)
    return Writing(
        decimal_sign=get_decimal_symbol(spoken),
        short_days=tuple(str(short_days[number]) for number in range(7)),
        days=tuple(str(days[number]) for number in range(7)),
        short_months=tuple(str(short_months[number]) for number in range(1, 13)),
        months=tuple(str(months[number]) for number in range(1, 13)),
    )


@lru_cache
def plotly_locale(language: str) -> dict[str, Any]:
    """Month and day names of the language, as Plotly's configuration wants them."""
    names = writing(language)
    spoken = {
        "months": names.months,
        "shortMonths": names.short_months,
        "days": (names.days[-1], *names.days[:-1]),
        "shortDays": (names.short_days[-1], *names.short_days[:-1]),
    }
    return {
        "locale": language,
        "separators": names.decimal_sign + "\u2009",
        "locales": {language: {"dictionary": {}, "format": spoken}},
    }


class LanguageMiddleware:
    """Finds the language of each request before anything answers it."""

    def __init__(self, app: ASGIApp, otherwise: str = SOURCE_LANGUAGE) -> None:
        self.app = app
        self.otherwise = otherwise

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request in its language."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        request = HTTPConnection(scope)
        language = chosen_language(
            request.cookies.get(LANGUAGE_COOKIE),
            request.headers.get("accept-language", ""),
            self.otherwise,
        )
        with speaking(language):
            await self.app(scope, receive, send)


@lru_cache
def _translations(language: str) -> NullTranslations:
    """The catalogue of a language, compiled as it is read: nothing compiled is kept in the tree."""
    path = LOCALE_FOLDER / language / "LC_MESSAGES" / f"{DOMAIN}.po"
    if not path.is_file():
        return NullTranslations()
    compiled = BytesIO()
    with path.open("rb") as catalogue:
        write_mo(compiled, read_po(catalogue, locale(language)))
    compiled.seek(0)
    return Translations(compiled, DOMAIN)


def _in_order(accepted: str) -> list[str]:
    """Languages of an Accept-Language header in small letters, the most wanted first."""
    wanted: list[tuple[float, str]] = []
    for part in accepted.split(","):
        name, _, rest = part.strip().partition(";")
        quality = rest.strip().removeprefix("q=")
        try:
            weight = float(quality) if quality else 1.0
        except ValueError:
            continue
        if name and name != "*" and weight > 0:
            wanted.append((weight, name.lower()))
    return [name for _, name in sorted(wanted, key=lambda pair: -pair[0])]
