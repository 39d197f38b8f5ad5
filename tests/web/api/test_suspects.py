"""Doubted readings: listed with the reason, and decided on by whoever may."""

import pytest

from tests.factories import DAY_MS, HOUR_MS, NOW_MS, make_current, make_readings, make_section

AT = "2024-03-05T12:00:00Z"


@pytest.fixture
def section(session):
    section = make_section(session, name="A")
    at_ms = [NOW_MS - 10 * DAY_MS + n * 8 * HOUR_MS for n in range(30)]
    make_current(session, section.id, at_ms, [36_000.0] * 30)
    for cell_id in section.cell_ids:
        make_readings(session, cell_id, at_ms, [2.031, 2.035, 2.029] * 10)
    return section


@pytest.fixture
def suspect(section, client):
    """The number of a doubted reading of cell 3: a slipped unit."""
    readings = [{"section": "A", "cell": n, "at": AT, "volts": 2.03} for n in range(1, 11)]
    readings[2]["volts"] = 2031
    client.post("/api/v1/readings", json={"readings": readings})
    (row,) = client.get("/api/v1/suspects").json()["suspects"]
    return row["id"]


def readings(client):
    found = client.get(
        "/api/v1/readings",
        params={"section": "A", "cell": 3, "from": "2024-03-05T11:00Z", "to": "2024-03-06"},
    ).json()
    return list(zip(found["volts"], found["suspect"], strict=True))


def test_a_doubted_reading_is_listed_with_its_reason(suspect, client):
    (row,) = client.get("/api/v1/suspects").json()["suspects"]

    assert (row["section"], row["cell"], row["at"]) == ("A", 3, AT)
    assert row["volts"] == 2031
    assert row["suggested_volts"] == pytest.approx(2.031)
    assert row["reason"]
    assert row["state"] == "open"
    assert readings(client) == [(2031, True)]


def test_a_confirmed_reading_counts(suspect, client):
    answer = client.post(f"/api/v1/suspects/{suspect}/confirm", json={"reason": "it is so"})

    assert answer.status_code == 204
    assert readings(client) == [(2031, False)]
    assert client.get("/api/v1/suspects").json()["suspects"] == []


def test_a_corrected_reading_has_the_right_value(suspect, client):
    answer = client.post(
        f"/api/v1/suspects/{suspect}/correct", json={"volts": 2.031, "reason": "unit"}
    )

    assert answer.status_code == 204
    assert readings(client) == [(2.031, False)]
    (row,) = client.get("/api/v1/suspects", params={"state": "corrected"}).json()["suspects"]
    assert row["decided_why"] == "unit"


def test_a_withdrawn_reading_is_gone_from_the_series(suspect, client):
    answer = client.post(f"/api/v1/suspects/{suspect}/withdraw", json={"reason": "not read"})

    assert answer.status_code == 204
    assert readings(client) == []


@pytest.mark.parametrize("decision", ["confirm", "correct", "withdraw"])
def test_a_decision_takes_a_reason(suspect, client, decision):
    answer = client.post(
        f"/api/v1/suspects/{suspect}/{decision}", json={"volts": 2.031, "reason": ""}
    )

    assert answer.status_code == 422


def test_nothing_is_decided_twice(suspect, client):
    client.post(f"/api/v1/suspects/{suspect}/confirm", json={"reason": "it is so"})

    answer = client.post(f"/api/v1/suspects/{suspect}/withdraw", json={"reason": "not so"})

    assert answer.status_code == 409


def test_a_doubt_that_does_not_exist_is_not_found(section, client):
    answer = client.post("/api/v1/suspects/77/confirm", json={"reason": "x"})

    assert answer.status_code == 404
