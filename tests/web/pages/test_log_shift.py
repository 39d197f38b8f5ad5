import re

import pytest

from server.storage.readings import between
from tests.factories import HOUR_MS, NOW_MS, make_house, make_outage, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import running_section, words_of

AT = "2024-03-05T11:00"
ROUND = {"section": "EW1", "at": AT, "current": "36.0", "volts-1": "2.031", "volts-2": "2.029"}


def readings(session, section):
    """What was stored at the moment of the round."""
    session.rollback()
    at_ms = NOW_MS - HOUR_MS
    series = between(session, section.cell_ids, at_ms, at_ms + 1)
    return series.volts.tolist()


def value_of(page, name):
    """What stands in a field of the page."""
    return re.search(rf'name="{name}"[^>]*? value="([^"]*)"', page.text).group(1)


def test_each_cell_has_a_field_with_what_is_known_of_it(client_of, session):
    running_section(session)

    page = client_of("operator").get("/log-shift")

    assert (
        len(re.findall(r'<input type="text" inputmode="decimal"[^>]*name="volts-', page.text)) == 10
    )
    assert value_of(page, "volts-3") == ""
    assert re.search(
        r"Cell 3 , volts 2\.0\d\d Tue 5 Mar 09:00 usual 2\.0\d\d–2\.0\d\d", words_of(page)
    )


def test_the_moment_is_now_on_the_wall_clock(client_of, session):
    section = running_section(session)

    page = client_of("operator").get("/log-shift", params={"section": section.name})

    assert value_of(page, "at") == "2024-03-05T12:00"
    assert "local, UTC" in page.text


def test_a_round_is_stored_and_counted(client_of, session):
    section = running_section(session)
    client = client_of("operator")

    answer = client.post("/log-shift", data=ROUND)
    page = client.get(answer.headers["location"])

    assert answer.status_code == 303
    assert readings(session, section) == [2.031, 2.029]
    assert "EW1 : 2 readings stored, with the current; 8 cells skipped." in words_of(page)


def test_a_cell_out_of_service_is_marked_and_not_counted_as_skipped(client_of, session):
    section = running_section(session)
    make_outage(
        session, section.id, cells="4", from_ms=NOW_MS - 2 * HOUR_MS, to_ms=None, state="bypassed"
    )
    client = client_of("operator")

    form = client.get("/log-shift")
    answer = client.post("/log-shift", data=ROUND)

    assert "bypassed since Tue 5 Mar 10:00" in words_of(form)
    assert re.search(r'name="volts-4"[^>]* data-skip', form.text)
    assert "skipped=7" in answer.headers["location"]


def test_what_is_wrong_comes_back_with_everything_that_was_typed(client_of, session):
    section = running_section(session)
    typed = ROUND | {"volts-3": "2,o3"}

    page = client_of("operator").post("/log-shift", data=typed)

    assert page.status_code == 422
    assert readings(session, section) == []
    assert "“2,o3” is not a number." in page.text
    assert {name: value_of(page, name) for name in typed} == typed


def test_a_slip_is_asked_about_beside_its_field(client_of, session):
    section = running_section(session)
    client = client_of("operator")
    typed = ROUND | {"volts-5": "2031"}

    page = client.post("/log-shift", data=typed)
    kept = client.post("/log-shift", data=typed | {"asked-5": "2031", "answer-5": "keep"})

    assert page.status_code == 422
    assert "Take 2.031 V" in page.text
    assert "Keep 2031 V as it is" in page.text
    assert kept.status_code == 303
    assert "suspect=1" in kept.headers["location"]
    assert len(readings(session, section)) == 3


def test_an_answer_is_not_asked_for_twice(client_of, session):
    running_section(session)
    typed = ROUND | {"volts-5": "2031", "asked-5": "2031", "answer-5": "keep", "volts-6": "x"}

    page = client_of("operator").post("/log-shift", data=typed)

    assert value_of(page, "answer-5") == "keep"


def test_a_time_that_came_twice_offers_both(client_of, session):
    make_house(session, time_zone="America/Santiago")
    make_section(session, name="EW1")
    client = client_of("operator")
    typed = {"section": "EW1", "at": "2023-04-01T23:30", "volts-1": "2.03"}

    page = client.post("/log-shift", data=typed)
    answer = client.post("/log-shift", data=typed | {"offset": "2023-04-01T23:30:00-04:00"})

    assert value_of(page, "offset") == "2023-04-01T23:30:00-03:00"
    assert value_of(page, "at") == "2023-04-01T23:30"
    assert answer.status_code == 303


