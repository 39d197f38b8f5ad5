import re

import pytest

from server import clock
from server.commands import demo
from server.demo.house import truth_house
from server.storage.database import Database
from server.web.security import Passwords
from tests.commands.conftest import Terminal
from tests.factories import DAY_MS


@pytest.fixture
def made(folder, monkeypatch, capsys):
    """How often a tankhouse was made up: a small one, for what is tried here is the command."""
    times = []

    def small(now_ms, progress=None):
        times.append(now_ms)
        return truth_house(days=3, start_ms=now_ms - 3 * DAY_MS, slips=True)

    monkeypatch.setattr(demo, "demo_house", small)
    monkeypatch.setattr(demo, "serve_books", lambda *_given: None)
    return times


@pytest.fixture
def terminal(folder, made, capsys):
    """A terminal in an empty folder."""
    return Terminal(folder, f"sqlite:///{folder / demo.FILE}", capsys)


def sign_ins(terminal):
    return dict(re.findall(r"(mira|tomas|ines)\s+(\S+)", terminal.said))


def test_a_tankhouse_is_made_up_taken_in_and_worked_out(terminal):
    assert terminal.run("demo") == 0

    assert "http://127.0.0.1:" in terminal.said
    assert terminal.rows("SELECT COUNT(*) FROM reading")[0][0] > 500
    assert terminal.rows("SELECT COUNT(*) FROM stale") == [(0,)]
    assert terminal.rows("SELECT COUNT(*) FROM held_row") == [(0,)]
    assert [path.name for path in terminal.folder.iterdir()] == [demo.FILE]


def test_three_people_can_sign_in_with_the_passwords_that_are_printed(terminal):
    terminal.run("demo")

    hashes = dict(terminal.rows("SELECT name, password_hash FROM person"))
    passwords = sign_ins(terminal)
    assert set(passwords) == {"mira", "tomas", "ines"}
    assert all(Passwords(64, 1).holds(passwords[name], hashes[name]) for name in passwords)


def test_a_fresh_tankhouse_is_used_again_with_new_passwords(terminal, made):
    terminal.run("demo")
    first = sign_ins(terminal)

    terminal.run("demo")

    assert len(made) == 1
    assert set(sign_ins(terminal).values()).isdisjoint(first.values())


def test_an_old_tankhouse_is_made_up_anew(terminal, made, monkeypatch):
    terminal.run("demo")
    later = clock.now_ms() + demo.FRESH_MS + 1
    monkeypatch.setattr(clock, "now_ms", lambda: later)

    terminal.run("demo")

    assert made == [made[0], later]
    assert terminal.rows("SELECT COUNT(*) FROM person") == [(3,)]


def test_it_is_made_up_anew_when_asked(terminal, made):
    terminal.run("demo", "--no-serve")
    terminal.run("demo", "--no-serve", "--again")

    assert len(made) == 2


def test_a_half_made_tankhouse_is_not_left_behind(terminal, monkeypatch):
    def stop(*_given):
        raise KeyboardInterrupt

    monkeypatch.setattr(demo, "bring_up_to_date", stop)

    assert terminal.run("demo") != 0
    assert list(terminal.folder.iterdir()) == []


def test_the_database_of_the_settings_is_left_alone(terminal, monkeypatch, sqlite_url):
    monkeypatch.setenv("AMPLEDGER_DATABASE_URL", sqlite_url)

    terminal.run("demo", "--no-serve")

    database = Database(sqlite_url)
    with database.read() as session:
        from server.storage.plant import has_plant

        assert not has_plant(session)
    database.close()
