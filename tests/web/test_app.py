"""What stands around every route: ids, headers, limits, and answers to what nobody foresaw."""

import pytest
from fastapi import FastAPI

from server.web.app import MOST_SENT_MIB
from tests.factories import make_section


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


MIB = 1024 * 1024


@pytest.fixture
def broken(app: FastAPI):
    @app.get("/api/v1/broken")
    def broken() -> None:
        raise LookupError("a thing nobody foresaw")

    return app


def test_an_answer_carries_an_id(anonymous):
    assert len(anonymous.get("/api/v1/health").headers["x-request-id"]) == 16


def test_a_callers_own_id_comes_back(anonymous):
    answer = anonymous.get("/api/v1/health", headers={"x-request-id": "gateway-0042"})

    assert answer.headers["x-request-id"] == "gateway-0042"


def test_an_id_that_could_harm_the_log_is_replaced(anonymous):
    answer = anonymous.get("/api/v1/health", headers={"x-request-id": "a b;c=d" * 3})

    assert " " not in answer.headers["x-request-id"]


def test_what_nobody_foresaw_is_a_problem_with_all_its_headers(broken, anonymous):
    answer = anonymous.get("/api/v1/broken")

    assert answer.status_code == 500
    assert answer.headers["content-type"] == "application/problem+json"
    assert answer.headers["x-content-type-options"] == "nosniff"
    assert answer.headers["x-request-id"]
    assert "LookupError" not in answer.text


def test_a_path_that_does_not_exist_is_a_problem(anonymous):
    answer = anonymous.get("/api/v1/nothing")

    assert answer.status_code == 404
    assert answer.json() == {
        "type": "about:blank",
        "title": "Not Found",
        "status": 404,
        "detail": answer.json()["detail"],
        "instance": "/api/v1/nothing",
    }


def test_too_large_a_body_is_refused_before_it_is_read(session, client):
    make_section(session)

    answer = client.post(
        "/api/v1/readings",
        content=b"{}",
        headers={"content-length": str((MOST_SENT_MIB + 1) * MIB)},
    )

    assert answer.status_code == 413
    assert answer.headers["content-type"] == "application/problem+json"


def test_too_large_a_body_without_a_length_is_refused_as_it_grows(session, client):
    make_section(session)

    answer = client.post("/api/v1/readings", content=(b" " * MIB for _ in range(MOST_SENT_MIB + 2)))

    assert answer.status_code == 413
    assert answer.json()["status"] == 413


def test_a_nul_between_two_parts_of_a_body_is_found(session, client):
    make_section(session)

    answer = client.post(
        "/api/v1/readings",
        content=iter([b'{"readings": [{"section": "\\u00', b'00"}]}']),
        headers={"content-type": "application/json"},
    )

    assert answer.status_code == 400


def test_a_nul_in_a_form_with_files_is_found(session, client_of):
    make_section(session)
    client = client_of("operator")
    del client.headers["x-csrf-token"]

    answer = client.post(
        "/api/v1/imports", files={"file": ("a.csv", b"a")}, data={"csrf_token": "a\0b"}
    )

    assert answer.status_code == 400


def test_long_answers_are_compressed(anonymous):
    answer = anonymous.get("/api/v1/openapi.json", headers={"accept-encoding": "gzip"})

    assert answer.headers["content-encoding"] == "gzip"


def test_a_database_that_was_given_stays_open(app, client_for, database, session):
    client_for(app).close()

    with database.read() as again:
        assert again.connection() is not None
