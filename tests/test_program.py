"""The fixtures that stand for people: each meets the whole program as its role."""

import pytest

from tests.factories import make_section
from tests.fixtures.browser import accessibility_faults


def test_somebody_who_is_not_signed_in_is_sent_to_sign_in(anonymous, session):
    make_section(session)

    answer = anonymous.get("/")

    assert answer.status_code == 303
    assert answer.headers["location"].startswith("/sign-in")


def test_a_superintendent_is_shown_the_sections(client, session):
    make_section(session, name="North")

    page = client.get("/")

    assert page.status_code == 200
    assert "North" in page.text


@pytest.mark.parametrize(
    ("role", "status"), [("reader", 403), ("operator", 403), ("superintendent", 200)]
)
def test_each_role_sees_what_it_may(client_of, session, role, status):
    make_section(session)

    assert client_of(role).get("/people").status_code == status


@pytest.mark.browser
def test_a_browser_is_signed_in(page, live_server, sign_in, session):
    make_section(session, name="North")
    sign_in(page)

    page.goto(live_server)

    assert page.get_by_text("North").first.is_visible()
    assert accessibility_faults(page) == []
