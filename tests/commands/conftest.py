"""Commands as somebody types them in a folder of their own, on each kind of database."""

from collections.abc import Iterator
from pathlib import Path

import pytest

from server import settings as site_settings
from server.cli import main
from server.storage.database import Database
from server.storage.direct import fetch_rows
from tests.intake.test_plant_file import PLANT


class Terminal:
    """A folder and a database that commands are run in."""

    def __init__(self, folder: Path, url: str, capsys: pytest.CaptureFixture[str]) -> None:
        self.folder, self.url = folder, url
        self._capsys = capsys
        self.said = self.complained = ""

    def run(self, *arguments: object) -> int:
        """Run a command; answers what it ends with."""
        site_settings.settings.cache_clear()
        self._capsys.readouterr()
        with pytest.raises(SystemExit) as ended:
            main([str(argument) for argument in arguments])
        captured = self._capsys.readouterr()
        self.said, self.complained = captured.out, captured.err
        assert "Traceback" not in captured.err
        return int(ended.value.code or 0)

    def write(self, name: str, text: str) -> Path:
        """Write a file into the folder."""
        path = self.folder / name
        path.parent.mkdir(exist_ok=True)
        path.write_text(text)
        return path

    def init(self) -> None:
        """Make the books of a small plant."""
        assert self.run("init", "--plant", self.write("plant.toml", PLANT)) == 0

    def rows(self, sql: str) -> list[tuple[object, ...]]:
        """Rows of the database."""
        database = Database(self.url)
        try:
            with database.read() as session:
                return fetch_rows(session, sql)
        finally:
            database.close()


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Path]:
    """An empty folder that commands are run in, and settings that cost little."""
    folder = tmp_path / "folder"
    folder.mkdir()
    monkeypatch.chdir(folder)
    monkeypatch.setenv("AMPLEDGER_PASSWORD_MEMORY_KIB", "64")
    monkeypatch.setenv("AMPLEDGER_PASSWORD_ROUNDS", "1")
    yield folder
    site_settings.settings.cache_clear()


@pytest.fixture
def terminal(
    database_url: str,
    folder: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> Terminal:
    """A terminal in an empty folder, with a database that has no rows yet."""
    monkeypatch.setenv("AMPLEDGER_DATABASE_URL", database_url)
    return Terminal(folder, database_url, capsys)


@pytest.fixture
def bare_terminal(
    empty_database_url: str,
    folder: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> Terminal:
    """A terminal in an empty folder, with a database that has no tables yet."""
    monkeypatch.setenv("AMPLEDGER_DATABASE_URL", empty_database_url)
    return Terminal(folder, empty_database_url, capsys)
