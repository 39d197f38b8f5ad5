"""The carpet of a section: fetched by its page once there are rounds."""

import numpy as np
import pytest

from tests.factories import (
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_readings,
    make_section,
)

WEEK = "from=2024-02-28&to=2024-03-05"


@pytest.fixture
def walked(session):
    """Six cells in six rounds, the fifth of them 80 mV low in the last one."""
    section = make_section(session, name="EW1", cells=6)
    at_ms = [NOW_MS - (50 - nth * 8) * HOUR_MS for nth in range(6)]
    make_current(session, section.id, [at_ms[0] - HOUR_MS, *at_ms, NOW_MS], [36_000.0] * 8)
    rng = np.random.default_rng(3)
    for number, cell_id in enumerate(section.cell_ids, start=1):
        volts = 2.0 + rng.normal(0, 0.002, 6)
        volts[-1] -= 0.08 if number == 5 else 0.0
        make_readings(session, cell_id, at_ms, volts.round(3))
    keep_books(session)
    return section


def test_the_carpet_has_a_row_for_each_cell(walked, client):
    figure = client.get(f"/sections/EW1/carpet?{WEEK}").json()

    (carpet,) = figure["data"]
    assert carpet["type"] == "heatmap"
    assert carpet["z"]["shape"].split(",")[0] == "6"
    assert carpet["hovertemplate"].startswith("Cell %{y}")


def test_the_page_names_where_its_carpet_is_only_where_there_is_one(walked, client, session):
    make_section(session, name="EW2")

    assert f'data-src="/sections/EW1/carpet?{WEEK.replace("&", "&amp;")}"' in (
        client.get(f"/sections/EW1?{WEEK}").text.replace("http://testserver", "")
    )
    assert "/carpet" not in client.get("/sections/EW2").text


def test_a_time_without_rounds_makes_an_empty_carpet(walked, client):
    answer = client.get("/sections/EW1/carpet?from=2024-01-01&to=2024-01-02")

    assert answer.status_code == 200


def test_the_carpet_of_a_section_that_is_not_there_is_refused(walked, client):
    assert client.get("/sections/EW9/carpet").status_code == 404


@pytest.mark.browser
def test_the_carpet_is_drawn_when_it_comes_into_view(page, live_server, sign_in, walked, session):
    sign_in(page)
    page.goto(f"{live_server}/sections/EW1?{WEEK}")

    page.locator("#carpet").scroll_into_view_if_needed()

    page.wait_for_selector("#carpet [data-drawn] .heatmaplayer image")
