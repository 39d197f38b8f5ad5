import re

import pytest

from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    make_flag,
    make_held_row,
    make_outage,
    make_section,
    make_suspicion,
)
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import running_section, words_of


def test_each_section_says_how_it_runs_and_how_well(client, session):
    running_section(session)

    said = words_of(client.get("/"))

    assert "Copper electrowinning · 10 of 10 cells in service · 36.0 kA, 0 min ago" in said
    assert "day round 10 of 10, last read 09:00" in said
    assert re.search(r"efficiency, 7 days, ± 0\.3, target 93\.0 93\.0 %", said)
    assert re.search(r"kWh/t, ± \d+, target 1 950 1 8\d\d", said)


def test_a_house_without_records_says_what_comes_next(client, session):
    make_section(session)

    page = client.get("/")

    assert "nothing is recorded yet" in page.text
    for path in ("/readings-in", "/log", "/lots", "/setup"):
        assert re.search(rf'<a href="[^"]*{path}', page.text), path
    assert "no data" not in page.text


def test_an_efficiency_beyond_doubt_under_its_target_is_marked(client, session):
    running_section(session, net_kg=6400.0)

    page = client.get("/")

    assert re.search(r'<dd class="low"><span aria-hidden="true">▼</span> 89\.3', page.text)


def test_an_efficiency_within_its_doubt_of_the_target_is_not_marked(client, session):
    running_section(session, net_kg=6640.0)

    page = client.get("/")

    assert '<dd class="low">' not in page.text


def test_energy_over_its_target_beyond_doubt_is_marked(client, session):
    running_section(session, target_specific_energy_j_kg=1500 * 3600.0)

    page = client.get("/")

    assert re.search(r'<dd class="high"><span aria-hidden="true">▲</span> 1', page.text)


def test_a_current_that_was_not_logged_for_longer_than_it_holds_is_marked(
    client, session, the_time
):
    running_section(session)
    the_time.now_ms = NOW_MS + 3 * HOUR_MS

    page = client.get("/")

    assert re.search(
        r'class="look[^>]*><span aria-hidden="true">●</span> 36\.0.kA, logged', page.text
    )


def test_a_round_that_is_late_is_marked_within_the_shifts_last_hour(client, session, the_time):
    running_section(session)
    the_time.now_ms = NOW_MS + 11 * HOUR_MS + HOUR_MS // 2

    page = client.get("/")

    assert re.search(r"●</span> evening round not begun", page.text)


def test_a_section_that_is_off_says_so_and_nothing_else_of_its_current(client, session):
    section = running_section(session)
    make_outage(session, section.id, to_ms=None)

    said = words_of(client.get("/"))

    assert "0 of 10 cells in service · ● off ·" in said


def test_the_costliest_cell_comes_first_with_what_it_costs_a_day(client, session):
    running_section(session, low=(4,))

    said = words_of(client.get("/"))

    assert re.search(r"Costliest first EW1, cell 4 [\d ]+ USD a day ▼ short, about", said)


def test_many_flags_are_folded_away_and_the_rest_is_counted(client, session):
    section = make_section(session, name="EW1", cells=45)
    for cell_id in section.cell_ids:
        make_flag(session, section.id, cell_id)

    page = client.get("/")

    assert page.text.count("drifting high") == 40
    assert "5 more stand on the pages of their sections." in page.text


def test_what_waits_for_somebody_is_told(client, session):
    section = running_section(session)
    make_held_row(session)
    make_suspicion(session, section.id, section.cell_ids[0])

    said = words_of(client.get("/"))

    assert re.search(r"Waiting for somebody : 1 row held ?, 1 reading not believed", said)


def test_records_of_long_ago_are_told_with_their_day(client, session):
    running_section(session, last_ms=NOW_MS - 40 * DAY_MS)

    said = words_of(client.get("/"))

    assert "Nothing was recorded in the last seven days The newest record is of" in said
    assert "Thu 25 Jan 2024" in said
    assert "●" not in said
    assert "no data" not in said


def test_a_reader_sees_the_page_and_a_stranger_signs_in_first(client_of, anonymous, session):
    running_section(session)

    assert client_of("reader").get("/").status_code == 200
    assert anonymous.get("/").headers["location"].startswith("/sign-in")


@pytest.mark.browser
def test_the_page_is_whole_on_a_desk_and_on_a_phone(page, phone, live_server, sign_in, session):
    running_section(session, low=(4,))

    for screen in (page, phone):
        sign_in(screen)
        screen.goto(live_server + "/")
        width = screen.evaluate("document.documentElement.scrollWidth - innerWidth")
        assert (width, accessibility_faults(screen)) == (0, [])
