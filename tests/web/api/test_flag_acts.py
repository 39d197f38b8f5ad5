"""What people do about flags, through the API."""

import pytest

from server.storage.flag_acts import acts_on_flags
from tests.factories import NOW_MS, make_flag, make_section

ACTS = "/api/v1/flags/acts"
MEANT = {
    "section": "A",
    "cell": 3,
    "kind": "drift high",
    "raised_at": "2024-03-04T12:00:00Z",
}


@pytest.fixture
def flag(session):
    section = make_section(session, name="A")
    return make_flag(session, section.id, section.cell_ids[2])


def sent(client, **given):
    return client.post(ACTS, json=MEANT | given)


def first_item(client):
    (item,) = client.get("/api/v1/worklist").json()["items"]
    return item


def test_a_flag_begins_as_raised(flag, client):
    item = first_item(client)

    assert item["state"] == "raised"
    assert [item[name] for name in ("shelved_until", "seen_by", "assigned_to")] == [None] * 3


def test_a_flag_is_given_to_somebody(flag, client_of):
    client = client_of("planner")

    answer = sent(client, act="working", assigned_to="mira")

    assert answer.status_code == 200
    assert (answer.json()["state"], answer.json()["assigned_to"]) == ("working", "mira")
    assert first_item(client)["seen_by"].startswith("person")


def test_who_acts_works_on_it_unless_somebody_else_is_named(flag, client, session):
    told = sent(client, act="working").json()

    assert told["assigned_to"] == told["seen_by"]


def test_a_flag_is_shelved_for_a_time_and_comes_back(flag, client):
    answer = sent(client, act="shelved", until="2024-03-07T06:00:00Z", reason="pulled then")
    later = client.get("/api/v1/worklist", params={"at": "2024-03-07T06:00:00Z"}).json()["items"]

    assert answer.json()["shelved_until"] == "2024-03-07T06:00:00Z"
    assert first_item(client)["state"] == "shelved"
    assert [item["state"] for item in later] == ["raised"]


@pytest.mark.parametrize(
    ("given", "where"),
    [
        ({"act": "shelved", "until": "2024-03-06T06:00:00Z"}, "body.reason"),
        ({"act": "shelved", "reason": "x"}, "body.until"),
        ({"act": "shelved", "reason": "x", "until": "2024-03-05T11:59:00Z"}, "body.until"),
        ({"act": "shelved", "reason": "x", "until": "2024-03-12T12:01:00Z"}, "body.until"),
        ({"act": "closed"}, "body.reason"),
        ({"act": "burnt"}, "body.act"),
        ({"act": "seen", "raised_at": "yesterday"}, "body.raised_at"),
    ],
)
def test_an_act_that_is_not_whole_is_refused_with_its_place(flag, client, session, given, where):
    answer = sent(client, **given)

    assert answer.status_code == 422
    assert [fault["where"] for fault in answer.json()["errors"]] == [where]
    assert acts_on_flags(session, 0, NOW_MS) == {}


def test_a_flag_that_there_is_not_is_not_found(flag, client):
    assert sent(client, act="seen", kind="short").status_code == 404
    assert sent(client, act="seen", cell=11).status_code == 404


def test_what_is_not_on_the_shelf_cannot_be_taken_off_it(flag, client):
    assert sent(client, act="unshelved").status_code == 409


def test_a_closed_flag_leaves_the_list_and_takes_no_more_acts(flag, client):
    sent(client, act="closed", reason="the cell is being rebuilt")

    assert client.get("/api/v1/worklist").json()["items"] == []
    assert sent(client, act="seen").status_code == 409
    week = {"from": "2024-03-01", "to": "2024-03-06"}
    (told,) = client.get("/api/v1/flags", params=week).json()["flags"]
    assert (told["state"], told["ended_by"], told["ended_at"]) == ("ended", "person", None)


def test_a_find_that_is_sent_closes_the_flag(flag, client):
    find = {"at": "2024-03-05T11:00:00Z", "section": "A", "cell": 3, "found": "contact"}

    client.post("/api/v1/finds", json={"finds": [find]})

    week = {"from": "2024-03-01", "to": "2024-03-06"}
    (told,) = client.get("/api/v1/flags", params=week).json()["flags"]
    assert (told["state"], told["ended_by"], told["verdict"]) == ("ended", "find", "hit")


@pytest.mark.parametrize("role", ["reader", "operator"])
def test_it_takes_a_planner(flag, client_of, role):
    assert sent(client_of(role), act="seen").status_code == 403
