import shutil

import pytest

from tests.commands.test_set_up import SHEETS

TABLES = ("reading", "current_sample", "cell", "section_terms", "person", "delivery", "summary")


@pytest.fixture
def filled(terminal):
    """Books with some readings and a person."""
    terminal.init()
    for name, text in SHEETS.items():
        terminal.write(f"sheets/{name}", text)
    assert terminal.run("import", "sheets") == 0
    return terminal


def contents(terminal):
    return {t: sorted(terminal.rows(f"SELECT * FROM {t}"), key=repr) for t in TABLES}


def test_a_backup_holds_everything_in_one_file(filled):
    assert filled.run("backup", "books.backup") == 0

    assert "checked" in filled.said
    beside = sorted(path.name for path in filled.folder.iterdir())
    assert beside == ["books.backup", "plant.toml", "sheets"]


def test_a_backup_takes_the_place_of_an_older_one(filled):
    filled.write("books.backup", "an older one")

    assert filled.run("backup", "books.backup") == 0
    assert (filled.folder / "books.backup").read_bytes().startswith(b"SQLite format 3")


def test_a_backup_is_restored_into_an_empty_database(filled, monkeypatch, tmp_path):
    before = contents(filled)
    filled.run("backup", "books.backup")
    filled.url = f"sqlite:///{tmp_path / 'other.db'}"
    monkeypatch.setenv("AMPLEDGER_DATABASE_URL", filled.url)

    assert filled.run("restore", "books.backup") == 0
    assert contents(filled) == before
    assert filled.run("check") == 0


def test_a_backup_is_restored_into_postgresql(filled, monkeypatch, postgresql_server):
    before = contents(filled)
    filled.run("backup", "books.backup")
    filled.url = postgresql_server.create("restored")
    monkeypatch.setenv("AMPLEDGER_DATABASE_URL", filled.url)

    restored = filled.run("restore", "books.backup")
    again = filled.run("restore", "books.backup")
    after = contents(filled)
    # New rows are numbered on from those that were restored.
    later = filled.run("import", filled.write("x.csv", SHEETS["volts.csv"].replace("04T", "05T")))
    sound = filled.run("check")
    postgresql_server.drop("restored")

    assert (restored, again, later, sound) == (0, 2, 0, 0)
    assert after == before


def test_books_that_are_there_are_not_overwritten_by_mistake(terminal, monkeypatch, tmp_path):
    monkeypatch.setenv("AMPLEDGER_DATABASE_URL", f"sqlite:///{tmp_path / 'books.db'}")
    terminal.url = f"sqlite:///{tmp_path / 'books.db'}"
    terminal.init()
    terminal.run("backup", "books.backup")
    terminal.run("import", terminal.write("volts.csv", SHEETS["volts.csv"]))

    refused = terminal.run("restore", "books.backup")
    still_there = terminal.rows("SELECT COUNT(*) FROM reading")
    replaced = terminal.run("restore", "books.backup", "--yes")

    assert (refused, replaced) == (2, 0)
    assert still_there == [(2,)]
    assert terminal.rows("SELECT COUNT(*) FROM reading") == [(0,)]


@pytest.mark.parametrize("damage", ["missing", "text", "foreign", "torn"])
def test_what_is_no_sound_backup_is_refused(filled, damage):
    import sqlite3

    filled.run("backup", "books.backup")
    path = filled.folder / "books.backup"
    match damage:
        case "missing":
            path.unlink()
        case "text":
            path.write_text("no backup")
        case "foreign":
            path.unlink()
            with sqlite3.connect(path) as connection:
                connection.execute("CREATE TABLE other (x)")
            connection.close()
        case _:
            content = bytearray(path.read_bytes())
            content[4096 * 3 : 4096 * 60] = bytes(4096 * 57)
            path.write_bytes(content)

    assert filled.run("restore", "books.backup", "--yes") == 2
    assert "cannot be restored" in filled.complained


def test_a_backup_is_not_written_over_the_database(terminal, monkeypatch, tmp_path):
    path = tmp_path / "books.db"
    monkeypatch.setenv("AMPLEDGER_DATABASE_URL", f"sqlite:///{path}")
    terminal.init()
    before = shutil.copy(path, tmp_path / "copy.db").read_bytes()

    assert terminal.run("backup", path) == 2
    assert path.read_bytes() == before


def test_a_backup_into_no_folder_is_told(filled):
    assert filled.run("backup", "nowhere/books.backup") == 2
    assert "no folder" in filled.complained
