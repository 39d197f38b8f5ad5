"""Lines of the log: one a request, in the form the site has chosen, without secrets."""

import json
import logging

import pytest
import structlog

from server.settings import Settings
from server.web.logs import set_up_logs
from tests.factories import make_section


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


@pytest.fixture(autouse=True)
def _former_logs():
    root = logging.getLogger()
    handlers, level = list(root.handlers), root.level
    yield
    root.handlers, root.level = handlers, level
    structlog.reset_defaults()


def lines(capsys) -> list[dict]:
    return [json.loads(line) for line in capsys.readouterr().err.splitlines() if line]


def test_a_line_is_json_where_that_is_wanted(capsys):
    set_up_logs(Settings(log_format="json"))

    structlog.get_logger().info("a thing", cells=3)

    (line,) = lines(capsys)
    assert line["event"] == "a thing"
    assert line["cells"] == 3
    assert line["level"] == "info"
    assert line["timestamp"].endswith("Z")


def test_a_line_is_text_where_that_is_wanted(capsys):
    set_up_logs(Settings(log_format="text"))

    structlog.get_logger().info("a thing", cells=3)

    assert "a thing" in capsys.readouterr().err


def test_lines_of_libraries_have_the_same_form(capsys):
    set_up_logs(Settings(log_format="json"))

    logging.getLogger("uvicorn.error").info("started")

    assert [line["event"] for line in lines(capsys)] == ["started"]


def test_a_lower_level_than_the_chosen_one_is_silent(capsys):
    set_up_logs(Settings(log_format="json", log_level="error"))

    structlog.get_logger().warning("a thing")

    assert lines(capsys) == []


def test_a_token_in_a_line_is_blacked_out(capsys):
    set_up_logs(Settings(log_format="json"))

    structlog.get_logger().info("sent amp_0123456789abcdef by mistake")

    assert "0123456789" not in capsys.readouterr().err


def test_setting_up_twice_writes_each_line_once(capsys):
    set_up_logs(Settings(log_format="json"))
    set_up_logs(Settings(log_format="json"))

    logging.getLogger("uvicorn.error").info("started")

    assert len(lines(capsys)) == 1


def test_a_request_is_one_line_without_names_or_queries(session, client, capsys):
    make_section(session)
    set_up_logs(Settings(log_format="json"))

    client.get("/api/v1/cells", params={"section": "Maria"})

    (line,) = [line for line in lines(capsys) if line["event"] == "request"]
    assert line["route"] == "/api/v1/cells"
    assert line["status"] == 404
    assert len(line["request_id"]) == 16
    assert "Maria" not in json.dumps(line)
    assert "person" not in json.dumps(line)


def test_an_unforeseen_error_is_written_with_its_request(app, session, client, capsys):
    @app.get("/api/v1/broken")
    def broken() -> None:
        raise LookupError("a thing nobody foresaw")

    set_up_logs(Settings(log_format="json"))

    client.get("/api/v1/broken")

    written = lines(capsys)
    (error,) = [line for line in written if line["level"] == "error"]
    assert "LookupError" in error["exception"]
    assert {line["request_id"] for line in written} == {error["request_id"]}
