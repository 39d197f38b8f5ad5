import re

import pytest

from tests.factories import NOW_MS, make_current, make_outage, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import rows_of, running_section, words_of


def test_every_cell_is_a_needle_that_leads_to_its_page(client, session):
    running_section(session)

    page = client.get("/sections/EW1")

    wide = re.search(r'<svg class="wide-floor".*?</svg>', page.text, re.DOTALL)[0]
    assert re.findall(r'href="/sections/EW1/cells/(\d+)"', wide) == [str(n) for n in range(1, 11)]
    assert "<title>Cell 5 · 2.0" in wide


def test_a_flagged_cell_has_colour_and_mark_and_is_told_in_words(client, session):
    running_section(session, low=(4,))

    page = client.get("/sections/EW1")

    assert re.search(r'class="flagged low"><title>Cell 4 [^<]*short</title>', page.text)
    assert 'aria-label="Needles of 10 cells; flagged: 4."' in page.text
    assert re.search(r"Costliest first Cell 4 [\d ]+ USD a day", words_of(page))


def test_the_account_shows_both_bases_side_by_side(client, session):
    running_section(session)

    page = client.get("/sections/EW1?from=2024-02-25&to=2024-03-05")

    by_lots, by_period = (
        dict(row[:2] for row in rows_of(page, by)) for by in ("By the lots", "By the period")
    )
    assert by_lots["lots pulled"] == "2"
    assert by_lots["metal weighed"] == "13 338 kg"
    assert by_lots["current efficiency target 93.0"] == "93.01 %"
    assert by_period["current efficiency target 93.0"] == "93.01 %"


def test_the_ledger_adds_up_to_the_charge_through_the_cells(client, session):
    running_section(session)

    page = client.get("/sections/EW1")

    shares = [float(row[2]) for row in rows_of(page, "Where the ampere-hours went")]
    assert sum(shares) == pytest.approx(100.0, abs=0.1)


def test_every_figure_shows_how_it_was_worked_out(client, session):
    running_section(session)

    page = client.get("/sections/EW1")

    said = words_of(page)
    assert "Metal for each kiloampere-hour, K 1.18549 kg/kAh K = M / (z F)" in said
    assert ["M", "63.5460", "g/mol", "IUPAC standard atomic weight"] in rows_of(
        page, "Inputs of: Metal for each kiloampere-hour, K"
    )


def test_each_day_of_the_period_is_a_line_of_the_table(client, session):
    running_section(session)

    page = client.get("/sections/EW1?from=2024-03-03&to=2024-03-05")

    days = rows_of(page, "Figures of each day")
    assert [row[0] for row in days] == ["Tue 5 Mar 2024", "Mon 4 Mar 2024", "Sun 3 Mar 2024"]
    assert days[1][1] == "93.0"


def test_an_outage_that_lasts_is_listed_as_such(client, session):
    section = running_section(session)
    make_outage(session, section.id, cells="3", to_ms=None, state="bypassed")

    page = client.get("/sections/EW1")

    assert rows_of(page, "Outages in the period")[0][:2] == ["3", "bypassed"]
    assert rows_of(page, "Outages in the period")[0][3] == "still"


def test_cells_are_listed_with_their_deposit_and_their_flag(client, session):
    running_section(session, low=(4,))

    rows = rows_of(client.get("/sections/EW1"), "Cells now")

    assert rows[0][:2] == ["1", "2.027"]
    assert rows[0][4] == "1 d 1 h"
    assert rows[3][-1] == "▼ short"


def test_a_section_without_records_shows_empty_figures_and_no_fault(client, session):
    make_section(session, name="EW1")

    page = client.get("/sections/EW1")

    assert page.status_code == 200
    assert page.text.count("There is nothing to draw in this period.") == 6
    assert "No current is recorded for this time." in page.text
    assert "No charge passed in this period." in page.text


def test_a_section_with_current_alone_shows_what_is_known(client, session):
    section = make_section(session, name="EW1")
    make_current(session, section.id, [NOW_MS], [36_000.0])

    assert client.get("/sections/EW1").status_code == 200


@pytest.mark.parametrize(
    ("path", "status"),
    [
        ("/sections/EW9", 404),
        ("/sections/EW1?from=soon", 422),
        ("/sections/EW1?from=2024-03-05&to=2024-03-01", 422),
    ],
)
def test_what_is_not_there_or_makes_no_sense_is_refused(client, session, path, status):
    make_section(session, name="EW1")

    assert client.get(path).status_code == status


def test_a_section_of_sixty_cells_weighs_less_than_forty_kilobytes(client, session):
    running_section(session, cells=60)

    page = client.get("/sections/EW1")

    assert int(page.headers["content-length"]) < 40_000


@pytest.mark.browser
def test_the_page_is_whole_on_a_desk_and_on_a_phone(page, phone, live_server, sign_in, session):
    running_section(session, low=(4,))

    for screen in (page, phone):
        sign_in(screen)
        screen.goto(live_server + "/sections/EW1")
        screen.wait_for_selector("#efficiency [data-drawn]")
        width = screen.evaluate("document.documentElement.scrollWidth - innerWidth")
        assert (width, accessibility_faults(screen)) == (0, [])


@pytest.mark.browser
def test_a_needle_is_reached_and_followed_with_the_keyboard(page, live_server, sign_in, session):
    running_section(session)
    sign_in(page)
    page.goto(live_server + "/sections/EW1")

    page.focus(".wide-floor a:nth-of-type(3)")
    page.keyboard.press("Enter")

    page.wait_for_url("**/sections/EW1/cells/3")
