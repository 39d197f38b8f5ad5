"""The page of the API shows every call there is."""

from html import unescape

import pytest

from server.web.pages.api import topics
from tests.factories import make_section
from tests.fixtures.browser import accessibility_faults


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


def test_every_call_of_the_document_is_on_the_page(app, client, session):
    make_section(session)
    document = app.openapi()

    page = client.get("/api")

    assert page.status_code == 200
    shown = [call for topic in topics(document) for call in topic.calls]
    assert len(shown) == sum(len(methods) for methods in document["paths"].values())
    for call in shown:
        assert call.summary in unescape(page.text)


def test_calls_that_send_or_answer_json_show_an_example(app):
    calls = [call for topic in topics(app.openapi()) for call in topic.calls]

    silent = [call.path for call in calls if call.method == "GET" and not call.answered]
    assert silent == ["/api/v1/health/live"]
    unsent = [call.path for call in calls if call.method == "POST" and not call.sent]
    assert unsent == ["/api/v1/imports"]


def test_the_page_can_be_read_by_everyone(session, live_server, sign_in, page):
    make_section(session)
    sign_in(page, role="reader")
    page.goto(f"{live_server}/api")
    page.locator("summary").first.click()

    assert accessibility_faults(page) == []
