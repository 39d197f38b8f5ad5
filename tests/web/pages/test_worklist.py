import re

import pytest

from server.storage.finds import finds_between
from server.storage.flag_acts import acts_on_flags
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    make_flag,
    make_flag_act,
    make_person,
    make_readings,
    make_section,
)
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import rows_of, running_section, words_of

RAISED_MS = NOW_MS - DAY_MS


@pytest.fixture
def section(session):
    return make_section(session, name="EW1")


@pytest.fixture
def short(session, section):
    """A short at cell 7, and a cell 3 that drifts."""
    cell_id = section.cell_ids[6]
    at_ms = [NOW_MS - hours * HOUR_MS for hours in (72, 48, 24, 8)]
    make_readings(session, cell_id, at_ms, [2.031, 2.030, 1.870, 1.860])
    make_flag(session, section.id, section.cell_ids[2])
    return make_flag(
        session,
        section.id,
        cell_id,
        kind="short",
        tier="act",
        volts=1.87,
        deviation_v=-0.16,
        short_amps=900.0,
        u_short_amps=200.0,
        lost_kg_per_day=24.0,
        lost_value_per_day=220.0,
        probability=0.94,
        evidence="1.870 V, 160 mV below what the cells around it say.",
    )


def meant(**given):
    return {"section": "EW1", "cell": "7", "kind": "short", "raised_ms": str(RAISED_MS)} | given


def names(page):
    return re.findall(r'class="cell-name"[^>]*>([^<]*)<', page.text)


def test_a_flag_says_what_it_costs_since_when_how_sure_and_why(client_of, short):
    said = words_of(client_of("reader").get("/worklist"))

    assert "EW1, cell 7 ▼ short 94 % sure 220 USD a day 24 kg · 0.9 kA ± 0.2" in said
    assert "since Mon 4 Mar 12:00 not seen yet" in said
    assert "1.870 V, 160 mV below what the cells around it say." in said


def test_the_costliest_to_act_on_comes_first(client, short):
    page = client.get("/worklist")

    assert names(page) == ["EW1, cell 7", "EW1, cell 3"]
    assert "To act on" in page.text
    assert "Watched" in page.text


def test_the_list_can_follow_the_walk(client, short):
    page = client.get("/worklist", params={"order": "walk"})

    assert names(page) == ["EW1, cell 3", "EW1, cell 7"]
    assert "EW1, in walking order" in page.text


@pytest.mark.parametrize(
    ("asked", "cells"),
    [
        ({"tier": "act"}, ["EW1, cell 7"]),
        ({"kind": "drift high"}, ["EW1, cell 3"]),
        ({"state": "seen"}, ["EW1, cell 3"]),
        ({"state": "shelved"}, []),
        ({"section": "EW2"}, []),
        ({"section": "EW1", "state": "all"}, ["EW1, cell 7", "EW1, cell 3"]),
    ],
)
def test_what_is_shown_stands_in_the_address(client, session, short, section, asked, cells):
    drift = make_flag(session, section.id, section.cell_ids[2], raised_ms=RAISED_MS + 1)
    session.delete(drift)
    session.commit()
    make_flag_act(session, drift, "seen", raised_ms=RAISED_MS)

    assert names(client.get("/worklist", params=asked)) == cells


def test_the_last_readings_are_drawn(client, short):
    page = client.get("/worklist", params={"tier": "act"})

    (points,) = re.findall(r'<polyline points="([^"]*)"', page.text)
    assert len(points.split()) == 4
    assert "The last readings lie between 1.860 and 2.031 V." in words_of_labels(page)


def words_of_labels(page):
    labels = re.findall(r'aria-label="([^"]*)"', page.text)
    return re.sub(r"\s", " ", " ".join(labels))


def test_a_reader_is_offered_nothing_to_do(client_of, short):
    page = client_of("reader").get("/worklist")

    assert "What was found" not in page.text
    assert "/worklist/acts" not in page.text


def test_an_operator_records_finds_alone(client_of, short):
    page = client_of("operator").get("/worklist")

    assert "What was found" in page.text
    assert "/worklist/acts" not in page.text
    assert client_of("operator").post("/worklist/acts", data=meant(act="seen")).status_code == 403


