import io

import pytest

from server.storage.people import ROLES
from server.web.security import Passwords, token_hash

PASSWORD = "a few words long"


@pytest.fixture
def books(terminal):
    """A terminal with the books of a small plant."""
    terminal.init()
    return terminal


@pytest.fixture
def piped(monkeypatch):
    """Pipes a text into the next command."""

    def pipe(text):
        monkeypatch.setattr("sys.stdin", io.StringIO(text))

    return pipe


def kept(books, name="ana"):
    ((found,),) = books.rows(f"SELECT password_hash FROM person WHERE name = '{name}'")
    return found


@pytest.mark.parametrize("role", ROLES)
def test_a_person_of_each_role_is_added(books, piped, role):
    piped(PASSWORD + "\n")

    assert books.run("user", "add", "ana", "--role", role, "--password-stdin") == 0
    assert books.rows("SELECT name, role, is_active FROM person") == [("ana", role, 1)]
    assert Passwords(64, 1).holds(PASSWORD, kept(books))
    assert PASSWORD not in books.said + books.complained


def test_the_password_is_asked_for_twice_at_a_terminal(books, monkeypatch):
    answers = iter([PASSWORD, PASSWORD])
    monkeypatch.setattr("sys.stdin.isatty", lambda: True, raising=False)
    monkeypatch.setattr("getpass.getpass", lambda _prompt: next(answers))

    assert books.run("user", "add", "ana", "--role", "reader") == 0
    assert next(answers, None) is None


def test_two_passwords_that_differ_add_nobody(books, monkeypatch):
    answers = iter([PASSWORD, PASSWORD + "x"])
    monkeypatch.setattr("sys.stdin.isatty", lambda: True, raising=False)
    monkeypatch.setattr("getpass.getpass", lambda _prompt: next(answers))

    assert books.run("user", "add", "ana", "--role", "reader") == 2
    assert books.rows("SELECT COUNT(*) FROM person") == [(0,)]


@pytest.mark.parametrize("password", ["", "short", "aaaaaaaaaaaa", "ana is my name"])
def test_a_weak_password_is_refused(books, piped, password):
    piped(password + "\n")

    assert books.run("user", "add", "ana", "--role", "reader", "--password-stdin") == 2
    assert books.rows("SELECT COUNT(*) FROM person") == [(0,)]


def test_without_a_terminal_the_password_must_be_piped(books, piped):
    piped(PASSWORD)

    assert books.run("user", "add", "ana", "--role", "reader") == 2
    assert "--password-stdin" in books.complained


def test_an_unknown_role_is_refused(books):
    assert books.run("user", "add", "ana", "--role", "king") == 2


def test_a_name_is_given_once(books, piped):
    piped(PASSWORD)
    books.run("user", "add", "ana", "--role", "reader", "--password-stdin")

    assert books.run("user", "add", "Ana", "--role", "reader", "--password-stdin") == 2
    assert "already" in books.complained


def test_a_person_gets_a_new_password_and_role_and_is_disabled(books, piped):
    for name in ("ana", "ines"):
        piped(PASSWORD)
        books.run("user", "add", name, "--role", "superintendent", "--password-stdin")
    piped("other words here")

    assert books.run("user", "password", "ANA", "--password-stdin") == 0
    assert books.run("user", "role", "ana", "--role", "planner") == 0
    assert books.run("user", "disable", "ana") == 0

    assert Passwords(64, 1).holds("other words here", kept(books))
    assert books.rows("SELECT role, is_active, session_epoch FROM person WHERE name = 'ana'") == [
        ("planner", 0, 2)
    ]
    assert books.run("user", "enable", "ana") == 0
    assert books.run("user", "list") == 0
    assert "planner" in books.said


def test_the_last_superintendent_stays(books, piped):
    piped(PASSWORD)
    books.run("user", "add", "ana", "--role", "superintendent", "--password-stdin")

    assert books.run("user", "disable", "ana") == 2
    assert "last superintendent" in books.complained


@pytest.mark.parametrize(
    "command",
    [("user", "disable", "zoe"), ("user", "role", "zoe", "--role", "reader"),
     ("user", "password", "zoe", "--password-stdin"), ("token", "revoke", "zoe")],
)  # fmt: skip
def test_whoever_is_not_there_is_told(books, command):
    assert books.run(*command) == 2
    assert "zoe" in books.complained


def test_a_token_is_printed_once_and_its_hash_kept(books):
    assert books.run("token", "new", "logger", "--role", "operator") == 0
    token = books.said.strip()

    assert books.rows("SELECT name, role, token_hash FROM token") == [
        ("logger", "operator", token_hash(token))
    ]
    assert books.run("token", "list") == 0
    assert token not in books.said


def test_a_revoked_token_is_good_for_nothing(books):
    books.run("token", "new", "logger", "--role", "operator")

    assert books.run("token", "revoke", "Logger") == 0
    ((revoked,),) = books.rows("SELECT revoked_ms FROM token")
    assert revoked is not None
