import re

import pytest

from tests.factories import make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import running_section, words_of


def test_every_section_shows_how_it_stands_and_its_floor(client, session):
    running_section(session)
    make_section(session, name="EW2", cells=4)

    page = client.get("/sections")

    said = words_of(page)
    assert "EW1 Copper electrowinning · 10 of 10 cells in service · 36.0 kA" in said
    assert "EW2 Copper electrowinning · 4 of 4 cells in service · no current logged" in said
    assert page.text.count('aria-label="Needles of') == 2


def test_a_flagged_cell_stands_out_with_its_number(client, session):
    running_section(session, low=(4,))

    page = client.get("/sections")

    assert re.search(r'<g class="flagged low">.*<text[^>]*>4</text></g>', page.text)
    assert 'aria-label="Needles of 10 cells; flagged: 4."' in page.text


def test_cells_that_were_never_read_are_dotted(client, session):
    make_section(session, name="EW1", cells=4)

    page = client.get("/sections")

    dotted = re.search(r'<path class="dotted" d="([^"]*)"', page.text)[1]
    assert dotted.count("M") == 4


def test_a_house_of_many_sections_weighs_less_than_forty_kilobytes(client, session):
    for number in range(25):
        make_section(session, name=f"S{number}", cells=60)

    page = client.get("/sections")

    assert int(page.headers["content-length"]) < 40_000


@pytest.mark.browser
def test_the_page_is_whole_on_a_desk_and_on_a_phone(page, phone, live_server, sign_in, session):
    running_section(session, low=(4,))

    for screen in (page, phone):
        sign_in(screen)
        screen.goto(live_server + "/sections")
        width = screen.evaluate("document.documentElement.scrollWidth - innerWidth")
        assert (width, accessibility_faults(screen)) == (0, [])
