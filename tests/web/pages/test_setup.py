import pytest

from server.intake.plant_file import read_plant
from tests.factories import NOW_MS, make_section, make_terms
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import rows_of, words_of


@pytest.fixture
def section(session):
    return make_section(session, name="EW1")


def test_the_plant_is_shown_in_the_units_of_its_file(client_of, section):
    page = client_of("reader").get("/setup")

    said = words_of(page)
    assert "Name North House Time zone UTC" in said
    assert "night 00:00 · day 08:00 · evening 16:00" in said
    assert "0.09 USD/kWh" in said
    assert rows_of(page, "Sections") == [
        ["EW1", "Copper electrowinning", "10", "2", "60", "2", "36", "93", "1 950",
         "1.85 – 2.15", "the start"]
    ]  # fmt: skip
    assert "Add a section" not in said


def test_terms_of_the_future_are_not_shown_as_those_of_now(client, section, session):
    make_terms(session, section.id, from_ms=NOW_MS + 1, rated_amps=30_000.0)

    (row,) = rows_of(client.get("/setup"), "Sections")

    assert row[6] == "36"


def test_the_plant_can_be_had_as_a_file(client_of, section):
    answer = client_of("reader").get("/setup/plant.toml")

    plant = read_plant(answer.text)
    assert answer.headers["content-disposition"] == 'attachment; filename="plant.toml"'
    assert plant.tankhouse.name == "North House"
    assert plant.section[0].targets.cell_volts == (1.85, 2.15)


@pytest.mark.browser
@pytest.mark.parametrize(
    "path", ["/setup", "/setup/house", "/setup/sections/EW1", "/setup/new-section"]
)
def test_the_set_up_is_open_to_all(page, phone, live_server, sign_in, section, session, path):
    for browser_page in (page, phone):
        session.rollback()
        sign_in(browser_page)
        browser_page.goto(live_server + path)

        assert accessibility_faults(browser_page) == []
        assert browser_page.evaluate("document.documentElement.scrollWidth <= innerWidth")
