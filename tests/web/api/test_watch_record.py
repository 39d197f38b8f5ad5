"""The watch's own record, as programs read it."""

import pytest

from tests.factories import DAY_MS, NOW_MS, make_find, make_flag, make_section


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def record(client, **given):
    answer = client.get("/api/v1/watch/record", params=given)
    assert answer.status_code == 200, answer.text
    return answer.json()


def test_hits_and_false_calls_are_counted(section, session, client):
    for cell_id, found in zip(section.cell_ids, ("short", "nothing", "contact"), strict=False):
        make_flag(session, section.id, cell_id, kind="short", tier="act")
        make_find(session, section.id, cell_id, found=found)
    make_flag(session, section.id, section.cell_ids[5], kind="short", tier="act")

    told = record(client)

    (line,) = told["lately"]
    assert told["overall"] == told["lately"]
    assert line | {"right": None} == {
        "kind": "short",
        "tier": "act",
        "raised": 4,
        "hits": 1,
        "false_calls": 1,
        "something_else": 1,
        "not_looked_at": 1,
        "right": None,
    }
    assert line["right"]["pct"] == pytest.approx(50.0)
    assert 0 < line["right"]["low_pct"] < 50 < line["right"]["high_pct"] < 100


def test_lately_is_ninety_days(section, session, client):
    long_ago = NOW_MS - 91 * DAY_MS
    make_flag(session, section.id, section.cell_ids[0], raised_ms=long_ago, ended_ms=long_ago + 1)

    told = record(client)

    assert told["lately"] == []
    assert [line["raised"] for line in told["overall"]] == [1]


def test_the_load_is_rated_over_thirty_days(section, session, client):
    make_flag(session, section.id, section.cell_ids[0])

    load = record(client)["load"]

    assert (load["from"], load["to"]) == ("2024-02-04T12:00:00Z", "2024-03-05T12:00:00Z")
    assert load["is_long_enough"]
    figures = {figure["name"]: figure for figure in load["figures"]}
    assert figures["per_day"]["value"] == pytest.approx(1 / 30)
    assert figures["per_day"]["target"] == {
        "acceptable": 150.0,
        "most": 300.0,
        "status": "looked up",
    }


def test_a_load_can_be_asked_for_of_any_period(section, client):
    load = record(client, **{"from": "2024-03-01", "to": "2024-03-04"})["load"]

    assert not load["is_long_enough"]


def test_a_period_that_ends_before_it_begins_is_refused(section, client):
    params = {"from": "2024-03-04", "to": "2024-03-01"}

    assert client.get("/api/v1/watch/record", params=params).status_code == 422
