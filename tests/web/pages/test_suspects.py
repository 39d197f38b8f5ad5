import re

import pytest

from server.storage.deliveries import Suspicion
from server.storage.readings import between
from tests.factories import NOW_MS, make_delivery, make_readings, make_section, make_suspicion
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import words_of


@pytest.fixture
def section(session):
    return make_section(session, name="EW1")


@pytest.fixture
def doubts(session, section):
    """Two readings that were stored in millivolts."""
    delivery = make_delivery(session, source="night.csv")
    ids = []
    for cell_id, volts in zip(section.cell_ids[:2], (2031.0, 2029.0), strict=True):
        make_readings(session, cell_id, [NOW_MS - 1], [volts], suspect=1, delivery=delivery)
        doubt = make_suspicion(
            session,
            section.id,
            cell_id,
            at_ms=NOW_MS - 1,
            delivery_id=delivery.id,
            suggested=str(volts / 1000),
        )
        ids.append(doubt.id)
    session.commit()
    return ids


def believed(session, section):
    session.rollback()
    return between(session, section.cell_ids, 0, NOW_MS).believed().volts.tolist()


def states(session):
    session.rollback()
    return [(doubt.state, doubt.decided_why) for doubt in session.query(Suspicion).order_by("id")]


def test_each_doubt_says_where_and_why(client_of, doubts):
    said = words_of(client_of("reader").get("/readings-in/suspects"))

    assert "EW1, cell 1" in said
    assert "a thousand times the cell's usual voltage" in said
    assert "waiting 2" in said
    assert "Confirm as read" not in said


def test_what_was_probably_meant_is_offered(client, doubts):
    page = client.get("/readings-in/suspects")

    offered = re.findall(r'name="volts-\d+"[^>]*value="([^"]*)"', page.text)
    assert sorted(offered) == ["2.029", "2.031"]


def test_no_doubt_is_said(client, section):
    assert "No reading is suspect." in client.get("/readings-in/suspects").text


def test_confirmed_readings_count(client, doubts, session, section):
    sent = {"reading": doubts, "decision": "confirm", "why": "another meter"}

    answer = client.post("/readings-in/suspects", data=sent)

    assert "2 readings are confirmed" in client.get(answer.headers["location"]).text
    assert believed(session, section) == [2031.0, 2029.0]
    assert states(session) == [("confirmed", "another meter")] * 2


def test_corrected_readings_take_the_right_value(client, doubts, session, section):
    first, second = doubts
    sent = {
        "reading": doubts,
        f"volts-{first}": "2.031",
        f"volts-{second}": "2,029",
        "decision": "correct",
        "why": "millivolts",
    }

    client.post("/readings-in/suspects", data=sent)

    assert believed(session, section) == [2.031, 2.029]
    assert states(session) == [("corrected", "millivolts")] * 2


def test_withdrawn_readings_are_left_out(client, doubts, session, section):
    sent = {"reading": doubts[:1], "decision": "withdraw", "why": "wrong cell"}

    client.post("/readings-in/suspects", data=sent)

    session.rollback()
    assert between(session, section.cell_ids, 0, NOW_MS).volts.tolist() == [2029.0]
    assert states(session) == [("withdrawn", "wrong cell"), ("open", None)]


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"decision": "confirm", "why": "x"}, "Tick the readings that are meant."),
        ({"decision": "confirm", "reading": "1"}, "Say why."),
        ({"decision": "burn", "reading": "1", "why": "x"}, "did not say what to do"),
        ({"decision": "correct", "reading": "1", "why": "x"}, "Type the right voltage, in V."),
        (
            {"decision": "correct", "reading": "1", "why": "x", "volts-1": "two"},
            "Type the right voltage, in V.",
        ),
    ],
)
def test_what_is_missing_is_asked_for(client, doubts, session, sent, sentence):
    page = client.post("/readings-in/suspects", data=sent)

    assert page.status_code == 422
    assert sentence in page.text
    assert states(session) == [("open", None)] * 2


def test_all_of_them_or_none(client, doubts, session):
    client.post(
        "/readings-in/suspects",
        data={"reading": doubts[:1], "decision": "withdraw", "why": "wrong cell"},
    )

    page = client.post(
        "/readings-in/suspects",
        data={"reading": doubts, "decision": "confirm", "why": "another meter"},
    )

    assert page.status_code == 422
    assert states(session)[1] == ("open", None)


def test_one_section_is_shown_alone(client, doubts, session):
    make_section(session, name="EW2")

    page = client.get("/readings-in/suspects", params={"section": "EW2"})

    assert "No reading is suspect." in page.text


def test_what_was_decided_can_be_looked_back_at(client, doubts):
    client.post(
        "/readings-in/suspects",
        data={"reading": doubts, "decision": "confirm", "why": "another meter"},
    )

    page = client.get("/readings-in/suspects", params={"state": "confirmed"})

    assert page.text.count("another meter") == 2
    assert 'type="checkbox"' not in page.text


def test_deciding_takes_a_superintendent(client_of, doubts):
    sent = {"reading": doubts, "decision": "confirm", "why": "x"}

    assert client_of("planner").post("/readings-in/suspects", data=sent).status_code == 403


@pytest.mark.browser
def test_suspect_readings_are_open_to_all(page, phone, live_server, sign_in, doubts, session):
    for browser_page in (page, phone):
        session.rollback()
        sign_in(browser_page)
        browser_page.goto(f"{live_server}/readings-in/suspects")

        assert accessibility_faults(browser_page) == []
        assert browser_page.evaluate("document.documentElement.scrollWidth <= innerWidth")
