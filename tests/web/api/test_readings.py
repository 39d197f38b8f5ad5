"""Readings sent by programs, and asked for again."""

from uuid import uuid4

import numpy as np
import pytest

from server.accounts.cell import CellSeries
from server.web.api.readings import kept_of
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_readings,
    make_section,
)

NOW = "2024-03-05T12:00:00Z"
WEEK = {"from": "2024-02-28", "to": "2024-03-06"}


@pytest.fixture
def section(session):
    """Sixty cells, none of which was read yet."""
    return make_section(session, name="A", cells=60)


@pytest.fixture
def ten_days(session, section):
    """Thirty rounds of the cells 1 to 12."""
    at_ms = [NOW_MS - 10 * DAY_MS + n * 8 * HOUR_MS for n in range(30)]
    rng = np.random.default_rng(seed=60)
    make_current(session, section.id, at_ms, [36_000.0] * 30)
    for cell_id in section.cell_ids[:12]:
        make_readings(session, cell_id, at_ms, (2.0 + rng.normal(0, 0.004, 30)).round(3))


def a_round(at: str = NOW, cells: int = 60) -> list[dict]:
    return [
        {
            "id": str(uuid4()),
            "section": "A",
            "cell": cell,
            "at": at,
            "volts": 2.001 + cell % 7 / 1000,
        }
        for cell in range(1, cells + 1)
    ]


def send(client, readings):
    answer = client.post("/api/v1/readings", json={"readings": readings})
    assert answer.status_code == 200, answer.text
    return answer.json()["results"]


def asked(client, **given):
    answer = client.get("/api/v1/readings", params={"section": "A", "cell": 7} | WEEK | given)
    assert answer.status_code == 200, answer.text
    return answer.json()


def test_a_round_of_sixty_is_stored_and_answered_in_order(section, client):
    readings = a_round()

    results = send(client, readings)

    assert results == [{"id": reading["id"], "status": "stored"} for reading in readings]


def test_a_round_is_there_as_soon_as_it_is_answered(section, client):
    send(client, a_round())

    found = asked(client)

    assert found["at"][-1] == NOW
    assert found["volts"][-1] == 2.001
    assert found["suspect"][-1] is False


def test_the_figures_follow_at_once(section, client):
    send(client, a_round())

    cells = client.get("/api/v1/cells", params={"section": "A"}).json()["cells"]

    assert [cell["read_at"] for cell in cells] == [NOW] * 60


def test_the_same_id_twice_is_stored_once(section, client):
    readings = a_round(cells=3)
    send(client, readings)

    again = send(client, readings)

    assert [(result["id"], result["status"]) for result in again] == [
        (reading["id"], "duplicate") for reading in readings
    ]


def test_the_same_reading_without_an_id_is_a_duplicate(section, client):
    reading = {"section": "A", "cell": 1, "at": NOW, "volts": 2.01}
    send(client, [reading])

    assert send(client, [reading])[0]["status"] == "duplicate"


def test_another_value_for_what_is_stored_is_held(section, client):
    send(client, [{"section": "A", "cell": 1, "at": NOW, "volts": 2.01}])

    (result,) = send(client, [{"section": "A", "cell": 1, "at": NOW, "volts": 2.02}])

    assert result["status"] == "held"
    assert result["reason"]


WRONG = [
    {"cell": 99},
    {"cell": "seven"},
    {"section": "Z"},
    {"volts": "2,o31"},
    {"volts": None},
    {"volts": True},
    {"volts": [2.0]},
    {"at": "2024-03-05"},
    {"at": "2034-03-05T12:00Z"},
    {"at": 5},
]


def test_records_that_cannot_be_read_are_held_and_the_others_go_in(section, client):
    good, *bad = a_round(cells=1 + len(WRONG))

    results = send(
        client, [good, *(reading | wrong for reading, wrong in zip(bad, WRONG, strict=True))]
    )

    assert [result["status"] for result in results] == ["stored"] + ["held"] * len(WRONG)
    assert all(len(result["reason"]) > 10 for result in results[1:])


def test_a_record_with_columns_missing_is_held(section, client):
    assert send(client, [{"section": "A"}])[0]["status"] == "held"


def test_not_a_number_is_held_alone(section, client):
    body = b'{"readings": [{"section": "A", "cell": 1, "at": "2024-03-05T12:00Z", "volts": NaN},'
    body += b' {"section": "A", "cell": 2, "at": "2024-03-05T12:00Z", "volts": 2.01}]}'

    answer = client.post(
        "/api/v1/readings", content=body, headers={"content-type": "application/json"}
    )

    assert [result["status"] for result in answer.json()["results"]] == ["held", "stored"]


def test_a_slipped_unit_is_stored_and_suspect(ten_days, client):
    readings = a_round(cells=12)
    readings[6]["volts"] = 2007

    result = send(client, readings)[6]

    assert result["status"] == "suspect"
    assert result["reason"]
    assert asked(client)["suspect"][-1] is True