def test_a_flag_is_marked_as_seen(client_of, short):
    planner = client_of("planner")

    answer = planner.post("/worklist/acts", data=meant(act="seen", back="tier=act"))
    page = planner.get(answer.headers["location"])

    assert answer.status_code == 303
    assert "EW1, cell 7: marked as seen." in page.text
    assert re.search(r"seen by person \d+", words_of(page))
    assert names(page) == ["EW1, cell 7"]


def test_a_flag_is_given_to_somebody(client, session, short):
    make_person(session, name="mira", role="operator")
    make_person(session, name="old hand", role="operator", is_active=0)

    offered = client.get("/worklist").text
    answer = client.post("/worklist/acts", data=meant(act="working", assigned_to="mira"))

    assert '<option value="mira">' in offered
    assert "old hand" not in offered
    assert "worked on by mira" in words_of(client.get(answer.headers["location"]))


def test_a_shelved_flag_leaves_the_list_for_a_time(client, short):
    sent = meant(act="shelved", days="3", reason="pulled on Friday")

    answer = client.post("/worklist/acts", data=sent)
    page = client.get(answer.headers["location"])
    shelved = words_of(client.get("/worklist", params={"state": "shelved"}))

    assert names(page) == ["EW1, cell 3"]
    assert "1 flag is shelved" in words_of(page)
    assert "shelved until Fri 8 Mar 12:00: pulled on Friday" in shelved
    assert "Take off the shelf" in shelved


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"act": "shelved", "days": "2"}, "Say why."),
        ({"act": "closed"}, "Say why."),
        ({"act": "shelved", "reason": "x", "days": "8"}, "seven days at most"),
        ({"act": "shelved", "reason": "x"}, "seven days at most"),
        ({"act": "burn", "reason": "x"}, "did not say what to do"),
    ],
)
def test_what_is_missing_is_asked_for_at_its_flag(client, session, short, sent, sentence):
    page = client.post("/worklist/acts", data=meant(**sent))

    assert page.status_code == 422
    assert sentence in words_of(page)
    assert re.search(r'id="flag-1-more" open', page.text)
    assert acts_on_flags(session, 0, NOW_MS) == {}


def test_a_flag_that_is_not_there_is_not_found(client, short):
    assert client.post("/worklist/acts", data=meant(act="seen", cell="8")).status_code == 404
    assert client.post("/worklist/finds", data=meant(found="short", cell="8")).status_code == 404


def test_a_find_is_recorded_and_closes_the_flag(client, client_of, session, section, short):
    sent = meant(found="short", cathode="12", action="nodule knocked off")

    answer = client_of("operator").post("/worklist/finds", data=sent)
    page = client.get(answer.headers["location"])

    assert "EW1, cell 7: the find is recorded" in page.text
    assert names(page) == ["EW1, cell 3"]
    session.rollback()
    ((find,),) = finds_between(session, 0, NOW_MS + 1).values()
    assert (find.at_ms, find.cathode, find.found) == (NOW_MS, 12, "short")
    assert find.action == "nodule knocked off"
    ((act,),) = acts_on_flags(session, 0, NOW_MS).values()
    assert (act.act, act.find) == ("closed", (section.cell_ids[6], NOW_MS, 12))


def test_two_taps_are_enough(client, short):
    answer = client.post("/worklist/finds", data=meant(found="nothing", cathode="", action=""))

    assert answer.status_code == 303


@pytest.mark.parametrize(
    ("sent", "sentence"),
    [
        ({"found": ""}, "Choose what was found."),
        ({"found": "gremlin"}, "Choose what was found."),
        ({"found": "short", "cathode": "61"}, "There is no cathode 61"),
        ({"found": "short", "cathode": "x"}, "x"),
    ],
)
def test_a_find_that_cannot_be_is_not_stored_and_not_held(client, session, short, sent, sentence):
    page = client.post("/worklist/finds", data=meant(**sent))

    assert page.status_code == 422
    assert sentence in words_of(page)
    assert re.search(r'id="flag-1-find" open', page.text)
    session.rollback()
    assert finds_between(session, 0, NOW_MS + 1) == {}
    assert client.get("/api/v1/held").json()["held"] == []


