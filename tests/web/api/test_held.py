"""Held rows: listed word for word, mended or dropped by whoever may."""

import pytest

from tests.factories import make_held_row, make_section

ROW = {"section": "A", "cell": 3, "at": "2024-03-05T10:00Z", "volts": "2,o31"}


@pytest.fixture
def section(session):
    return make_section(session, name="A")


@pytest.fixture
def held(section, client):
    """The number of a row that was sent and is held."""
    client.post("/api/v1/readings", json={"readings": [ROW]})
    return client.get("/api/v1/held").json()["held"][0]["id"]


def test_a_held_row_is_kept_word_for_word_with_its_reason(held, client):
    (row,) = client.get("/api/v1/held").json()["held"]

    assert row["sheet"] == "volts"
    assert row["source"] == "API"
    assert row["line"] == 1
    assert row["column"] == "volts"
    assert row["found"] == "2,o31"
    assert "2,o31" in row["raw"]
    assert row["fields"]["section"] == "A"
    assert row["state"] == "held"
    assert row["received_at"] == "2024-03-05T12:00:00Z"
    assert client.get(f"/api/v1/held/{held}").json() == row


def test_a_mended_row_goes_in(held, client):
    answer = client.post(f"/api/v1/held/{held}/mend", json={"fields": {"volts": 2.031}})

    assert answer.status_code == 200
    assert answer.json()["status"] == "stored"
    assert client.get("/api/v1/held").json()["held"] == []
    readings = client.get(
        "/api/v1/readings",
        params={"section": "A", "cell": 3, "from": "2024-03-05", "to": "2024-03-06"},
    ).json()
    assert readings["volts"] == [2.031]


def test_a_row_that_is_still_wrong_stays_held(held, client):
    answer = client.post(f"/api/v1/held/{held}/mend", json={"fields": {"volts": "two"}})

    assert answer.json()["status"] == "held"
    assert answer.json()["reason"]
    assert len(client.get("/api/v1/held").json()["held"]) == 1


def test_a_dropped_row_is_decided_on_and_kept(held, client):
    answer = client.post(f"/api/v1/held/{held}/drop", json={"reason": "written twice"})

    assert answer.status_code == 204
    assert client.get("/api/v1/held").json()["held"] == []
    row = client.get(f"/api/v1/held/{held}").json()
    assert row["state"] == "dropped"
    assert row["decided_why"] == "written twice"
    assert row["decided_at"] == "2024-03-05T12:00:00Z"


def test_a_row_is_not_dropped_without_a_reason(held, client):
    answer = client.post(f"/api/v1/held/{held}/drop", json={"reason": ""})

    assert answer.status_code == 422
    assert answer.json()["errors"][0]["where"] == "body.reason"


def test_a_row_is_not_decided_on_twice(held, client):
    client.post(f"/api/v1/held/{held}/drop", json={"reason": "written twice"})

    answer = client.post(f"/api/v1/held/{held}/mend", json={"fields": {"volts": 2.031}})

    assert answer.status_code == 409


def test_a_row_that_does_not_exist_is_not_found(section, client):
    assert client.get("/api/v1/held/77").status_code == 404
    assert client.post("/api/v1/held/77/drop", json={"reason": "x"}).status_code == 404


def test_a_planner_sees_held_rows_and_may_not_decide(session, section, client_of):
    held = make_held_row(session).id
    planner = client_of("planner")

    assert len(planner.get("/api/v1/held").json()["held"]) == 1
    assert planner.post(f"/api/v1/held/{held}/drop", json={"reason": "x"}).status_code == 403


def test_rows_come_in_pages_the_newest_first(session, section, client):
    ids = [make_held_row(session).id for _ in range(5)]

    first = client.get("/api/v1/held", params={"limit": 3}).json()
    second = client.get("/api/v1/held", params={"limit": 3, "before": first["next"]}).json()

    assert [row["id"] for row in first["held"]] == ids[:1:-1]
    assert [row["id"] for row in second["held"]] == ids[1::-1]
    assert second["next"] is None


def test_rows_of_one_sheet_can_be_asked_for(session, section, client):
    make_held_row(session)
    lot = make_held_row(session, sheet="lots").id

    found = client.get("/api/v1/held", params={"sheet": "lots"}).json()["held"]

    assert [row["id"] for row in found] == [lot]
