import re

import pytest

from server.storage.deliveries import HeldRow
from server.storage.readings import between
from tests.factories import NOW_MS, make_delivery, make_held_row, make_readings, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import words_of

SIX_MS = NOW_MS - 6 * 3_600_000
RIGHT = {"f-at": "2024-03-05T06:00", "f-section": "EW1", "f-cell": "1", "f-volts": "2.031"}


@pytest.fixture
def section(session):
    return make_section(session, name="EW1")


@pytest.fixture
def row(session, section):
    """A row of the night's file that is held."""
    delivery = make_delivery(session, source="night.csv", sender="ana")
    row = make_held_row(session, delivery_id=delivery.id)
    row_id = row.id
    session.commit()
    return row_id


def state_of(session, row_id):
    session.rollback()
    row = session.get(HeldRow, row_id)
    return row.state, row.decided_why


def stored(session, section):
    session.rollback()
    return between(session, section.cell_ids, SIX_MS, SIX_MS + 1).volts.tolist()


def test_a_row_is_shown_word_for_word_with_its_reason(client_of, row):
    page = client_of("reader").get("/readings-in/held")

    said = words_of(page)
    assert "night. csv, line 2 cell voltages" in said
    assert "volts is not a number" in said
    assert "2024-03-05T06:00,EW1,1,2,o31" in said
    assert "Mend or drop" not in said


def test_nothing_held_is_said(client, section):
    assert "No row is held." in client.get("/readings-in/held").text


def test_a_superintendent_has_its_fields_to_mend(client, row):
    page = client.get("/readings-in/held")

    field = re.search(r'name="f-volts" value="([^"]*)"([^>]*)>', page.text)
    assert field.group(1) == "2,o31"
    assert 'aria-invalid="true"' in field.group(2)


def test_a_mended_row_is_in_the_books(client, row, session, section):
    answer = client.post(f"/readings-in/held/{row}/mend", data=RIGHT)

    assert "The row is in the books." in client.get(answer.headers["location"]).text
    assert stored(session, section) == [2.031]
    assert state_of(session, row)[0] == "mended"


def test_what_is_still_wrong_comes_back_as_it_was_typed(client, row, session, section):
    typed = RIGHT | {"f-volts": "2.o3", "reason": "typed anew"}

    page = client.post(f"/readings-in/held/{row}/mend", data=typed)

    assert page.status_code == 422
    assert "is not a number" in page.text
    assert 'name="f-volts" value="2.o3"' in page.text
    assert 'value="typed anew"' in page.text
    assert "<details open>" in page.text
    assert state_of(session, row)[0] == "held"


def test_a_reason_lets_it_correct_what_is_stored(client, row, session, section):
    make_readings(session, section.cell_ids[0], [SIX_MS], [2.5])

    refused = client.post(f"/readings-in/held/{row}/mend", data=RIGHT)
    client.post(f"/readings-in/held/{row}/mend", data=RIGHT | {"reason": "wrong meter"})

    assert "volts is stored here as 2.5" in refused.text
    assert stored(session, section) == [2.031]


def test_a_row_is_dropped_with_a_reason(client, row, session):
    unsaid = client.post(f"/readings-in/held/{row}/drop", data={"why": " "})
    client.post(f"/readings-in/held/{row}/drop", data={"why": "written twice"})

    assert unsaid.status_code == 422
    assert "Say why it is dropped." in unsaid.text
    assert state_of(session, row) == ("dropped", "written twice")


def test_what_was_decided_can_be_looked_back_at(client, row):
    client.post(f"/readings-in/held/{row}/drop", data={"why": "written twice"})

    page = client.get("/readings-in/held", params={"state": "dropped"})

    assert re.search(r"decided by person \d+ .*: written twice", words_of(page))
    assert "Mend or drop" not in page.text


def test_a_row_that_was_decided_on_is_not_decided_on_again(client, row):
    client.post(f"/readings-in/held/{row}/drop", data={"why": "written twice"})

    again = client.post(f"/readings-in/held/{row}/drop", data={"why": "once more"})
    mended = client.post(f"/readings-in/held/{row}/mend", data=RIGHT)

    assert "This row was dropped by" in again.text
    assert "This row was dropped by" in mended.text


def test_many_rows_are_dropped_for_one_reason(client, row, session):
    other = make_held_row(session, line=3).id
    session.commit()

    page = client.get("/readings-in/held")
    client.post("/readings-in/held/drop", data={"row": [row, other], "why": "of the test bench"})

    assert page.text.count('form="drop-ticked"') == 2
    assert state_of(session, row) == ("dropped", "of the test bench")
    assert state_of(session, other) == ("dropped", "of the test bench")


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"why": "x"}, "Tick the rows to be dropped."),
        ({"row": "1"}, "Say why they are dropped."),
    ],
)
def test_dropping_many_asks_for_both(client, row, session, sent, sentence):
    make_held_row(session, line=3)
    session.commit()

    page = client.post("/readings-in/held/drop", data=sent)

    assert page.status_code == 422
    assert sentence in page.text


def test_rows_of_one_sheet_are_shown_alone(client, row, session):
    make_held_row(session, sheet="lots", fields="{}", raw="a lot")
    session.commit()

    page = client.get("/readings-in/held", params={"sheet": "lots"})

    assert "a lot" in page.text
    assert "2,o31" not in page.text


def test_a_long_list_goes_on(client, section, session):
    delivery = make_delivery(session)
    for line in range(27):
        make_held_row(session, delivery_id=delivery.id, line=line, raw=f"row {line}")
    session.commit()

    page = client.get("/readings-in/held")
    older = re.search(r'href="([^"]+)" rel="next"', page.text).group(1).replace("&amp;", "&")

    assert page.text.count("<pre") == 25
    assert client.get(f"/readings-in/held{older}").text.count("<pre") == 2


@pytest.mark.parametrize("action", ["mend", "drop"])
def test_deciding_takes_a_superintendent(client_of, row, action):
    answer = client_of("planner").post(f"/readings-in/held/{row}/{action}", data={"why": "x"})

    assert answer.status_code == 403


@pytest.mark.browser
def test_held_rows_are_open_to_all(page, phone, live_server, sign_in, row, session):
    make_held_row(session, line=3)
    session.commit()
    for browser_page in (page, phone):
        sign_in(browser_page)
        browser_page.goto(f"{live_server}/readings-in/held")
        browser_page.locator("summary").first.click()

        assert accessibility_faults(browser_page) == []
        assert browser_page.evaluate("document.documentElement.scrollWidth <= innerWidth")
