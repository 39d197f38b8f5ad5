import json
import random

import pytest

from server.calculator.sums import SUMS
from tests.factories import make_section
from tests.web.api.against_schema import faults
from tests.web.pages.running import running_section

# Faraday constant of the SI (exact by its two constants) and IUPAC atomic weights, by hand.
FARADAY_C_MOL = 96485.33212331
K_CU = 63.546 / (2 * FARADAY_C_MOL) * 3600
"""Grams for each ampere-hour, the same number in kg/kAh."""


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def asked(client, name, **params):
    """The results of a sum by their keys, and the whole answer."""
    answer = client.get(f"/api/v1/calculator/{name}", params=params)
    assert answer.status_code == 200, answer.text
    told = answer.json()
    return {result["key"]: result for result in told["results"]}, told


def refused(client, name, **params):
    answer = client.get(f"/api/v1/calculator/{name}", params=params)
    assert answer.status_code == 422, answer.text
    return answer.json()["errors"]


def test_the_list_tells_every_sum_with_its_inputs_and_sources(client, section):
    told = client.get("/api/v1/calculator").json()["sums"]

    assert [found["name"] for found in told] == list(SUMS)
    for found in told:
        assert found["formula"]
        assert found["sources"]
        assert found["results"]
        assert {each["key"] for each in found["inputs"]}


def test_what_is_not_given_is_the_plant_s_own(client, session):
    running_section(session)

    found, told = asked(client, "charge-to-mass", section="EW1")

    origins = {put["key"]: put["origin"] for put in told["inputs"] if put["value"] is not None}
    assert origins == {
        "current_ka": "rated current, set-up",
        "hours": "a day",
        "cells": "cells of the section, set-up",
        "current_efficiency_pct": "lots of the last 30 days",
    }
    assert (told["section"], told["process"]) == ("EW1", "copper electrowinning")
    assert found["made_kg"]["value"] == pytest.approx(36 * 24 * 10 * K_CU * 0.9301, rel=1e-4)


def test_the_working_can_be_followed_by_hand(client, section):
    found, _ = asked(
        client, "charge-to-mass", current_ka=30, hours=24, cells=60, current_efficiency_pct=92
    )

    assert found["made_kg"]["formula"] == "m = K · I · t · N · η"
    assert found["made_kg"]["working"] == (
        "1.18549 kg/kAh × 30 kA × 24 h × 60 × 0.92 = 47\u2009116.3\u202fkg"
    )


def test_a_process_stands_in_for_a_section(client, section):
    _, told = asked(client, "energy-per-tonne", process="zinc electrowinning")

    origins = {put["key"]: put["origin"] for put in told["inputs"]}
    assert told["section"] is None
    assert told["metal"] == "Zn"
    assert origins["volts"] == "typical of the process"


def test_any_metal_goes_with_process_other(client, section):
    found, told = asked(
        client,
        "charge-to-mass",
        process="other",
        metal="Cr",
        electrons=3,
        current_ka=1,
        hours=1,
        cells=1,
        current_efficiency_pct=100,
    )

    by_hand = 51.9961 / (3 * FARADAY_C_MOL) * 3600
    assert found["made_kg"]["value"] == pytest.approx(by_hand, rel=1e-6)
    assert told["link"].endswith(
        "?process=other&metal=Cr&electrons=3&current_ka=1&hours=1&current_efficiency_pct=100"
    )


def test_the_link_carries_what_differs_from_the_plant_s_values(client, section):
    _, told = asked(client, "charge-to-mass", section="A", current_ka="36", hours="48,5")

    assert told["link"] == "/calculator/charge-to-mass?section=A&hours=48.5"


def test_what_is_unusual_is_said(client, section):
    _, told = asked(client, "energy-per-tonne", volts=2.6, current_efficiency_pct=80)

    assert [remark["kind"] for remark in told["remarks"]] == ["range", "range"]
    assert told["remarks"][0]["text"] == (
        "Cell voltage: 2.6 V lies outside what is usual here, 1.85 to 2.15 V."
    )


def test_an_unknown_sum_is_not_found_and_near_ones_are_named(client, section):
    answer = client.get("/api/v1/calculator/charge-to-mas")

    assert answer.status_code == 404
    assert "charge-to-mass" in answer.json()["detail"]


def test_an_unknown_section_is_not_found(client, section):
    assert client.get("/api/v1/calculator/charge-to-mass?section=Z").status_code == 404


