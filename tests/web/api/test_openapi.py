"""The OpenAPI document keeps its word: every call in it, with its role, errors and examples."""

import json
import re

import pytest

from server.intake.columns import SHEETS
from server.web.api.sent import KIND_OF
from server.web.api.sheet_schemas import EXAMPLES, component
from tests.web.api.against_schema import faults


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


CONTRACT = {
    "get": "readings flags worklist accounts sections cells held health metrics",
    "post": "readings current lots outages electrolyte finds",
}
OPEN = {"/api/v1/health", "/api/v1/health/live"}


@pytest.fixture
def found(app):
    return app.openapi()


def operations(found):
    for path, methods in found["paths"].items():
        for method, operation in methods.items():
            yield path, method, operation


def test_it_is_served_to_whoever_asks(anonymous):
    answer = anonymous.get("/api/v1/openapi.json")

    assert answer.status_code == 200
    assert answer.json()["openapi"] == "3.1.0"


def test_every_call_of_the_contract_is_in_it(found):
    for method, names in CONTRACT.items():
        for name in names.split():
            assert method in found["paths"][f"/api/v1/{name}"]


def test_it_holds_the_api_alone(found):
    assert all(path.startswith("/api/v1/") for path in found["paths"])


def test_every_call_says_what_it_does_and_which_role_it_takes(found):
    for path, method, operation in operations(found):
        assert operation["summary"], (path, method)
        assert operation["description"], (path, method)
        assert ("x-role" in operation) == (path not in OPEN), (path, method)
        assert bool(operation.get("security")) == (path not in OPEN), (path, method)


def test_every_refusal_is_a_problem(found):
    for path, method, operation in operations(found):
        for status, answer in operation["responses"].items():
            if status >= "400" and path not in OPEN:
                assert list(answer["content"]) == ["application/problem+json"], (path, method)


def test_every_component_has_a_name_that_may_be_one(found):
    names = [name for kind in found["components"].values() for name in kind]

    assert [name for name in names if not re.fullmatch(r"[A-Za-z0-9._-]+", name)] == []


def test_every_reference_leads_somewhere(found):
    names = set(re.findall(r'"#/components/schemas/([^"]+)"', json.dumps(found)))

    assert names - set(found["components"]["schemas"]) == set()


def test_every_operation_has_a_name_of_its_own(found):
    names = [operation["operationId"] for _, _, operation in operations(found)]

    assert len(names) == len(set(names))


def test_every_schema_has_words(found):
    silent = [
        name
        for name, schema in found["components"]["schemas"].items()
        if not schema.get("description") and not name.startswith("Body_")
    ]

    assert silent == []


def test_every_example_fits_its_schema(found):
    schemas = found["components"]["schemas"]

    wrong = {
        name: told
        for name, schema in schemas.items()
        if "example" in schema and (told := faults(schema["example"], schema, found))
    }

    assert wrong == {}


def test_every_call_that_takes_a_body_shows_one(found):
    text = json.dumps
    for path, _, operation in operations(found):
        for kind, body in operation.get("requestBody", {}).get("content", {}).items():
            schema = body["schema"]
            name = schema.get("$ref", "").rpartition("/")[2]
            shown = found["components"]["schemas"].get(name, schema)
            assert kind == "multipart/form-data" or "example" in shown, (path, text(shown))


@pytest.mark.parametrize("name", EXAMPLES)
def test_records_have_the_columns_of_their_sheet(found, name):
    kind = SHEETS[KIND_OF.get(name, name)]

    schema = found["components"]["schemas"][component(name)]

    assert set(schema["properties"]) == {"id", *kind.names}
    assert schema["required"] == list(kind.required)
