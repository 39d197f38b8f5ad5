"""Health and metrics, for those who watch the server."""

import pytest
from sqlalchemy.exc import OperationalError

from server import __version__
from server.storage.database import Database
from server.storage.stale import mark
from tests.factories import (
    make_delivery,
    make_flag,
    make_held_row,
    make_section,
    make_suspicion,
)


def test_health_needs_no_token_and_no_tankhouse(anonymous):
    answer = anonymous.get("/api/v1/health")

    assert answer.status_code == 200
    found = answer.json()
    assert found["status"] == "ready"
    assert found["database"] == "reachable"
    assert found["tables"] == found["expected_tables"]
    assert found["version"] == __version__


def test_health_can_be_asked_for_without_a_body(anonymous):
    answer = anonymous.head("/api/v1/health")

    assert (answer.status_code, answer.content) == (200, b"")


def test_the_backlog_is_told(session, anonymous):
    section = make_section(session)
    mark(session, section.id, "charge", 0, 1000)
    session.commit()

    assert anonymous.get("/api/v1/health").json()["stale_stretches"] == 1


def test_tables_that_are_behind_are_not_ready(app, anonymous):
    app.state.site.newest_revision = "9999"

    answer = anonymous.get("/api/v1/health")

    assert answer.status_code == 503
    assert answer.json()["status"] == "not ready"


def test_a_database_that_does_not_answer_is_not_ready(anonymous, monkeypatch):
    def unreachable(_self):
        raise OperationalError("SELECT 1", {}, Exception("no answer"))

    monkeypatch.setattr(Database, "read", unreachable)

    answer = anonymous.get("/api/v1/health")

    assert answer.status_code == 503
    assert answer.json()["database"] == "unreachable"
    assert anonymous.get("/api/v1/health/live").status_code == 204


def test_metrics_tell_the_condition_of_the_books(session, client):
    section = make_section(session)
    make_delivery(session, stored=40)
    make_delivery(session, sheet="lots", stored=2)
    make_held_row(session)
    make_held_row(session, state="dropped")
    make_suspicion(session, section.id, section.cell_ids[0])
    make_flag(session, section.id, section.cell_ids[0])
    make_flag(session, section.id, section.cell_ids[1], ended_ms=1)

    answer = client.get("/api/v1/metrics")

    assert answer.headers["content-type"].startswith("text/plain")
    lines = answer.text.splitlines()
    for line in (
        'ampledger_rows_stored{sheet="volts"} 40.0',
        'ampledger_rows_stored{sheet="lots"} 2.0',
        "ampledger_held_rows 1.0",
        "ampledger_suspect_readings 1.0",
        "ampledger_open_flags 1.0",
        "ampledger_stale_stretches 0.0",
    ):
        assert line in lines
    (size,) = [line for line in lines if line.startswith("ampledger_database_bytes ")]
    assert float(size.split()[1]) > 10_000


def test_metrics_count_requests_by_route(session, client):
    make_section(session)
    client.get("/api/v1/sections")
    client.get("/api/v1/cells", params={"section": "Z"})

    text = client.get("/api/v1/metrics").text

    counted = 'ampledger_requests_total{method="GET",route="%s",status="%s"} 1.0'
    assert counted % ("/api/v1/sections", 200) in text
    assert counted % ("/api/v1/cells", 404) in text
    assert 'ampledger_request_seconds_count{route="/api/v1/sections"} 1.0' in text


@pytest.mark.parametrize("path", ["/api/v1/no/such/thing", "/api/v1/another"])
def test_paths_that_do_not_exist_are_counted_together(session, client, path):
    make_section(session)
    client.get(path)

    assert 'route="(none)",status="404"' in client.get("/api/v1/metrics").text
