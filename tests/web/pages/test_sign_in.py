import re

import pytest

from server.storage.people import person_with_id
from server.web.security import Passwords
from server.web.sign_in import SESSION_COOKIE
from tests.factories import make_person, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import words_of

PASSWORDS = Passwords(memory_kib=64, rounds=1)
GOOD = "an anode in the morning"


@pytest.fixture
def ana(session):
    """Somebody who may sign in with a password we know."""
    make_section(session, name="EW1")
    person = make_person(session, name="Ana", role="operator", password_hash=PASSWORDS.hashed(GOOD))
    session.commit()
    return person


def form_token(page):
    return re.search(r'name="csrf_token" value="([^"]+)"', page.text).group(1)


def send(client, **fields):
    """Open the form and send it, as a browser does."""
    page = client.get("/sign-in")
    return client.post("/sign-in", data={"csrf_token": form_token(page), **fields})


def test_name_and_password_let_somebody_in_where_they_wanted_to_go(ana, anonymous):
    answer = send(anonymous, name="ana", password=GOOD, next="/setup?x=1")

    assert answer.status_code == 303
    assert answer.headers["location"] == "/setup?x=1"
    assert "Ana" in anonymous.get("/me").text


def test_the_cookie_cannot_be_read_by_scripts_nor_sent_from_elsewhere(ana, anonymous):
    answer = send(anonymous, name="Ana", password=GOOD)

    cookie = next(c for c in answer.headers.get_list("set-cookie") if c.startswith(SESSION_COOKIE))
    assert "HttpOnly" in cookie
    assert "SameSite=lax" in cookie


@pytest.mark.parametrize(
    "fields",
    [
        {"name": "Ana", "password": "another"},
        {"name": "nobody", "password": GOOD},
        {"name": "x" * 5000, "password": GOOD},
        {"name": "Ana", "password": ""},
        {},
    ],
)
def test_what_does_not_belong_together_is_refused_in_the_same_words(ana, anonymous, fields):
    page = send(anonymous, **fields)

    assert page.status_code == 422
    assert "Name and password do not belong together." in page.text
    assert SESSION_COOKIE not in anonymous.cookies


def test_somebody_disabled_is_not_let_in(ana, session, anonymous):
    ana.is_active = 0
    session.commit()

    page = send(anonymous, name="Ana", password=GOOD)

    assert page.status_code == 422


def test_a_form_from_elsewhere_is_not_taken(ana, anonymous):
    anonymous.get("/sign-in")

    page = anonymous.post(
        "/sign-in", data={"csrf_token": "made up", "name": "Ana", "password": GOOD}
    )

    assert page.status_code == 403
    assert "Try once more" in page.text


def test_another_site_is_never_gone_to(ana, anonymous):
    answer = send(anonymous, name="Ana", password=GOOD, next="//evil.example/")

    assert answer.headers["location"] == "/"


def test_many_wrong_passwords_ask_for_a_pause_that_ends(ana, anonymous, the_time):
    for _ in range(5):
        send(anonymous, name="Ana", password="wrong")

    refused = send(anonymous, name="Ana", password=GOOD)
    the_time.now_ms += 3_000
    let_in = send(anonymous, name="Ana", password=GOOD)

    assert refused.status_code == 429
    assert "try again in 2 seconds" in refused.text
    assert let_in.status_code == 303


def test_the_pause_keeps_nobody_from_logging_a_round(ana, anonymous, client_of):
    operator = client_of("operator")
    for _ in range(60):
        send(anonymous, name="Ana", password="wrong")

    answer = operator.post(
        "/log-shift",
        data={"section": "EW1", "at": "2024-03-05T11:00", "volts-1": "2.01"},
    )

    assert answer.status_code == 303