def test_no_readings_are_no_results(section, client):
    assert send(client, []) == []


def test_what_is_no_list_of_records_is_refused(section, client):
    for body, where in (
        ({}, "readings"),
        ({"readings": {}}, "readings"),
        ([], "readings"),
        ({"readings": [1]}, "readings.0"),
        ({"readings": [{}] * 20_001}, "readings"),
    ):
        answer = client.post("/api/v1/readings", json=body)

        assert answer.status_code == 422
        assert answer.json()["errors"][0]["where"] == where


def test_what_is_not_json_is_refused(section, client):
    answer = client.post(
        "/api/v1/readings", content=b"at,volts", headers={"content-type": "application/json"}
    )

    assert answer.status_code == 400
    assert answer.headers["content-type"] == "application/problem+json"


def test_another_form_than_json_is_refused(section, client):
    answer = client.post("/api/v1/readings", data={"readings": "1"})

    assert answer.status_code == 415


def test_readings_are_asked_for_by_time(ten_days, client):
    found = asked(client, **{"from": "2024-03-01", "to": "2024-03-02"})

    assert found["at"] == [
        "2024-03-01T04:00:00Z",
        "2024-03-01T12:00:00Z",
        "2024-03-01T20:00:00Z",
    ]
    assert len(found["volts"]) == len(found["suspect"]) == 3


def test_a_cell_that_does_not_exist_is_not_found(section, client):
    answer = client.get("/api/v1/readings", params={"section": "A", "cell": 61} | WEEK)

    assert answer.status_code == 404
    assert "1 to 60" in answer.json()["detail"]


def test_what_was_known_then_is_answered(section, client, the_time):
    send(client, [{"section": "A", "cell": 7, "at": NOW, "volts": 2.01}])
    the_time.now_ms += HOUR_MS
    client.post(
        "/api/v1/corrections",
        json={
            "sheet": "readings",
            "reason": "read again",
            "records": [{"section": "A", "cell": 7, "at": NOW, "volts": 2.02}],
        },
    )

    assert asked(client)["volts"][-1] == 2.02
    assert asked(client, known_at=NOW)["volts"][-1] == 2.01
    assert asked(client, known_at="2024-03-04")["volts"] == []


def series(volts, suspect=()) -> CellSeries:
    count = len(volts)
    doubts = np.zeros(count, np.int64)
    doubts[list(suspect)] = 1
    at_ms = np.arange(count, dtype=np.int64) * HOUR_MS
    return CellSeries(at_ms, np.asarray(volts, float), doubts)


@pytest.mark.parametrize("points", [8, 9, 50, 400])
def test_thinning_keeps_the_extremes_and_the_bound(points):
    volts = 2.0 + np.random.default_rng(seed=8).normal(0, 0.01, 5000)
    volts[[777, 4001]] = 1.2, 2.9

    kept = kept_of(series(volts), points)

    assert len(kept) <= points
    assert {777, 4001} <= set(kept.tolist())
    assert kept[0] == 0
    assert kept[-1] == 4999
    assert np.all(np.diff(kept) > 0)


def test_a_slip_of_the_pen_does_not_hide_a_short():
    volts = np.full(1000, 2.0)
    volts[10], volts[500] = 1.1, 0.02

    kept = kept_of(series(volts, suspect=[500]), 8)

    assert {10, 500} <= set(kept.tolist())


def test_many_doubted_readings_keep_within_the_bound():
    volts = 2.0 + np.random.default_rng(seed=9).normal(0, 0.01, 1000)

    assert len(kept_of(series(volts, suspect=range(1000)), 40)) <= 40


def test_a_short_series_is_left_as_it_is():
    assert len(kept_of(series([2.0] * 30), 50)) == 30


def test_thinning_is_asked_for_by_points(ten_days, client):
    assert len(asked(client, points=8)["at"]) <= 8


def test_senseless_points_are_refused(section, client):
    for points in (0, 7, -1, 10**9, "many"):
        answer = client.get(
            "/api/v1/readings", params={"section": "A", "cell": 7, "points": points} | WEEK
        )

        assert answer.status_code == 422
        assert answer.json()["errors"][0]["where"] == "query.points"


def test_what_the_watch_expected_is_answered_when_asked_for(ten_days, session, client):
    keep_books(session)
    asked = {"section": "A", "cell": 3, **WEEK}

    plain = client.get("/api/v1/readings", params=asked).json()
    answer = client.get("/api/v1/readings", params=asked | {"watch": "yes"}).json()

    assert set(plain) == {"at", "volts", "suspect"}
    assert plain["volts"] == answer["volts"]
    assert len(answer["expected"]) == len(answer["probability"]) == len(answer["at"])
    assert answer["expected"] == pytest.approx([2.0] * len(answer["at"]), abs=0.02)
    assert all(0 <= share <= 1 for share in answer["probability"])
