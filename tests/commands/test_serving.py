import socket

import pytest

from server.commands import serving


@pytest.fixture
def served(terminal, monkeypatch):
    """What the server was told, instead of serving."""
    terminal.init()
    told = {}

    def run(app, **options):
        told.update(options, app=app)

    monkeypatch.setattr("server.web.serving.run", run)
    monkeypatch.setattr(serving, "is_free", lambda _host, _port: True)
    return told


def test_it_serves_on_this_machine_alone(terminal, served):
    assert terminal.run("serve") == 0
    assert (served["host"], served["port"]) == ("127.0.0.1", 8000)


def test_no_header_of_a_proxy_is_believed_unless_one_is_named(terminal, served):
    terminal.run("serve")
    assert served["proxy_headers"] is False

    terminal.run("serve", "--proxy", "127.0.0.1", "--port", "8080")
    assert served["proxy_headers"] is True
    assert served["forwarded_allow_ips"] == "127.0.0.1"
    assert served["port"] == 8080


def test_older_tables_are_brought_up_to_date_before_it_serves(terminal, served):
    from server.storage.database import Database

    database = Database(terminal.url)
    newest = terminal.rows("SELECT version_num FROM alembic_version")
    database.downgrade("-1")
    database.close()

    assert terminal.run("serve") == 0
    assert terminal.rows("SELECT version_num FROM alembic_version") == newest


def test_a_port_that_is_taken_is_told(terminal):
    terminal.init()
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]

        assert terminal.run("serve", "--port", port) == 2

    assert f"127.0.0.1:{port} is taken" in terminal.complained


def test_a_free_port_is_found_free():
    with socket.socket() as found:
        found.bind(("127.0.0.1", 0))
        port = found.getsockname()[1]

    assert serving.is_free("127.0.0.1", port)
    assert not serving.is_free("no.such.host.invalid", port)
