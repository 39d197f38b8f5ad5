"""Whatever is sent, the answer is one that the document promises, and never a fault of ours."""

import itertools
import json
import random

import pytest

from tests.factories import NOW_MS, keep_books, make_current, make_readings, make_section
from tests.web.api.against_schema import faults

STRANGE = [
    "", " ", "A", "B", "é\u200b漢", "0", "-1", "1", "3", "7.5", "1e309", "NaN", "true", "null",
    "2024-03-01", "2024-03-05T12:00:00Z", "2024-03-31T02:30", "9999-12-31T23:59:59Z",
    "0001-01-01", "2024-02-30", "'; DROP TABLE reading; --", "../../etc/passwd", "\x00", "%00",
    "x" * 5000, "act", "held", "lots", str(2**63), str(2**53), "[1]", "{}",
]  # fmt: skip
VALUES = [
    None, True, 0, -1, 3, 2.031, 1e308, 2**64, "", "A", "1", "2,03", "2024-03-05T10:00:00Z",
    "\x01", "\u2028", "x" * 5000, [], [1], {}, {"a": 1}, "1-3;5", "off", "feed", "short", "L1",
    "5e0a3b3a-52b7-4f0c-9a52-0c6f3c4f8a11",
]  # fmt: skip
ROUNDS = 12


@pytest.fixture
def section(session):
    section = make_section(session, name="A")
    make_current(session, section.id, [NOW_MS - 3_600_000, NOW_MS], [36_000.0, 35_000.0])
    make_readings(session, section.cell_ids[0], [NOW_MS], [2.0])
    keep_books(session)
    return section


def told(answer, operation, document) -> list[str]:
    """What of an answer the document does not promise."""
    status = str(answer.status_code)
    kind = answer.headers.get("content-type", "").partition(";")[0]
    where = f"{answer.request.method} {answer.request.url} {status}"
    if status >= "500":
        return [f"{where}: {answer.text[:200]}"]
    if status >= "400":
        problem = document["components"]["schemas"]["Problem"]
        wrong = [] if kind == "application/problem+json" else [f"is {kind}"]
        return [f"{where}: {fault}" for fault in wrong + faults(answer.json(), problem, document)]
    promised = operation["responses"].get(status)
    if promised is None:
        return [f"{where}: not promised"]
    schema = promised.get("content", {}).get(kind, {}).get("schema")
    if schema is None or kind != "application/json":
        return []
    return [f"{where}: {fault}" for fault in faults(answer.json(), schema, document)]


def test_strange_questions_get_promised_answers(section, app, client):
    document, chance = app.openapi(), random.Random(1834)

    wrong = []
    for path, methods in document["paths"].items():
        operation = methods.get("get")
        if operation is None:
            continue
        for _ in range(ROUNDS):
            params, target = {}, path
            for parameter in operation.get("parameters", []):
                value = chance.choice(STRANGE)
                if parameter["in"] == "path":
                    target = target.replace(f"{{{parameter['name']}}}", value.strip("/. ") or "1")
                elif chance.random() < 0.8:
                    params[parameter["name"]] = value
            wrong += told(client.get(_address(target), params=params), operation, document)

    assert wrong == []


def _address(path: str) -> str:
    from urllib.parse import quote

    return quote(path)


SENSIBLE = {
    "section": "A",
    "from": "2024-02-01",
    "to": "2024-03-06",
    "cell": "1",
    "at": "2024-03-05T12:00:00Z",
    "points": "8",
    "tier": "act",
    "limit": "5",
}


def test_sensible_questions_get_promised_answers(section, app, client):
    document = app.openapi()

    wrong, answered = [], []
    for path, methods in document["paths"].items():
        if "get" in methods and "{" not in path:
            names = [p["name"] for p in methods["get"].get("parameters", [])]
            params = {name: SENSIBLE[name] for name in names if name in SENSIBLE}
            answer = client.get(path, params=params)
            answered.append(answer.status_code)
            wrong += told(answer, methods["get"], document)

    assert wrong == []
    assert set(answered) <= {200, 204}


@pytest.mark.parametrize("sheet", ["readings", "current", "lots", "outages", "finds"])
def test_strange_records_are_held_and_never_a_fault(section, app, client, sheet):
    document, chance = app.openapi(), random.Random(1908)
    operation = document["paths"][f"/api/v1/{sheet}"]["post"]
    schema = operation["requestBody"]["content"]["application/json"]["schema"]
    example = schema["example"][sheet][0]

    records = []
    for name, value in itertools.product(example, VALUES):
        records.append(example | {name: value})
    records += [
        {chance.choice([*example, "other", ""]): chance.choice(VALUES) for _ in range(4)}
        for _ in range(40)
    ]
    answer = client.post(
        f"/api/v1/{sheet}",
        content=json.dumps({sheet: records}),
        headers={"content-type": "application/json"},
    )

    assert told(answer, operation, document) == []
    assert len(answer.json()["results"]) == len(records)


def test_half_of_a_letter_is_not_json(section, client):
    answer = client.post(
        "/api/v1/readings",
        content=b'{"readings": [{"section": "\\ud800"}]}',
        headers={"content-type": "application/json"},
    )

    assert answer.status_code == 400


@pytest.mark.parametrize(
    ("path", "body"),
    [
        ("readings", {"readings": [{"section": "A\0"}]}),
        ("held/1/drop", {"reason": "\0"}),
        ("corrections", {"sheet": "lots", "reason": "a", "records": [{"lot": "\0"}]}),
    ],
)
def test_a_nul_is_refused(section, client, path, body):
    answer = client.post(f"/api/v1/{path}", json=body)

    assert answer.status_code == 400
    assert "NUL" in answer.json()["detail"]


def test_a_nul_in_an_address_is_refused(section, client):
    assert client.get("/api/v1/cells", params={"section": "\0"}).status_code == 400


def test_json_without_end_is_not_json(section, client):
    answer = client.post(
        "/api/v1/readings",
        content=b'{"readings":' * 100_000,
        headers={"content-type": "application/json"},
    )

    assert answer.status_code == 400