def test_cells_that_come_back_are_listed(client, session, section):
    for days in (60, 30, 5):
        raised_ms = NOW_MS - days * DAY_MS
        make_flag(
            *(session, section.id, section.cell_ids[4]), raised_ms=raised_ms, ended_ms=raised_ms + 1
        )

    rows = rows_of(client.get("/worklist"), "Cells that come back")

    assert rows == [["EW1, cell 5", "3", "drifting high 3", "Thu 29 Feb 12:00"]]


def test_a_quiet_house_is_said(client, section):
    said = words_of(client.get("/worklist"))

    assert "No flag is open." in said
    assert "No cell was flagged three times" in said


def test_a_long_list_goes_on_on_another_page(client, session):
    long = make_section(session, name="EW1", cells=50)
    for cell_id in long.cell_ids:
        make_flag(session, long.id, cell_id)

    first = client.get("/worklist", params={"tier": "look"})
    (following,) = re.findall(r'href="\?([^"]*)" rel="next"', first.text)
    second = client.get(f"/worklist?{following.replace('&amp;', '&')}")

    assert (len(names(first)), len(names(second))) == (40, 10)
    assert "tier=look" in following


def test_the_list_carries_the_cautions(client, section):
    said = words_of(client.get("/worklist"))

    for word in ("live", "hot", "pacemaker", "acid", "Hydrogen", "under load", "advises"):
        assert word in said


def test_everybody_can_use_it(page, live_server, sign_in, short):
    sign_in(page)
    page.goto(f"{live_server}/worklist")

    page.locator("#flag-1-find summary").click()
    page.locator("#flag-2-more summary").click()

    assert accessibility_faults(page) == []


def test_a_find_takes_two_taps_on_a_phone(phone, live_server, sign_in, short):
    sign_in(phone)
    phone.goto(f"{live_server}/worklist")

    phone.locator("#flag-1-find summary").tap()
    phone.locator("#flag-1-find button", has_text="a short").tap()

    phone.get_by_text("the find is recorded").wait_for()
    assert phone.evaluate("document.documentElement.scrollWidth") <= 390


def test_it_prints_on_one_sheet(page, live_server, sign_in, session):
    long = make_section(session, name="EW1", cells=40)
    for cell_id in long.cell_ids:
        make_flag(session, long.id, cell_id, evidence="This takes some words to say. " * 8)
    sign_in(page)
    page.goto(f"{live_server}/worklist")

    pages = page.pdf(format="A4", prefer_css_page_size=True).count(b"/Type /Page\n")

    page.emulate_media(media="print")
    assert page.get_by_text("The first 11 of 40 are on this sheet.").is_visible()
    assert page.get_by_text("Before you go to a cell").is_visible()
    assert not page.locator("#flag-12").is_visible()
    assert pages == 1


def test_cells_that_deserve_a_planned_stop_are_listed_with_what_it_should_bring(client, session):
    section = running_section(session)
    for days_ago in (80, 50, 20):
        raised_ms = NOW_MS - days_ago * DAY_MS
        make_flag(
            *(session, section.id, section.cell_ids[4]),
            raised_ms=raised_ms,
            ended_ms=raised_ms + 3 * DAY_MS,
            deviation_v=0.1,
        )

    page = client.get("/worklist")
    (stop,) = client.get("/api/v1/worklist").json()["planned"]

    (row,) = rows_of(page, "Cells whose anodes or contacts deserve a planned stop")
    assert row == ["EW1, cell 5", "not now", "3", "+100", "244", ""]
    assert stop["cell"] == 5
    assert stop["gain_kwh_per_month"] == pytest.approx(244.35, abs=0.01)
    assert stop["gain_kg_per_month"] is None


def test_where_no_cell_deserves_a_stop_the_list_says_so(client, section):
    said = words_of(client.get("/worklist"))

    assert "No cell has drifted high for more than a week, or three times in 90 days." in said
