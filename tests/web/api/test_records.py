"""The other sheets, sent record by record with the sheets' own columns."""

import pytest

from tests.factories import make_section

AT = "2024-03-05T10:00:00Z"

RECORDS = {
    "current": {"at": AT, "section": "A", "current_ka": 35.2},
    "counter": {"at": AT, "section": "A", "counter_kah": 418_022.5},
    "lots": {
        "weighed_at": "2024-03-05T11:00Z",
        "lot": "L1",
        "section": "A",
        "cells": "1-3;5",
        "pulled_at": AT,
        "started_at": "2024-02-27T10:00Z",
        "cathodes_per_cell": 20,
        "net_kg": 4_210.5,
        "starter_kg": 0,
    },
    "outages": {
        "section": "A",
        "cells": "",
        "from": "2024-03-05T06:00Z",
        "to": "2024-03-05T07:00Z",
        "state": "off",
    },
    "electrolyte": {"at": AT, "section": "A", "stream": "feed", "metal_g_l": 42.1},
    "finds": {"at": AT, "section": "A", "cell": 7, "cathode": 31, "found": "short", "action": ""},
}
ANOTHER = {
    "current": {"current_ka": 35.9},
    "counter": {"counter_kah": 418_023.5},
    "lots": {"net_kg": 4_211.5},
    "outages": {"to": "2024-03-05T07:30Z"},
    "electrolyte": {"metal_g_l": 43.1},
    "finds": {"found": "contact"},
}


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def send(client, sheet, *records):
    answer = client.post(f"/api/v1/{sheet}", json={sheet: list(records)})
    assert answer.status_code == 200, answer.text
    return [result["status"] for result in answer.json()["results"]]


@pytest.mark.parametrize("sheet", RECORDS)
def test_a_record_is_stored_and_its_repetition_changes_nothing(section, client_of, sheet):
    client = client_of("operator")

    assert send(client, sheet, RECORDS[sheet]) == ["stored"]
    assert send(client, sheet, RECORDS[sheet]) == ["duplicate"]


@pytest.mark.parametrize("sheet", RECORDS)
def test_a_record_that_contradicts_a_stored_one_is_held(section, client, sheet):
    send(client, sheet, RECORDS[sheet])

    assert send(client, sheet, RECORDS[sheet] | ANOTHER[sheet]) == ["held"]


@pytest.mark.parametrize("sheet", RECORDS)
def test_a_record_of_an_unknown_section_is_held_and_the_next_goes_in(section, client, sheet):
    wrong = RECORDS[sheet] | {"section": "Z"}

    assert send(client, sheet, wrong, RECORDS[sheet]) == ["held", "stored"]


@pytest.mark.parametrize("sheet", RECORDS)
def test_an_empty_record_is_held(section, client, sheet):
    assert send(client, sheet, {}) == ["held"]


@pytest.mark.parametrize("sheet", RECORDS)
def test_an_id_twice_is_stored_once(section, client, sheet):
    record = RECORDS[sheet] | {"id": "5e0a3b3a-52b7-4f0c-9a52-0c6f3c4f8a11"}
    send(client, sheet, record)

    answer = client.post(f"/api/v1/{sheet}", json={sheet: [record]})

    (result,) = answer.json()["results"]
    assert (result["id"], result["status"]) == (record["id"], "duplicate")


def test_counts_of_what_was_taken_in_are_told(section, client):
    send(client, "current", RECORDS["current"], {})

    metrics = client.get("/api/v1/metrics").text

    assert 'ampledger_rows_taken_in_total{sheet="current",status="stored"} 1.0' in metrics
    assert 'ampledger_rows_taken_in_total{sheet="current",status="held"} 1.0' in metrics
    assert "ampledger_held_rows 1.0" in metrics