def test_more_than_can_wait_are_sent_away_at_once(ana, app, anonymous):
    send(anonymous, name="Ana", password="wrong")
    app.state.sign_ins = 22

    page = send(anonymous, name="Ana", password=GOOD)

    assert page.status_code == 429
    assert "Many are signing in at this moment" in page.text


def test_a_hash_of_former_settings_is_made_anew(ana, session, anonymous):
    ana.password_hash = Passwords(memory_kib=32, rounds=1).hashed(GOOD)
    session.commit()
    former = ana.password_hash

    send(anonymous, name="Ana", password=GOOD)

    session.rollback()
    kept = person_with_id(session, ana.id).password_hash
    assert kept != former
    assert PASSWORDS.holds(GOOD, kept)


def test_whoever_is_signed_in_needs_no_form(client, session):
    make_section(session)

    answer = client.get("/sign-in", params={"next": "/lots"})

    assert (answer.status_code, answer.headers["location"]) == (303, "/lots")


def test_signing_out_takes_the_cookie_away(client, session):
    make_section(session)

    answer = client.post("/sign-out")

    assert answer.headers["location"] == "/sign-in"
    assert answer.headers["set-cookie"].startswith(f'{SESSION_COOKIE}=""; ')
    assert "Max-Age=0" in answer.headers["set-cookie"]


TYPED = {"section": "EW1", "at": "2024-03-05T11:00", "volts-1": "2.013", "volts-2": "<b>"}


def test_what_was_typed_survives_a_session_that_is_over(ana, anonymous):
    sent = anonymous.post("/log-shift", data=TYPED)
    form = anonymous.post(sent.headers["location"], data=TYPED)
    kept = re.search(r'name="kept" value="([^"]+)"', form.text).group(1).replace("&amp;", "&")

    page = anonymous.post(
        "/sign-in",
        data={
            "csrf_token": form_token(form),
            "name": "Ana",
            "password": GOOD,
            "next": "/log-shift",
            "kept": kept,
        },
    )

    assert sent.status_code == 307
    assert "What you typed is kept" in form.text
    assert "Signed in again" in page.text
    assert 'name="volts-1" value="2.013"' in page.text
    assert 'name="volts-2" value="&lt;b&gt;"' in page.text


def test_a_wrong_password_does_not_lose_what_was_typed(ana, anonymous):
    form = anonymous.post("/sign-in/again", data=TYPED)

    page = anonymous.post(
        "/sign-in",
        data={
            "csrf_token": form_token(form),
            "name": "Ana",
            "password": "wrong",
            "next": "/log-shift",
            "kept": "volts-1=2.013",
        },
    )

    assert page.status_code == 422
    assert 'name="kept" value="volts-1=2.013"' in page.text


def test_whoever_signed_in_meanwhile_goes_on_at_once(client_of, session):
    make_section(session, name="EW1")
    operator = client_of("operator")

    page = operator.post("/sign-in/again", data=TYPED)

    assert "Store it now" in page.text
    assert 'name="volts-1" value="2.013"' in page.text


def test_another_site_cannot_lay_readings_under_a_sign_in(ana, anonymous):
    page = anonymous.post("/sign-in/again", data=TYPED, headers={"sec-fetch-site": "cross-site"})

    assert page.status_code == 403
    assert "2.013" not in page.text


@pytest.mark.browser
def test_signing_in_with_the_keyboard_alone(ana, page, phone, live_server):
    for browser_page in (page, phone):
        browser_page.goto(f"{live_server}/sign-in?next=/me")
        faults = accessibility_faults(browser_page)
        browser_page.keyboard.type("ana")
        browser_page.keyboard.press("Tab")
        browser_page.keyboard.type(GOOD)
        browser_page.keyboard.press("Enter")
        browser_page.wait_for_url("**/me")

        assert faults == []
        assert browser_page.locator("h1").inner_text() == "Ana"


def test_the_form_says_whose_books_these_are(ana, anonymous):
    assert "Sign in North House" in words_of(anonymous.get("/sign-in"))
