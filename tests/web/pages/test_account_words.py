import ast
import re

from server.web import i18n
from server.web.pages.account_words import account_words
from tests.source import ROOT

WORDLESS = re.compile(r"[A-Za-z]|K = M / \(z F\)|CODATA 2022")


def told_texts() -> set[str]:
    """What the accounts say of a figure in words of theirs: formulas, inputs, sources, bases."""
    places = {"Working": (1,), "Input": (0, 3), "LedgerItem": (4,)}
    found = set()
    for name in ("working", "ledger"):
        tree = ast.parse((ROOT / f"server/accounts/{name}.py").read_text(encoding="utf-8"))
        for call in ast.walk(tree):
            if isinstance(call, ast.Call) and isinstance(call.func, ast.Name):
                for place in places.get(call.func.id, ()):
                    argument = call.args[place]
                    if isinstance(argument, ast.Constant):
                        found.add(str(argument.value))
    return {text for text in found if not WORDLESS.fullmatch(text)}


def test_every_text_of_an_account_has_its_spanish():
    assert "Faraday's law" in told_texts()

    with i18n.speaking("es"):
        untranslated = [text for text in told_texts() if account_words(text) == text]

    assert untranslated == []


def test_the_lots_of_an_account_are_counted():
    with i18n.speaking("es"):
        assert account_words("1 lots, net less starters").startswith("1 lote, neto")
        assert account_words("14 lots, net less starters").startswith("14 lotes, neto")


def test_english_stays_as_the_accounts_say_it():
    for text in (*told_texts(), "14 lots, net less starters", "M(Cu) / (2 F)"):
        assert account_words(text) == text
