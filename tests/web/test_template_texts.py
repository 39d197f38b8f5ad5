import re
from collections.abc import Iterator
from html.parser import HTMLParser
from pathlib import Path

import pytest
from jinja2 import nodes

from server.web.render import environment
from tests.source import ROOT

SAME_IN_EVERY_LANGUAGE = {
    "Ampledger",
    "Authorization: Bearer amp_…",
    "OpenAPI 3.1",
    "V",
    "kAh",
    "kWh",
    "kWh/t",
}

NAMES_OF_STATES = {"in service"}
"""Compared with, and never shown."""

TOLD_IN_ATTRIBUTES = {"alt", "aria-label", "aria-description", "label", "placeholder", "title"}

WORDS = re.compile(r"[^\W\d_]")

ATTRIBUTES_ALONE = re.compile(r"^( [a-z-]+=\"[^\"<>]*\")+", re.MULTILINE)
"""A line of a macro that gives attributes without their element."""

TEMPLATES = sorted((ROOT / "templates").rglob("*.html"))


class Told(HTMLParser):
    """Gathers what a person is told: text between tags, and attributes that are read out."""

    def __init__(self) -> None:
        super().__init__()
        self.texts: list[str] = []
        self._unread: str | None = None

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        if tag in ("script", "style"):
            self._unread = tag
        self.texts += [value or "" for name, value in attrs if name in TOLD_IN_ATTRIBUTES]

    def handle_endtag(self, tag: str) -> None:
        if tag == self._unread:
            self._unread = None

    def handle_data(self, data: str) -> None:
        if self._unread is None:
            self.texts.append(data)


def bare_texts(source: str) -> list[str]:
    """Words that a template's markup shows as they stand, whatever the language."""
    parts = [
        value if kind == "data" else "\0"
        for _line, kind, value in environment().lex(source)
        if kind in ("data", "variable_end")
    ]
    told = Told()
    told.feed(ATTRIBUTES_ALONE.sub("", "".join(parts)))
    told.close()
    pieces = [piece.strip(" \n·–,;:()/") for text in told.texts for piece in text.split("\0")]
    return [piece for piece in pieces if WORDS.search(piece)]


def untranslated_constants(source: str) -> Iterator[str]:
    """Texts inside a template's expressions that look like words and go through no gettext."""
    tree = environment().parse(source)
    translated = {
        id(argument)
        for call in tree.find_all(nodes.Call)
        if isinstance(call.node, nodes.Name)
        and call.node.name in ("_", "gettext", "ngettext", "pgettext", "npgettext")
        for argument in call.args
    }
    for constant in tree.find_all(nodes.Const):
        value = constant.value
        if (
            isinstance(value, str)
            and id(constant) not in translated
            and re.search(r"^\s*[A-Z]|[^\W\d_] +[^\W\d_]", value)
        ):
            yield value


def name(path: Path) -> str:
    return path.relative_to(ROOT).as_posix()


@pytest.mark.parametrize("path", TEMPLATES, ids=name)
def test_every_text_of_a_template_can_be_translated(path):
    source = path.read_text(encoding="utf-8")

    assert set(bare_texts(source)) - SAME_IN_EVERY_LANGUAGE == set()
    assert set(untranslated_constants(source)) - SAME_IN_EVERY_LANGUAGE - NAMES_OF_STATES == set()


def test_a_bare_text_is_found_wherever_it_stands():
    source = """
    <p{% if here %} class="gone"{% endif %}>Bare, {{ name }}</p>
    <nav aria-label="Pages of it"><p>{{ _("Translated") }}</p></nav>
    {{ fact(1, "One thing", "kg") }} {{ words if words else "None" }}
    <script>const told = "nobody";</script>
    """

    assert bare_texts(source) == ["Bare", "Pages of it"]
    assert list(untranslated_constants(source)) == ["One thing", "None"]


def test_no_number_that_stands_in_a_template_is_written_by_a_filter():
    # Jinja2 works such a one out once, in the language of whoever comes first.
    for path in sorted((ROOT / "templates").rglob("*.html")):
        text = path.read_text(encoding="utf-8")

        assert not re.search(r"\{\{\s*[-\d.]+\s*\|", text), path.name
