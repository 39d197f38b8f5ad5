import re

import pytest

from server.storage.readings import history
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    make_find,
    make_readings,
    make_section,
    make_suspicion,
)
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import rows_of, running_section, words_of

LAST_MS = NOW_MS - 3 * HOUR_MS
CORRECT = f"/sections/EW1/cells/4/readings/{LAST_MS}"


def test_a_cell_says_what_it_reads_and_what_hangs_in_it(client, session):
    running_section(session)

    said = words_of(client.get("/sections/EW1/cells/1"))

    assert "EW1, cell 1 in service read Tue 5 Mar 09:00 2.027 V" in said
    assert "efficiency of its recent crops 93.0 %" in said


def test_its_neighbours_are_one_step_away(client, session):
    running_section(session)

    first, last = (client.get(f"/sections/EW1/cells/{n}").text for n in (1, 10))

    assert 'rel="next" href="/sections/EW1/cells/2"' in first
    assert 'rel="prev"' not in first
    assert 'rel="prev" href="/sections/EW1/cells/9"' in last
    assert 'rel="next"' not in last


def test_a_flag_is_told_with_its_life(client, session):
    running_section(session, low=(4,))

    said = words_of(client.get("/sections/EW1/cells/4"))

    assert re.search(r"Flags in the period ▼ short .*Tue 5 Mar 01:00 – still open", said)


def test_what_was_found_is_among_the_events(client, session):
    section = running_section(session)
    make_find(session, section.id, section.cell_ids[3], at_ms=NOW_MS - DAY_MS)

    said = words_of(client.get("/sections/EW1/cells/4"))

    assert "find short on cathode 1; nodule knocked off Mon 4 Mar 12:00" in said


def test_its_crops_are_listed_with_their_efficiency(client, session):
    running_section(session)

    rows = rows_of(client.get("/sections/EW1/cells/1"), "Crops pulled in the period")

    assert [(row[0], row[6]) for row in rows] == [("L-1", "93.0")]


def test_a_superintendent_corrects_a_reading_and_the_former_value_stays(client, session):
    running_section(session)

    answer = client.post(CORRECT, data={"action": "correct", "volts": "2,041", "why": "misread"})
    rows = rows_of(client.get("/sections/EW1/cells/4"), "Readings")

    assert (answer.status_code, answer.headers["location"]) == (
        303,
        "/sections/EW1/cells/4?#readings",
    )
    assert rows[0][1] == "2.041"
    assert "became 2.041 V, by person" in words_of(client.get("/sections/EW1/cells/4"))
    assert re.search(r"changed 2\.041 V, by person \d+, .*: misread 2\.03\d V, by ana", rows[0][3])


def test_a_withdrawn_reading_is_still_listed(client, session):
    running_section(session)

    client.post(CORRECT, data={"action": "withdraw", "why": "another cell"})
    rows = rows_of(client.get("/sections/EW1/cells/4"), "Readings")

    assert rows[0][1] == "withdrawn"


def test_a_doubted_reading_is_confirmed(client, session):
    section = running_section(session)
    cell_id = section.cell_ids[3]
    make_readings(session, cell_id, [NOW_MS - HOUR_MS], [2.4], suspect=1)
    doubt = make_suspicion(session, section.id, cell_id, at_ms=NOW_MS - HOUR_MS)
    form = {"action": "confirm", "why": "read twice", "doubt_id": str(doubt.id)}

    shown = rows_of(client.get("/sections/EW1/cells/4"), "Readings")
    client.post(f"/sections/EW1/cells/4/readings/{NOW_MS - HOUR_MS}", data=form)

    session.rollback()
    assert shown[0][3].startswith("● not believed : a thousand times")
    assert history(session, cell_id, NOW_MS - HOUR_MS)[-1][2] == 0


@pytest.mark.parametrize(
    ("form", "sentence"),
    [
        ({"volts": "two", "why": "misread"}, "Volts as a number, such as 2.013."),
        ({"volts": "-2", "why": "misread"}, "Volts as a number, such as 2.013."),
        ({"volts": "2.041", "why": " "}, "Say why; the former value is kept beside it."),
    ],
)
def test_a_correction_that_cannot_be_is_told_at_its_field(client, session, form, sentence):
    section = running_section(session)

    page = client.post(CORRECT, data={"action": "correct"} | form)

    assert page.status_code == 422
    assert sentence in page.text
    assert len(history(session, section.cell_ids[3], LAST_MS)) == 1


def test_only_a_superintendent_is_offered_and_let_correct(client_of, session):
    running_section(session)
    planner = client_of("planner")

    shown = planner.get(f"/sections/EW1/cells/4?reading={LAST_MS}")
    refused = planner.post(CORRECT, data={"action": "withdraw", "why": "x"})

    assert "Withdraw" not in shown.text
    assert refused.status_code == 403


def test_readings_are_shown_as_they_were_known_on_a_day(client_of, session, the_time):
    running_section(session)
    the_time.now_ms = NOW_MS + DAY_MS
    client = client_of("superintendent")
    client.post(CORRECT, data={"action": "correct", "volts": "2.1", "why": "misread"})

    now = rows_of(client.get("/sections/EW1/cells/4"), "Readings")
    then = client.get("/sections/EW1/cells/4?known=2024-03-06")

    assert now[0][1] == "2.100"
    assert rows_of(then, "Readings")[0][1] != "2.100"
    assert "as they were known at the start of Wed 6 Mar 2024" in words_of(then)


def test_long_lists_of_readings_go_on_to_the_next_page(client, session):
    running_section(session)
    more = range(NOW_MS - 20 * HOUR_MS + 1, NOW_MS, HOUR_MS // 2)
    make_readings(session, 4, more, [2.03] * len(more))

    first = client.get("/sections/EW1/cells/4")
    older = re.search(r'href="([^"]*before=[^"]*)" rel="next"', first.text)[1].replace("&amp;", "&")
    second = client.get(f"/sections/EW1/cells/4{older}")

    count = len(rows_of(first, "Readings")) + len(rows_of(second, "Readings"))
    assert count == 24 + len(more)


@pytest.mark.parametrize("number", ["0", "11", "x"])
def test_a_cell_that_is_not_there_is_not_found(client, session, number):
    make_section(session, name="EW1")

    assert client.get(f"/sections/EW1/cells/{number}").status_code in (404, 422)


def test_a_cell_that_was_never_read_has_an_empty_page_and_no_fault(client, session):
    make_section(session, name="EW1")

    page = client.get("/sections/EW1/cells/1")

    assert page.status_code == 200
    assert "The cell was not read in this period." in page.text
    assert "never read" in page.text


@pytest.mark.browser
def test_the_page_is_whole_on_a_desk_and_on_a_phone(page, phone, live_server, sign_in, session):
    running_section(session, low=(4,))

    for screen in (page, phone):
        sign_in(screen)
        screen.goto(f"{live_server}/sections/EW1/cells/4?reading={LAST_MS}")
        screen.wait_for_selector("#volts [data-drawn]")
        width = screen.evaluate("document.documentElement.scrollWidth - innerWidth")
        assert (width, accessibility_faults(screen)) == (0, [])
