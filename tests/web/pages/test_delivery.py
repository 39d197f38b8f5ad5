import pytest

from server.storage.deliveries import HeldRow
from server.storage.readings import between
from tests.factories import NOW_MS, make_delivery, make_held_row, make_readings, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import words_of


@pytest.fixture
def section(session):
    return make_section(session, name="EW1")


@pytest.fixture
def night(session, section):
    """A delivery of one reading, with two rows that are held."""
    delivery = make_delivery(
        session, source="night.csv", sender="ana", rows=3, stored=1, held=2, dialect="Commas."
    )
    make_readings(session, section.cell_ids[0], [NOW_MS - 1], [2.03], delivery=delivery)
    make_held_row(session, delivery_id=delivery.id)
    make_held_row(session, delivery_id=delivery.id, line=3)
    session.commit()
    return f"/readings-in/deliveries/{delivery.id}"


def test_a_delivery_says_what_it_brought_and_what_waits(client_of, night):
    said = words_of(client_of("reader").get(night))

    assert "night. csv Cell voltages · ana · Tue 5 Mar 2024 12:00" in said
    assert "rows 3 stored 1 in the books already 0 held 2 suspect 0" in said
    assert "2 rows wait for somebody to mend or drop them" in said
    assert "Take it back" not in said


def test_what_is_taken_back_counts_no_more_and_stays_on_record(client, night, session, section):
    answer = client.post(f"{night}/withdraw", data={"why": "file of another plant"})
    page = client.get(answer.headers["location"])

    session.rollback()
    assert "1 record was taken back." in words_of(page)
    assert len(between(session, section.cell_ids, 0, NOW_MS)) == 0
    assert {row.state for row in session.query(HeldRow)} == {"dropped"}
    assert "file of another plant" in client.get("/readings-in").text


def test_it_is_taken_back_once(client, night):
    client.post(f"{night}/withdraw", data={"why": "file of another plant"})

    page = client.post(f"{night}/withdraw", data={"why": "again"})

    assert page.status_code == 422
    assert client.get("/readings-in").text.count("withdrawal of") == 1


@pytest.mark.parametrize(
    ("action", "sentence"),
    [("withdraw", "Say why it is taken back."), ("drop-held", "Say why they are dropped.")],
)
def test_a_reason_is_asked_for(client, night, action, sentence):
    page = client.post(f"{night}/{action}", data={})

    assert page.status_code == 422
    assert sentence in page.text


def test_every_row_it_holds_is_dropped_for_one_reason(client, night, session):
    client.post(f"{night}/drop-held", data={"why_drop": "a test of the logger"})

    session.rollback()
    rows = session.query(HeldRow).all()
    assert {(row.state, row.decided_why) for row in rows} == {("dropped", "a test of the logger")}


@pytest.mark.parametrize("action", ["withdraw", "drop-held"])
def test_it_takes_a_superintendent(client_of, night, action):
    assert client_of("planner").post(f"{night}/{action}", data={"why": "x"}).status_code == 403


def test_one_that_is_not_there_is_not_found(client, section):
    assert client.get("/readings-in/deliveries/77").status_code == 404
    assert client.post("/readings-in/deliveries/77/withdraw", data={"why": "x"}).status_code == 404


@pytest.mark.browser
def test_the_page_of_a_delivery_is_open_to_all(page, phone, live_server, sign_in, night):
    for browser_page in (page, phone):
        sign_in(browser_page)
        browser_page.goto(live_server + night)

        assert accessibility_faults(browser_page) == []
        assert browser_page.evaluate("document.documentElement.scrollWidth <= innerWidth")