def test_an_unknown_parameter_is_refused_by_name(client, section):
    (fault,) = refused(client, "charge-to-mass", currant_ka=30)

    assert fault["where"] == "query.currant_ka"
    assert fault["found"] == "30"
    assert "current_ka" in fault["expected"]


@pytest.mark.parametrize(
    ("key", "text", "expected"),
    [
        ("current_ka", "thirty", "a number above 0, up to 1\u2009000 kA"),
        ("current_ka", "0", "a number above 0, up to 1\u2009000 kA"),
        ("hours", "1e9", "a number above 0, up to 20\u2009000 h"),
        ("cells", "1,234.5", "a number above 0, up to 10\u2009000 "),
        ("u_current_ka", "-1", "a standard uncertainty from 0 to 1\u2009000 kA"),
    ],
)
def test_what_cannot_be_is_refused_with_what_was_expected(client, section, key, text, expected):
    (fault,) = refused(client, "charge-to-mass", **{key: text})

    assert fault["where"] == f"query.{key}"
    assert fault["found"] == text
    assert fault["expected"] == expected


def test_every_fault_is_told_at_once(client, section):
    told = refused(client, "charge-to-mass", current_ka="a", hours="b", wat="c")

    assert {fault["where"] for fault in told} == {"query.current_ka", "query.hours", "query.wat"}


def test_what_is_missing_is_named(client, section):
    told = refused(client, "charge-to-mass", process="zinc electrowinning")

    assert [fault["where"] for fault in told] == ["query.current_ka"]


@pytest.mark.parametrize(
    ("params", "where"),
    [
        ({"process": "copper electrowining"}, "query.process"),
        ({"process": "other"}, "query.metal"),
        ({"process": "other", "metal": "Xx", "electrons": 2}, "query.metal"),
        ({"process": "other", "metal": "Cr", "electrons": 99}, "query.electrons"),
        ({"process": "zinc electrowinning", "electrons": 3}, "query.electrons"),
        ({"process": "zinc electrowinning", "section": "A"}, "query.process"),
    ],
)
def test_a_process_that_cannot_be_is_refused(client, section, params, where):
    (fault,) = refused(client, "charge-to-mass", **params)

    assert fault["where"] == where
    assert fault["what"]


def test_a_parameter_stands_once_in_an_address(client, section):
    answer = client.get("/api/v1/calculator/charge-to-mass?hours=1&hours=2")

    assert answer.status_code == 422
    assert answer.json()["errors"][0]["where"] == "query.hours"


@pytest.mark.parametrize("name", SUMS)
def test_every_sum_answers_as_the_document_promises(client, app, session, name):
    running_section(session)

    _, told = asked(client, name, section="EW1")

    document = app.openapi()
    schema = document["components"]["schemas"]["CalculatorAnswer"]
    assert faults(told, schema, document) == []
    assert set(SUMS[name].results) >= {found["key"] for found in told["results"]}
    assert json.dumps(told).count("%(") == 0


def test_the_document_names_every_parameter(client, app, section):
    operation = app.openapi()["paths"]["/api/v1/calculator/{name}"]["get"]

    named = {parameter["name"] for parameter in operation["parameters"]}
    wanted = {each.key for found in SUMS.values() for each in found.inputs}
    assert wanted | {"name", "section", "process", "metal", "electrons"} <= named


@pytest.mark.parametrize("name", SUMS)
def test_strange_numbers_are_answered_or_refused(client, app, section, name):
    chance, document = random.Random(1834), app.openapi()
    schema = document["components"]["schemas"]["CalculatorAnswer"]

    wrong = []
    for _ in range(25):
        params = {}
        for each in SUMS[name].inputs:
            if chance.random() < 0.3:
                found = (each.low, each.high, 1e-300, 10 ** chance.uniform(-6, 4), -1.0)
                params[each.key] = repr(chance.choice(found))
            if each.u_key and chance.random() < 0.3:
                params[each.u_key] = repr(chance.choice((0, each.high - each.low, 0.1)))
        answer = client.get(f"/api/v1/calculator/{name}", params=params)
        if answer.status_code == 200:
            wrong += faults(answer.json(), schema, document)
        elif answer.status_code != 422:
            wrong.append(f"{answer.status_code}: {params}")

    assert wrong == []


def test_a_reader_may_ask(client_of, section):
    assert client_of("reader").get("/api/v1/calculator").status_code == 200
