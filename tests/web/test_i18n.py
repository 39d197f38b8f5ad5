import pytest
from starlette.applications import Starlette
from starlette.requests import Request
from starlette.responses import PlainTextResponse
from starlette.routing import Route

from server.web import i18n


@pytest.fixture
def two_languages(monkeypatch):
    """English and Spanish, whatever catalogues lie in the folder."""
    monkeypatch.setattr(i18n, "languages", lambda: ("en", "es"))


@pytest.mark.usefixtures("two_languages")
@pytest.mark.parametrize(
    ("cookie", "accepted", "expected"),
    [
        (None, "", "en"),
        (None, "es-CL,es;q=0.9,en;q=0.8", "es"),
        (None, "en;q=0.5, es;q=0.9", "es"),
        (None, "fr, pl", "en"),
        (None, "es;q=0, en", "en"),
        (None, "*;q=0.1, es;q=nonsense", "en"),
        ("es", "en", "es"),
        ("xx", "es", "es"),
    ],
)
def test_the_language_is_the_chosen_one_else_the_best_of_those_asked_for(
    cookie, accepted, expected
):
    assert i18n.chosen_language(cookie, accepted, "en") == expected


def test_the_language_of_the_source_is_always_there():
    assert i18n.languages()[0] == "en"


def test_speaking_ends_with_its_block():
    with i18n.speaking("es", "America/Santiago"):
        with i18n.speaking(zone="UTC"):
            assert i18n.manner() == ("es", "UTC")
        assert i18n.manner() == ("es", "America/Santiago")

    assert i18n.manner() == ("en", "UTC")


def test_a_language_nobody_knows_counts_as_english():
    assert i18n.writing("not a language").decimal_sign == "."


def test_plotly_learns_its_months_and_days():
    spoken = i18n.plotly_locale("es")["locales"]["es"]["format"]

    assert spoken["months"][0] == "enero"
    assert spoken["shortDays"][:2] == ("dom", "lun")
    assert i18n.plotly_locale("es")["separators"] == ",\u2009"


def test_a_message_without_translation_stays_as_it_is():
    with i18n.speaking("es"):
        assert i18n.gettext("a sentence that no catalogue holds") == (
            "a sentence that no catalogue holds"
        )
        assert i18n.ngettext("no such cell", "no such cells", 2) == "no such cells"
        assert i18n.pgettext("nowhere", "no such word") == "no such word"
        assert i18n.npgettext("nowhere", "no such word", "no such words", 1) == "no such word"


@pytest.mark.usefixtures("two_languages")
def test_each_request_is_answered_in_its_language(client_for):
    def say(_request: Request) -> PlainTextResponse:
        return PlainTextResponse(i18n.manner().language)

    client = client_for(i18n.LanguageMiddleware(Starlette(routes=[Route("/", say)])))

    plain = client.get("/").text
    spanish = client.get("/", headers={"accept-language": "es"}).text
    chosen = client.get("/", headers={"cookie": f"{i18n.LANGUAGE_COOKIE}=es"}).text

    assert [plain, spanish, chosen] == ["en", "es", "es"]
