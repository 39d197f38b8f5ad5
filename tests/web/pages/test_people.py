import re

import pytest
from sqlalchemy import select

from server.storage.people import Person, Token, people, token_with_hash, tokens
from server.web.security import Passwords, token_hash
from tests.factories import make_person, make_section, make_token
from tests.fixtures.browser import accessibility_faults

PASSWORDS = Passwords(memory_kib=64, rounds=1)


@pytest.fixture(autouse=True)
def section(session):
    """The tankhouse in which the people work; what is read later is read anew."""
    make_section(session)
    session.commit()


def secret_on(page):
    return re.search(r'<code class="secret">([^<]+)</code>', page.text).group(1)


def test_somebody_new_gets_a_password_that_is_shown_once(client, session):
    shown = client.post("/people", data={"name": " Ana  Rojas ", "role": "operator"})
    later = client.get("/people")

    session.rollback()
    person = next(person for person in people(session) if person.name == "Ana Rojas")
    assert PASSWORDS.holds(secret_on(shown), person.password_hash)
    assert secret_on(shown) not in later.text
    assert shown.headers["cache-control"] == "no-store"


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"name": "", "role": "operator"}, "A name is needed."),
        ({"name": "ANA", "role": "operator"}, "There is somebody of this name already."),
        ({"name": "a" * 61, "role": "operator"}, "at most 60 letters"),
        ({"name": "Ben", "role": "owner"}, "Choose a role."),
    ],
)
def test_a_name_that_cannot_be_is_refused_at_its_field(client, session, given, sentence):
    make_person(session, name="ana")

    page = client.post("/people", data=given)

    assert page.status_code == 422
    assert sentence in page.text
    assert given["name"] in page.text


def test_a_role_is_changed(client, session):
    person = make_person(session, role="operator")

    page = client.post(f"/people/{person.id}", data={"action": "role", "role": "planner"})

    session.rollback()
    assert (page.status_code, person.role) == (303, "planner")


def test_a_new_password_ends_the_sessions(client, session):
    person = make_person(session, role="operator")

    page = client.post(f"/people/{person.id}", data={"action": "password"})

    session.rollback()
    assert PASSWORDS.holds(secret_on(page), person.password_hash)
    assert person.session_epoch == 1


def test_the_last_superintendent_cannot_lock_the_door(client, session):
    own = session.scalars(select(Person)).one()
    session.commit()

    page = client.post(f"/people/{own.id}", data={"action": "disable"})

    session.rollback()
    assert page.status_code == 409
    assert "is the last superintendent who can sign in" in page.text
    assert own.is_active


def test_someone_disabled_is_refused_and_may_come_back(client, session):
    person = make_person(session, role="operator")

    client.post(f"/people/{person.id}", data={"action": "disable"})
    page = client.get("/people")
    client.post(f"/people/{person.id}", data={"action": "enable"})

    session.rollback()
    assert "May not sign in." in page.text
    assert person.is_active


def test_a_form_that_does_not_say_what_to_do_changes_nothing(client, session):
    person = make_person(session, role="operator")

    page = client.post(f"/people/{person.id}", data={"action": "role", "role": "owner"})

    session.rollback()
    assert (page.status_code, person.role) == (409, "operator")


def test_a_token_is_shown_once_and_works(client, session):
    page = client.post("/tokens", data={"token_name": "historian", "token_role": "operator"})

    session.rollback()
    token = token_with_hash(session, token_hash(secret_on(page)))
    assert (token.name, token.role) == ("historian", "operator")
    assert secret_on(page) not in client.get("/people").text


def test_a_token_has_a_name_of_its_own(client, session):
    make_token(session, "hash", name="historian")

    page = client.post("/tokens", data={"token_name": "Historian", "token_role": "operator"})

    assert page.status_code == 422
    assert "There is a token of this name already" in page.text
    session.rollback()
    assert len(tokens(session)) == 1


def test_a_token_is_revoked(client, session):
    token = make_token(session, "hash")

    client.post(f"/tokens/{token.id}/revoke")

    session.rollback()
    assert session.get(Token, token.id).revoked_ms is not None


@pytest.mark.browser
def test_the_page_of_people_is_open_to_all_readers(page, phone, live_server, sign_in, session):
    for browser_page in (page, phone):
        sign_in(browser_page)
        browser_page.goto(f"{live_server}/people")
        browser_page.locator("summary").first.click()

        assert accessibility_faults(browser_page) == []
        assert browser_page.evaluate("document.documentElement.scrollWidth <= innerWidth")


@pytest.mark.browser
def test_a_grave_change_is_asked_about_once_more(page, live_server, sign_in, session):
    person = make_person(session, name="aaron", role="operator")
    sign_in(page)
    page.goto(f"{live_server}/people")

    page.locator("summary").first.click()
    page.locator("button[value=disable]").first.click()
    page.locator("dialog button[value=no]").click()

    session.rollback()
    assert person.is_active
