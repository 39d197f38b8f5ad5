import pytest

from server.storage.people import person_with_id
from server.web import csrf
from server.web.security import Passwords
from server.web.sign_in import SESSION_COOKIE, cookie_text, signed_in
from tests.factories import KEY, NOW_MS, make_person, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import words_of

PASSWORDS = Passwords(memory_kib=64, rounds=1)
GOOD, NEW = "an anode in the morning", "a cathode in the evening"


@pytest.fixture
def ana(session):
    """Somebody with a password we know."""
    make_section(session)
    person = make_person(session, name="Ana", role="operator", password_hash=PASSWORDS.hashed(GOOD))
    session.commit()
    return person


@pytest.fixture
def browsers(ana, app, client_for):
    """Two browsers in which she is signed in."""

    def browser():
        own = signed_in(ana.id, 0, NOW_MS)
        return client_for(
            app,
            cookies={SESSION_COOKIE: cookie_text(own, KEY)},
            headers={csrf.HEADER: csrf.form_token(own.nonce, KEY)},
        )

    return browser(), browser()


def test_the_page_says_what_the_role_may(browsers):
    said = words_of(browsers[0].get("/me"))

    assert "Ana Operator · Reads everything, logs rounds and takes readings in." in said


def test_a_new_password_ends_every_other_session(browsers, ana, session):
    here, there = browsers

    answer = here.post("/me/password", data={"present": GOOD, "new": NEW, "again": NEW})

    session.rollback()
    assert answer.status_code == 303
    assert PASSWORDS.holds(NEW, person_with_id(session, ana.id).password_hash)
    assert "Your password is changed" in here.get(answer.headers["location"]).text
    assert there.get("/me").status_code == 303


@pytest.mark.parametrize(
    ("fields", "sentence"),
    [
        ({"present": "wrong", "new": NEW, "again": NEW}, "This is not your present password."),
        ({"present": GOOD, "new": NEW, "again": "x"}, "The two new passwords are not the same."),
        ({"present": GOOD, "new": "short", "again": "short"}, "Use at least 10 characters"),
        ({"present": GOOD, "new": GOOD, "again": GOOD}, "This is the password you have."),
        ({"present": GOOD, "new": "ana likes copper", "again": ""}, "Leave your name out"),
        ({}, "Use at least 10 characters"),
    ],
)
def test_what_is_wrong_stands_at_its_field(browsers, ana, session, fields, sentence):
    page = browsers[0].post("/me/password", data=fields)

    session.rollback()
    assert page.status_code == 422
    assert sentence in page.text
    assert person_with_id(session, ana.id).session_epoch == 0


def test_guessing_the_present_password_is_slow(browsers):
    here, _ = browsers
    for _ in range(5):
        here.post("/me/password", data={"present": "wrong", "new": NEW, "again": NEW})

    page = here.post("/me/password", data={"present": GOOD, "new": NEW, "again": NEW})

    assert page.status_code == 422
    assert "Too many wrong passwords" in page.text


def test_a_language_we_do_not_have_is_not_kept(browsers):
    answer = browsers[0].post("/me/language", data={"language": "xx"})

    assert answer.status_code == 303
    assert "set-cookie" not in answer.headers


@pytest.mark.browser
def test_the_own_page_is_open_to_all_readers(page, phone, live_server, sign_in, session):
    make_section(session)
    for browser_page in (page, phone):
        sign_in(browser_page)
        browser_page.goto(f"{live_server}/me")

        assert accessibility_faults(browser_page) == []
        assert browser_page.evaluate("document.documentElement.scrollWidth <= innerWidth")
