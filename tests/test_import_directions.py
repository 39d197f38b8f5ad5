"""Imports point one way: intake, storage, watch and accounts, pages; the science knows none of it.

Every import of `server` is read from its source. What a folder may import of ours, and of others,
is the table below; whatever is not in the table is refused, so that a new folder has to be put
into it.
"""

import sys

import pytest

from tests.source import ROOT, Import, circles, imports, modules

ALL = {
    "accounts",
    "calculator",
    "cli",
    "clock",
    "demo",
    "figures",
    "intake",
    "jobs",
    "science",
    "settings",
    "storage",
    "watch",
    "web",
}

OURS = {
    "science": set(),
    "settings": set(),
    "clock": set(),
    "storage": {"settings"},
    "intake": {"storage", "science"},
    "watch": {"storage", "science"},
    "accounts": {"storage", "science", "watch"},
    "calculator": {"accounts", "science", "storage", "watch"},
    "figures": {"accounts", "watch", "science"},
    "demo": {"storage", "science", "intake", "watch", "accounts"},
    "web": ALL - {"cli"},
    "jobs": ALL - {"cli", "web"},
    "commands": ALL - {"cli"},
    "cli": ALL | {"commands"},
    "__main__": {"cli"},
}
"""What each folder or module may import of ours, besides itself."""

WEB_ONLY = {"fastapi", "itsdangerous", "jinja2", "pwdlib", "starlette", "uvicorn"}
CLOCKS = {"time", "datetime", "zoneinfo"}

NOT_THEIRS = {
    "science": WEB_ONLY | CLOCKS | {"sqlalchemy", "alembic", "pydantic", "plotly"},
    "storage": WEB_ONLY | {"plotly"},
    "intake": WEB_ONLY | {"plotly"},
    "watch": WEB_ONLY | {"plotly"},
    "accounts": WEB_ONLY | {"plotly"},
    "calculator": WEB_ONLY | {"plotly"},
    "figures": WEB_ONLY | {"sqlalchemy"},
    "demo": WEB_ONLY | {"plotly"},
}
"""What each folder must not import of others."""

FILES = {"csv", "io", "os", "pathlib", "shutil", "sqlite3", "tempfile"}
QUERIES = {"delete", "func", "insert", "select", "text", "update"}

FOUND = imports(ROOT / "server")


def folder(module: str) -> str:
    """The part of the house that a module lies in: `server.web.app` lies in `web`."""
    parts = module.split(".")
    return parts[1] if len(parts) > 1 else ""


def wrong_directions(found: list[Import]) -> list[str]:
    """Imports of ours that the table does not allow, one line each."""
    return [
        f"{i.place}: {folder(i.importer)} may not import {i.imported}"
        for i in found
        if i.imported.split(".")[0] == "server"
        and folder(i.importer)
        and folder(i.imported) not in {folder(i.importer), ""} | OURS.get(folder(i.importer), set())
    ]


def wrong_libraries(found: list[Import]) -> list[str]:
    """Imports of others that the table forbids, one line each."""
    return [
        f"{i.place}: {folder(i.importer)} may not import {i.imported}"
        for i in found
        if i.imported.split(".")[0] in NOT_THEIRS.get(folder(i.importer), set())
    ]


def test_every_folder_stands_in_the_table():
    unknown = {folder(name) for name in modules(ROOT / "server")} - set(OURS) - {""}

    assert not unknown


def test_imports_point_one_way():
    assert wrong_directions(FOUND) == []


def test_each_folder_keeps_to_its_libraries():
    assert wrong_libraries(FOUND) == []


def test_the_science_takes_numbers_not_files():
    strangers = {
        f"{i.place}: {i.imported}"
        for i in FOUND
        if folder(i.importer) == "science"
        and i.imported.split(".")[0] not in {"server", "numpy", "scipy"}
        and (i.imported.split(".")[0] not in sys.stdlib_module_names or i.imported in FILES)
    }

    assert not strangers


def test_routes_make_no_queries():
    queries = [
        i.place
        for i in FOUND
        if folder(i.importer) in {"web", "cli", "commands", "jobs"}
        and i.imported.split(".")[0] == "sqlalchemy"
        and i.name in QUERIES
    ]

    assert queries == []


def test_imports_are_absolute():
    assert [i.place for i in FOUND if i.is_relative] == []


def test_no_module_leads_back_to_itself():
    edges: dict[str, set[str]] = {}
    for i in FOUND:
        if i.imported.split(".")[0] == "server":
            edges.setdefault(i.importer, set()).add(i.imported)

    assert circles(edges) == []


@pytest.mark.parametrize(
    ("path", "line"),
    [
        ("science/a.py", "from server.storage import readings"),
        ("science/a.py", "import server.settings"),
        ("storage/a.py", "from server.science.units import amps_from_ka"),
        ("accounts/a.py", "from server.web.app import create_app"),
        ("figures/a.py", "def f():\n    from server.storage import readings"),
        ("watch/a.py", "from server import clock"),
        ("nowhere/a.py", "from server import clock"),
    ],
)
def test_a_wrong_direction_is_found(tmp_path, path, line):
    for name in (
        "storage/readings.py",
        "science/units.py",
        "web/app.py",
        "settings.py",
        "clock.py",
    ):
        (tmp_path / "server" / name).parent.mkdir(parents=True, exist_ok=True)
        (tmp_path / "server" / name).touch()
    (tmp_path / "server" / path).parent.mkdir(exist_ok=True)
    (tmp_path / "server" / path).write_text(line)

    assert len(wrong_directions(imports(tmp_path / "server"))) == 1


def test_a_wrong_library_is_found(tmp_path):
    (tmp_path / "server" / "accounts").mkdir(parents=True)
    (tmp_path / "server" / "accounts" / "a.py").write_text("from fastapi.responses import Response")

    assert len(wrong_libraries(imports(tmp_path / "server"))) == 1


def test_a_circle_is_found():
    edges = {"a": {"b"}, "b": {"c"}, "c": {"b"}, "d": {"a"}, "e": {"e"}}

    assert circles(edges) == [["b", "c"], ["e"]]
