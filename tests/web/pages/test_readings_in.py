import re

import pytest

from tests.factories import make_delivery, make_held_row, make_section, make_suspicion
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import rows_of, words_of

VOLTS = b"at,section,cell,volts\n2024-03-05T06:00,EW1,1,2.031\n2024-03-05T06:01,EW1,2,2o29\n"


@pytest.fixture
def section(session):
    return make_section(session, name="EW1")


def send(client, content=VOLTS, name="night.csv"):
    return client.post("/readings-in", files={"file": (name, content)})


def test_nothing_has_come_in_yet(client, section):
    page = client.get("/readings-in")

    assert "Nothing has come in yet." in page.text
    assert "No row is held No reading is suspect" in words_of(page)


def test_deliveries_are_listed_with_what_became_of_them(client, section, session):
    brought = make_delivery(
        session, source="night.csv", sender="ana", rows=60, stored=57, duplicates=2, held=1,
        suspect=3, reason="wrong meter",
    )  # fmt: skip
    make_held_row(session, delivery_id=brought.id)
    make_suspicion(session, section.id, section.cell_ids[0], delivery_id=brought.id)

    page = client.get("/readings-in")

    (row,) = rows_of(page, "Deliveries")
    assert row[1:] == [
        "cell voltages", "night. csv wrong meter", "ana", "60", "57", "2", "1", "3",
        "● 1 held ● 1 suspect",
    ]  # fmt: skip
    assert "1 row held 1 suspect reading" in words_of(page)


def test_a_long_list_goes_on_on_the_next_page(client, section, session):
    for place in range(32):
        make_delivery(session, source=f"round {place}.csv")

    page = client.get("/readings-in")
    older = re.search(r'href="(/readings-in\?before=\d+)" rel="next"', page.text).group(1)

    assert len(rows_of(page, "Deliveries")) == 30
    assert len(rows_of(client.get(older), "Deliveries")) == 2


def test_a_file_is_looked_at_before_anything_is_stored(client_of, section):
    client = client_of("operator")

    answer = send(client)

    assert answer.status_code == 303
    assert answer.headers["location"].startswith("/readings-in/sent/")
    assert "Nothing has come in yet." in client.get("/readings-in").text


def test_sending_nothing_is_said(client_of, section):
    page = client_of("operator").post("/readings-in", files={"file": ("", b"")})

    assert page.status_code == 422
    assert "Choose one or several files first." in page.text


def test_a_reader_sees_the_list_and_sends_nothing(client_of, section):
    client = client_of("reader")

    assert 'type="file"' not in client.get("/readings-in").text
    assert send(client).status_code == 403


def test_what_was_taken_in_is_told(client, section, session):
    brought = make_delivery(session, source="night.csv", stored=57, suspect=3, held=1)

    page = client.get("/readings-in", params={"taken": f"{brought.id},x,,999"})

    assert "cell voltages: 57 rows stored, 3 of them suspect, 1 held ." in words_of(page)


@pytest.mark.browser
def test_a_file_goes_in_from_the_desk_and_from_the_tablet(
    page, phone, live_server, sign_in, section, session
):
    for browser_page in (page, phone):
        session.rollback()
        sign_in(browser_page)
        browser_page.goto(f"{live_server}/readings-in")
        faults = accessibility_faults(browser_page)
        browser_page.set_input_files(
            "input[type=file]",
            [
                {"name": name, "mimeType": "text/csv", "buffer": VOLTS}
                for name in ("night.csv", "day.csv")
            ],
        )
        browser_page.locator("form.send button").click()
        browser_page.wait_for_url("**/sent/**")
        faults += accessibility_faults(browser_page)
        fits = browser_page.evaluate("document.documentElement.scrollWidth <= innerWidth")
        browser_page.locator("form[action$='/take-in'] button").click()
        browser_page.wait_for_url("**taken=**")

        assert faults == []
        assert fits
        assert browser_page.locator("[role=status]").first.is_visible()


@pytest.mark.browser
def test_a_file_goes_in_without_script(open_page, live_server, sign_in, section):
    page = open_page(java_script_enabled=False)
    sign_in(page, role="operator")
    page.goto(f"{live_server}/readings-in")
    page.set_input_files(
        "input[type=file]", {"name": "night.csv", "mimeType": "text/csv", "buffer": VOLTS}
    )
    page.locator("form.send button").click()
    page.locator("form[action$='/take-in'] button").click()
    page.wait_for_url("**taken=**")

    assert "1 row stored" in page.locator("[role=status]").first.inner_text()
