"""What holds for every file of the house: size, docstrings, names, words, plain templates."""

import ast
import re
import subprocess
from collections.abc import Iterator
from pathlib import Path

import pytest

from tests.source import ROOT, imports, modules

LONGEST = 400
READ_AS_TEXT = {
    "", ".cfg", ".css", ".csv", ".html", ".ini", ".js", ".json", ".lock", ".mako", ".md", ".po",
    ".pot", ".py", ".service", ".sh", ".svg", ".toml", ".txt", ".xml", ".yaml", ".yml",
}  # fmt: skip

# In pieces, so that this file does not hold what it looks for.
FORBIDDEN = re.compile(
    "|".join(
        (
            "/wo" + r"rk/(main|shared|steering|\.library)",
            "/home/" + r"(?!ampledger\b)\w+/",
            "/tmp/" + "(amp|fresh|claude)",
            "pypi" + r"\.org",
            "pythonhosted" + r"\.org",
            "registry" + r"\.npmjs",
            "deb" + r"\.debian",
            "sub" + "agent",
            "tran" + "script",
            "seed " + "document",
            "/fa" + "rm/",
            r"(?-i:\bTO" + "DO\\b)",  # In capitals: todo is a word of other languages.
            r"(?-i:\bFIX" + "ME\\b)",
            r"(?-i:\bX" + "XX\\b)",
            "raise Not" + "ImplementedError",
            r"pytest\.sk" + "ip",
            r"mark\.sk" + "ip",
            r"mark\.xf" + "ail",
        )
    ),
    re.IGNORECASE,
)

CLOCK_CALLS = {
    "datetime.now",
    "datetime.today",
    "datetime.utcnow",
    "date.today",
    "time.time",
    "time.time_ns",
    "time.localtime",
    "time.gmtime",
}


def our_files() -> Iterator[Path]:
    """Every file that belongs to the project and is ours: no vendored file, nothing ignored."""
    listed = subprocess.run(
        ["git", "ls-files", "--cached", "--others", "--exclude-standard", "-z"],
        cwd=ROOT,
        check=True,
        capture_output=True,
        text=True,
    ).stdout
    for name in filter(None, listed.split("\0")):
        path = ROOT / name
        if "vendor" not in path.parts and path.is_file():
            yield path


def our_texts(*suffixes: str) -> list[Path]:
    """Those of our files that a person reads."""
    wanted = suffixes or READ_AS_TEXT
    return [path for path in our_files() if path.suffix in wanted]


def below(*folders: str) -> list[Path]:
    """Our files below these folders of the checkout."""
    return [
        path
        for path in our_files()
        if any(path.is_relative_to(ROOT / folder) for folder in folders)
    ]


def forbidden_in(text: str) -> list[str]:
    """The words in a text that must not be in the project."""
    return [found.group() for found in FORBIDDEN.finditer(text)]


def clock_calls(tree: ast.AST) -> list[int]:
    """Lines that ask the time."""
    return [
        node.lineno
        for node in ast.walk(tree)
        if isinstance(node, ast.Call)
        and ".".join(ast.unparse(node.func).split(".")[-2:]) in CLOCK_CALLS
    ]


def test_no_file_has_grown_past_its_subject():
    sized = below("server", "static/js", "templates")

    too_long = [
        f"{path.relative_to(ROOT)}: {lines}"
        for path in sized
        if path.suffix in {".py", ".js", ".html"}
        and (lines := len(path.read_text(encoding="utf-8").splitlines())) > LONGEST
    ]

    assert too_long == []


def test_every_module_says_what_it_holds():
    silent = [
        name
        for name, path in modules(ROOT / "server").items()
        if not ast.get_docstring(ast.parse(path.read_text(encoding="utf-8")))
    ]

    assert silent == []


def test_every_published_check_names_its_source():
    silent = [
        path.name
        for path in (ROOT / "tests" / "published").glob("test_*.py")
        if not ast.get_docstring(ast.parse(path.read_text(encoding="utf-8")))
    ]

    assert silent == []


def test_no_file_is_named_for_nothing():
    vague = {"common", "helper", "helpers", "misc", "util", "utils"}

    assert [p.name for p in below("server", "static/js", "tests") if p.stem in vague] == []


def test_no_text_holds_a_word_that_belongs_elsewhere():
    found = {
        str(path.relative_to(ROOT)): words
        for path in our_texts()
        if (words := forbidden_in(path.read_text(encoding="utf-8")))
    }

    assert found == {}


def test_the_forbidden_words_are_found():
    text = "# TO" + "DO: see /wo" + "rk/main and pyp" + "i.org"

    assert len(forbidden_in(text)) == 3


def test_only_the_clock_asks_the_time():
    asked = {
        name: lines
        for name, path in modules(ROOT / "server").items()
        if name != "server.clock"
        and (lines := clock_calls(ast.parse(path.read_text(encoding="utf-8"))))
    }

    assert asked == {}


def test_the_clock_is_asked_where_a_test_can_set_it():
    taken = [
        found.place
        for found in imports(ROOT / "server")
        if found.imported == "server.clock" and found.name == "now_ms"
    ]

    assert taken == [], "write clock.now_ms(), so that a test can set the clock"


@pytest.mark.parametrize("call", ["datetime.now(UTC)", "datetime.datetime.now()", "time.time()"])
def test_a_question_for_the_time_is_found(call):
    assert clock_calls(ast.parse(f"x = {call}")) == [1]


def test_templates_hold_no_script_and_no_style():
    inline = re.compile(
        r"""<script(?![^>]*(\bsrc=|application/json))|<style\b|\sstyle=["']|\son[a-z]+=["']"""
    )

    jinja = re.compile(r"\{[{%#].*?[}%#]\}", re.DOTALL)

    found = {
        path.name: match.group()
        for path in our_texts(".html")
        if (match := inline.search(jinja.sub("", path.read_text(encoding="utf-8"))))
    }

    assert found == {}


def test_every_table_says_what_its_columns_are():
    faults = []
    for path in below("templates"):
        text = path.read_text(encoding="utf-8") if path.suffix == ".html" else ""
        if text.count("<table") > text.count("<caption"):
            faults.append(f"{path.name}: a table without a caption")
        if re.search(r"<th(?![^>]*\bscope=)[\s>]", text):
            faults.append(f"{path.name}: a heading without a scope")

    assert faults == []


def test_what_is_third_party_says_version_and_licence():
    for folder in (ROOT / "static" / "vendor", ROOT / "tests" / "vendor"):
        if not folder.is_dir():
            continue
        about = (folder / "README.md").read_text(encoding="utf-8")
        unnamed = [
            path.name
            for path in folder.rglob("*")
            if path.is_file()
            and path.name != "README.md"
            and path.name.removesuffix(".gz") not in about
            and path.parent.name not in about
        ]

        assert unnamed == []


def test_texts_end_their_lines_the_same_way():
    faults = [
        str(path.relative_to(ROOT))
        for path in our_texts()
        if (content := path.read_bytes()) and (b"\r" in content or not content.endswith(b"\n"))
    ]

    assert faults == []
