import re
import subprocess
import sys

import pytest
from babel.messages.catalog import Catalog, Message
from babel.messages.pofile import read_po

from server.web import i18n
from tests.source import ROOT

LANGUAGES = [language for language in i18n.languages() if language != i18n.SOURCE_LANGUAGE]

PLACEHOLDER = re.compile(r"%\(\w+\)[sd]|%%|\{\w+\}")


@pytest.fixture(scope="module")
def extracted(tmp_path_factory):
    """The texts of the source as they stand now, written as `make locale` writes them."""
    path = tmp_path_factory.mktemp("locale") / "messages.pot"
    subprocess.run(
        [sys.executable, "-m", "babel.messages.frontend", "--quiet", "extract", "-o", path],
        cwd=ROOT,
        check=True,
    )
    return path


def catalogue(language: str) -> Catalog:
    path = i18n.LOCALE_FOLDER / language / "LC_MESSAGES" / "messages.po"
    with path.open("rb") as file:
        return read_po(file, language)


def messages(of: Catalog) -> dict[tuple[str | None, str], Message]:
    """Every message by its context and its text, or the first of its two."""
    return {
        (message.context, message.id if isinstance(message.id, str) else message.id[0]): message
        for message in of
        if message.id
    }


def forms(text: str | tuple[str, ...]) -> tuple[str, ...]:
    return (text,) if isinstance(text, str) else tuple(text)


def placeholders(text: str) -> list[str]:
    return sorted(PLACEHOLDER.findall(text))


def test_spanish_is_there():
    assert "es" in LANGUAGES


def test_the_list_of_texts_is_the_one_of_the_source(extracted):
    kept = i18n.LOCALE_FOLDER / "messages.pot"

    assert kept.read_text(encoding="utf-8") == extracted.read_text(encoding="utf-8"), (
        "run `make locale`"
    )


@pytest.mark.parametrize("language", LANGUAGES)
def test_every_text_of_the_source_is_translated(language, extracted):
    with extracted.open("rb") as file:
        wanted = messages(read_po(file))
    there = messages(catalogue(language))

    assert set(there) - set(wanted) == set(), "run `make locale`"
    assert [
        text
        for (context, text) in wanted
        if (context, text) not in there
        or there[context, text].fuzzy
        or not all(forms(there[context, text].string))
    ] == []


@pytest.mark.parametrize("language", LANGUAGES)
def test_a_text_has_as_many_forms_as_its_language_has_plurals(language):
    told = catalogue(language)

    assert [
        message.id
        for message in messages(told).values()
        if message.pluralizable and len(forms(message.string)) != told.num_plurals
    ] == []


@pytest.mark.parametrize("language", LANGUAGES)
def test_a_text_and_its_translation_have_the_same_placeholders(language):
    different = []
    for message in messages(catalogue(language)).values():
        one, *rest = (placeholders(text) for text in forms(message.string))
        several = placeholders(forms(message.id)[-1])
        if one != placeholders(forms(message.id)[0]) or any(found != several for found in rest):
            different.append(message.id)

    assert different == []


@pytest.mark.parametrize("language", LANGUAGES)
def test_a_translation_ends_as_its_text_does(language):
    """So that what is put after it on a page still fits."""
    ends = re.compile(r"[.,:;?!…]?$")

    assert [
        message.id
        for message in messages(catalogue(language)).values()
        for text, translation in zip(forms(message.id), forms(message.string), strict=False)
        if ends.search(text).group() != ends.search(translation).group()
    ] == []


def test_a_translation_is_spoken_in_its_number(monkeypatch):
    with i18n.speaking("es"):
        spoken = [i18n.ngettext("%(num)s reading", "%(num)s readings", n) for n in (1, 0, 2)]

    assert spoken == ["%(num)s lectura", "%(num)s lecturas", "%(num)s lecturas"]
