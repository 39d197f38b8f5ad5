"""Corrections and withdrawals: a reason, a new revision, and the former value kept."""

import pytest

from server.storage.readings import history
from tests.factories import NOW_MS, make_section

AT = "2024-03-05T12:00:00Z"
READING = {"section": "A", "cell": 3, "at": AT, "volts": 2.031}


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def send(client, sheet, record):
    return client.post(f"/api/v1/{sheet}", json={sheet: [record]}).json()["results"][0]["status"]


def correct(client, sheet, record, reason="read again", path="corrections"):
    return client.post(
        f"/api/v1/{path}", json={"sheet": sheet, "reason": reason, "records": [record]}
    )


def volts(client):
    return client.get(
        "/api/v1/readings",
        params={"section": "A", "cell": 3, "from": "2024-03-05", "to": "2024-03-06"},
    ).json()["volts"]


def test_a_correction_puts_the_right_value_beside_the_wrong_one(session, section, client):
    send(client, "readings", READING)

    answer = correct(client, "readings", READING | {"volts": 2.013})

    assert answer.json()["results"] == [{"id": None, "status": "stored"}]
    assert volts(client) == [2.013]
    session.rollback()
    former = history(session, section.cell_ids[2], NOW_MS)
    assert [row[1] for row in former] == [2_031_000, 2_013_000]


def test_a_correction_takes_a_reason(section, client):
    answer = correct(client, "readings", READING, reason="")

    assert answer.status_code == 422
    assert answer.json()["errors"][0]["where"] == "body.reason"


@pytest.mark.parametrize("path", ["corrections", "withdrawals"])
def test_only_a_superintendent_corrects(section, client_of, path):
    assert correct(client_of("planner"), "readings", READING, path=path).status_code == 403


def test_current_is_corrected_and_the_charge_follows(section, client):
    for hour in range(6, 12):
        sample = {"at": f"2024-03-05T{hour:02}:00Z", "section": "A", "current_ka": 36.0}
        send(client, "current", sample)

    correct(client, "current", {"at": "2024-03-05T08:00Z", "section": "A", "current_ka": 18.0})

    period = {"section": "A", "from": "2024-03-05T06:00Z", "to": "2024-03-05T10:00Z"}
    account = client.get("/api/v1/accounts", params=period).json()
    assert account["charge"]["section_kah"] == pytest.approx(36 * 3 + 18)


def test_a_withdrawn_reading_is_gone_and_kept(session, section, client):
    send(client, "readings", READING)

    answer = correct(client, "readings", READING, "another section's", "withdrawals")

    assert answer.status_code == 204
    assert volts(client) == []
    session.rollback()
    assert len(history(session, section.cell_ids[2], NOW_MS)) == 2


def test_a_withdrawal_of_what_is_not_there_is_not_found(section, client):
    answer = correct(client, "readings", READING, "not there", "withdrawals")

    assert answer.status_code == 404


def test_withdrawals_are_all_done_or_none(section, client):
    send(client, "readings", READING)

    answer = client.post(
        "/api/v1/withdrawals",
        json={
            "sheet": "readings",
            "reason": "another section's",
            "records": [READING, READING | {"cell": 4}],
        },
    )

    assert answer.status_code == 404
    assert volts(client) == [2.031]


def test_a_whole_delivery_is_withdrawn(section, client):
    send(client, "readings", READING)
    send(client, "readings", READING | {"at": "2024-03-05T11:00Z"})

    answer = client.post("/api/v1/deliveries/1/withdraw", json={"reason": "another plant's"})

    assert answer.json() == {"delivery": 1, "withdrawn": 1, "status": "withdrawn"}
    assert volts(client) == [2.031]