def test_looking_it_over_stores_nothing(client_of, session):
    section = running_section(session)

    page = client_of("operator").post("/log-shift", data=ROUND | {"look": "yes"})

    assert page.status_code == 200
    assert value_of(page, "volts-1") == "2.031"
    assert readings(session, section) == []


def test_only_the_draft_that_was_sent_is_told_to_be_stored(client_of, session):
    running_section(session)
    client = client_of("operator")

    answer = client.post("/log-shift", data=ROUND | {"draft": "a1b2"})

    assert 'data-draft-done="a1b2"' in client.get(answer.headers["location"]).text


def test_a_section_that_is_not_there_is_said(client_of, session):
    running_section(session)

    page = client_of("operator").post("/log-shift", data=ROUND | {"section": "EW9"})

    assert page.status_code == 404


def test_a_reader_does_not_log(client_of, session):
    running_section(session)

    assert client_of("reader").get("/log-shift").status_code == 403


def test_a_form_of_a_former_session_is_carried_on(client_of, session):
    running_section(session)
    client = client_of("operator")
    client.headers["x-csrf-token"] = "of another session"

    answer = client.post("/log-shift", data=ROUND)

    assert (answer.status_code, answer.headers["location"]) == (307, "/sign-in/again")


@pytest.mark.browser
def test_the_form_is_open_to_all_who_log(page, phone, live_server, sign_in, session):
    running_section(session)
    for browser_page in (page, phone):
        sign_in(browser_page, role="operator")
        browser_page.goto(f"{live_server}/log-shift")

        assert accessibility_faults(browser_page) == []
        assert browser_page.evaluate("document.documentElement.scrollWidth <= innerWidth")
        field = browser_page.locator("#field-1").bounding_box()
        assert field["height"] >= 48


@pytest.mark.browser
def test_enter_goes_along_the_walk_and_passes_over_a_bypassed_cell(
    page, live_server, sign_in, session
):
    section = running_section(session)
    make_outage(
        session, section.id, cells="2", from_ms=NOW_MS - HOUR_MS, to_ms=None, state="bypassed"
    )
    sign_in(page, role="operator")
    page.goto(f"{live_server}/log-shift")

    page.locator("#field-1").press("Enter")
    after_1 = page.evaluate("document.activeElement.id")
    page.locator("#field-10").press("Enter")

    assert after_1 == "field-3"
    assert page.evaluate("document.activeElement.textContent") == "Store the round"


@pytest.mark.browser
def test_an_empty_battery_loses_nothing(page, live_server, sign_in, session):
    section = running_section(session)
    sign_in(page, role="operator")
    page.goto(f"{live_server}/log-shift")
    page.fill("#field-at", AT)
    page.fill("#field-3", "2.033")

    page.goto(f"{live_server}/log-shift")
    back = page.input_value("#field-3"), page.input_value("#field-at")
    page.locator("[data-last]").click()
    page.wait_for_url("**stored=1**")
    page.goto(f"{live_server}/log-shift")

    assert back == ("2.033", AT)
    assert readings(session, section) == [2.033]
    assert page.input_value("#field-3") == ""
    assert page.locator("[data-draft-notice]").is_hidden()


@pytest.mark.browser
def test_a_draft_is_thrown_away_when_asked(page, live_server, sign_in, session):
    running_section(session)
    sign_in(page, role="operator")
    page.goto(f"{live_server}/log-shift")
    page.fill("#field-3", "2.033")
    page.reload()

    page.locator("[data-draft-drop]").click()
    dropped = page.input_value("#field-3")
    page.reload()

    assert (dropped, page.input_value("#field-3")) == ("", "")


@pytest.mark.browser
def test_a_round_is_logged_without_script(open_page, live_server, sign_in, session):
    section = running_section(session)
    page = open_page(java_script_enabled=False)
    sign_in(page, role="operator")
    page.goto(f"{live_server}/log-shift")
    page.fill("#field-at", AT)
    page.fill("#field-1", "2.031")
    page.locator("[data-last]").click()
    page.wait_for_url("**stored=1**")

    assert readings(session, section) == [2.031]
