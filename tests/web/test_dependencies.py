"""Who is let in, and what is committed when."""

import httpx
import pytest
from fastapi import FastAPI
from sqlalchemy import select
from sqlalchemy.exc import OperationalError

from server.storage.deliveries import Delivery
from server.storage.people import Person, Token
from server.web import csrf, dependencies
from server.web.dependencies import DbSession, Operator, WriteSession
from server.web.security import new_token, token_hash
from server.web.sign_in import SESSION_COOKIE, cookie_text, signed_in
from tests.factories import KEY, NOW_MS, make_person, make_section, make_token

HOUR_MS = 3_600_000


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def bearer(session, **given) -> dict[str, str]:
    token = new_token()
    make_token(session, token_hash(token), **given)
    return {"authorization": f"Bearer {token}"}


def cookie(person: Person, now_ms: int = NOW_MS) -> dict[str, str]:
    signed = signed_in(person.id, person.session_epoch, now_ms)
    return {
        "cookie": f"{SESSION_COOKIE}={cookie_text(signed, KEY)}",
        csrf.HEADER: csrf.form_token(signed.nonce, KEY),
    }


def status(client: httpx.Client, headers: dict[str, str]) -> int:
    return client.get("/api/v1/sections", headers=headers).status_code


def test_a_program_with_a_token_is_let_in(section, session, anonymous):
    assert status(anonymous, bearer(session, role="reader")) == 200


def test_a_token_that_was_revoked_is_good_for_nothing(section, session, anonymous):
    headers = bearer(session)
    session.scalars(select(Token)).one().revoked_ms = NOW_MS
    session.commit()

    assert status(anonymous, headers) == 401


def test_a_wrong_token_is_refused_even_beside_a_good_cookie(section, session, anonymous):
    headers = cookie(make_person(session)) | {"authorization": "Bearer amp_nothing"}

    assert status(anonymous, headers) == 401


def test_a_session_ends_after_its_hours(section, session, anonymous):
    person = make_person(session)

    assert status(anonymous, cookie(person, NOW_MS - 11 * HOUR_MS)) == 200
    assert status(anonymous, cookie(person, NOW_MS - 13 * HOUR_MS)) == 401


def test_a_session_of_an_earlier_epoch_has_ended(section, session, anonymous):
    person = make_person(session)
    headers = cookie(person)
    person.session_epoch += 1
    session.commit()

    assert status(anonymous, headers) == 401


def test_whoever_may_no_longer_sign_in_is_out_at_once(section, session, anonymous):
    person = make_person(session)
    headers = cookie(person)
    person.is_active = 0
    session.commit()

    assert status(anonymous, headers) == 401


def test_a_cookie_signed_with_another_key_is_nobody(section, session, anonymous):
    person = make_person(session)
    signed = signed_in(person.id, person.session_epoch, NOW_MS)

    answer = anonymous.get(
        "/api/v1/sections", headers={"cookie": f"{SESSION_COOKIE}={cookie_text(signed, 'k' * 40)}"}
    )

    assert answer.status_code == 401
    assert answer.headers["www-authenticate"] == "Bearer"


def test_another_site_cannot_make_a_browser_write(section, client):
    answer = client.post(
        "/api/v1/readings", json={"readings": []}, headers={"origin": "http://elsewhere.example"}
    )

    assert answer.status_code == 403


def test_a_program_needs_no_form_token(section, session, anonymous):
    answer = anonymous.post(
        "/api/v1/readings", json={"readings": []}, headers=bearer(session, role="operator")
    )

    assert answer.status_code == 200


@pytest.fixture
def writing(app: FastAPI):
    """Routes that write a delivery and then end well or badly."""

    @app.post("/api/v1/write")
    def write(_who: Operator, db: WriteSession) -> dict[str, str]:
        make_nothing_but(db)
        return {}

    @app.post("/api/v1/write-and-fail")
    def write_and_fail(_who: Operator, db: WriteSession) -> dict[str, str]:
        make_nothing_but(db)
        raise LookupError("after it was written")

    @app.get("/api/v1/read")
    def read(_who: Operator, db: DbSession) -> dict[str, int]:
        return {"deliveries": len(list(db.scalars(select(Delivery))))}

    return app


def make_nothing_but(db) -> None:
    db.add(Delivery(sheet="volts", source="form", sender="test", received_ms=NOW_MS))


def deliveries(client: httpx.Client) -> int:
    return client.get("/api/v1/read").json()["deliveries"]


def test_what_a_route_wrote_is_there_once_it_has_answered(section, writing, client):
    assert client.post("/api/v1/write").status_code == 200
    assert deliveries(client) == 1


def test_a_route_that_fails_leaves_no_trace(section, writing, client):
    answer = client.post("/api/v1/write-and-fail")

    assert answer.status_code == 500
    assert deliveries(client) == 0


def test_nothing_is_confirmed_that_could_not_be_committed(section, writing, client, monkeypatch):
    def cannot(*_):
        raise OperationalError("COMMIT", {}, Exception("the disk is full"))

    monkeypatch.setattr(dependencies, "follow", cannot)

    assert client.post("/api/v1/write").status_code == 500
    assert deliveries(client) == 0


def test_a_fault_in_the_figures_refuses_no_record(section, writing, app, client, monkeypatch):
    def faulty(*_, **__):
        raise ZeroDivisionError("a figure")

    monkeypatch.setattr(dependencies, "catch_up", faulty)

    assert client.post("/api/v1/write").status_code == 200
    assert deliveries(client) == 1
    assert app.state.site.metrics.catch_up_failures._value.get() == 1


@pytest.mark.slow
def test_many_who_write_at_once_all_get_their_turn(section, writing, app, session, serve):
    from concurrent.futures import ThreadPoolExecutor

    headers = bearer(session, role="operator")
    server = serve(app)

    def send(_: int) -> int:
        return httpx.post(f"{server.url}/api/v1/write", headers=headers, timeout=30).status_code

    with ThreadPoolExecutor(45) as pool:
        answers = list(pool.map(send, range(45)))

    assert answers == [200] * 45


def test_there_is_no_answer_without_a_tankhouse(anonymous):
    answer = anonymous.get("/api/v1/sections")

    assert answer.status_code == 503
    assert "ampledger init" in answer.json()["detail"]
