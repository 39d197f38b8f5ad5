"""The stream behind open pages, as a browser meets it, and what the pages make of it."""

import time

import httpx
import pytest
from playwright.sync_api import expect

from server.web import live as live_module
from server.web.security import new_token, token_hash
from tests.factories import NOW_MS, keep_books, make_current, make_section, make_token
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import running_section

STREAM = {"accept": "text/event-stream"}
LATE_MS = 2000
"""Within this an open page has to show what is new."""


@pytest.fixture
def token(session):
    """A header by which a program that logs is let in."""
    secret = new_token()
    make_token(session, token_hash(secret), role="operator")
    return {"authorization": f"Bearer {secret}"}


def post(address, token, readings):
    answer = httpx.post(
        address + "/api/v1/readings",
        json={"readings": [{"section": "EW1", **reading} for reading in readings]},
        headers=token,
    )
    assert {told["status"] for told in answer.json()["results"]} == {"stored"}, answer.text


def post_reading(address, token):
    post(address, token, [{"cell": 4, "at": "2024-03-05T11:58:00Z", "volts": 1.987}])


def post_rounds(address, token, shorted=(4,)):
    """Two rounds of the section, with shorts in these cells."""
    for hour, low in ((9, 1.80), (11, 1.79)):
        at = f"2024-03-05T{hour:02}:40:00Z"
        volts = [low if cell in shorted else 2.03 + 0.004 * (cell % 5 - 2) for cell in range(1, 11)]
        post(
            address,
            token,
            [{"cell": cell, "at": at, "volts": read} for cell, read in enumerate(volts, start=1)],
        )


def lines_until(lines, start):
    until_s = time.monotonic() + 10
    for line in lines:
        if line.startswith(start):
            return line.removeprefix(start).strip()
        assert time.monotonic() < until_s
    raise AssertionError("the stream ended")


def test_a_change_is_told_after_a_reading_is_posted(live_server, session, token):
    running_section(session)

    with httpx.stream("GET", live_server + "/events", headers=STREAM | token) as stream:
        lines = stream.iter_lines()
        first = lines_until(lines, "data:")
        post_reading(live_server, token)
        second = lines_until(lines, "data:")

    assert stream.headers["content-type"].startswith("text/event-stream")
    assert stream.headers["cache-control"] == "no-store"
    assert "content-encoding" not in stream.headers
    assert first != second
    assert len(first) == len(second) == 16


def test_a_stranger_hears_nothing(anonymous, session):
    make_section(session)

    assert anonymous.get("/events", headers=STREAM).headers["location"].startswith("/sign-in")


def test_whoever_does_not_ask_for_a_stream_gets_none(client, session):
    make_section(session)

    answer = client.get("/events")

    assert answer.status_code == 406
    assert "open pages listen" in answer.text


def test_no_more_are_let_in_than_the_server_can_serve(client, session, monkeypatch):
    make_section(session)
    monkeypatch.setattr(live_module, "MOST_LISTENERS", 0)

    answer = client.get("/events", headers=STREAM)

    assert (answer.status_code, answer.headers["retry-after"]) == (503, "60")


def test_a_page_that_tells_of_a_fault_stays_as_it_is(client, session):
    running_section(session, low=(4,))

    answer = client.post("/worklist/acts", data={"section": "EW1", "cell": 4, "act": "nothing"})

    assert "data-live-events" not in answer.text


@pytest.mark.browser
def test_an_open_section_shows_a_new_reading_within_two_seconds(
    page, live_server, sign_in, session, token
):
    running_section(session)
    sign_in(page)
    page.goto(live_server + "/sections/EW1")
    page.evaluate("window.isTheSamePage = true")
    needle = page.locator(".wide-floor a:nth-of-type(7)")
    needle.focus()
    details = page.locator("details.sheet").first
    details.evaluate("(details) => (details.open = true)")
    row = page.get_by_role("row").filter(has=page.get_by_role("rowheader", name="4", exact=True))
    page.wait_for_timeout(300)

    post_reading(live_server, token)

    expect(row).to_contain_text("1.987", timeout=LATE_MS)
    assert page.evaluate("window.isTheSamePage")
    expect(needle).to_be_focused()
    assert details.evaluate("(details) => details.open")
    assert accessibility_faults(page) == []


@pytest.mark.browser
@pytest.mark.parametrize("path", ["/", "/worklist", "/sections/EW1/cells/4"])
def test_every_page_of_the_watch_shows_a_new_flag(page, live_server, sign_in, session, token, path):
    running_section(session)
    sign_in(page)
    page.goto(live_server + path)
    page.wait_for_timeout(300)
    expect(page.locator(".page")).not_to_contain_text("▼ short")

    post_rounds(live_server, token)

    expect(page.locator(".page")).to_contain_text("▼ short", timeout=2 * LATE_MS)


@pytest.mark.browser
def test_nothing_moves_while_a_form_holds_what_is_not_sent(
    page, live_server, sign_in, session, token
):
    running_section(session, low=(5,))
    sign_in(page)
    page.goto(live_server + "/worklist")
    page.locator("summary", has_text="What was found").click()
    field = page.get_by_label("What was done, if anything")
    field.fill("lifted")
    page.wait_for_timeout(300)

    post_rounds(live_server, token, shorted=(4, 5))

    page.wait_for_timeout(LATE_MS)
    expect(page.locator("ol.work > li")).to_have_count(1)
    field.fill("")
    expect(page.locator("ol.work > li")).to_have_count(2, timeout=3 * LATE_MS)
    expect(page.locator("details.panel[open]")).to_have_count(1)


@pytest.mark.browser
def test_a_figure_is_drawn_anew_with_what_is_new(page, live_server, sign_in, session, token):
    running_section(session)
    sign_in(page)
    page.goto(live_server + "/sections/EW1/cells/4")
    page.wait_for_selector("#volts [data-drawn]")
    points = (
        "document.querySelector('#volts [data-figure]')"
        "._fullData.reduce((sum, trace) => sum + (trace._length ?? 0), 0)"
    )
    before = page.evaluate(points)

    post_reading(live_server, token)

    until_s = time.monotonic() + 5
    while page.evaluate(points) == before and time.monotonic() < until_s:
        page.wait_for_timeout(50)
    assert page.evaluate(points) > before


@pytest.mark.browser
def test_a_page_goes_on_when_nothing_listens(open_page, live_server, sign_in, session, token):
    section = make_section(session, name="EW1")
    make_current(session, section.id, [NOW_MS], [36_000.0])
    keep_books(session)
    page = open_page(fails_to_load=True)
    page.add_init_script("delete window.EventSource")
    sign_in(page)

    page.goto(live_server + "/")

    expect(page.get_by_role("heading", name="Today")).to_be_visible()
