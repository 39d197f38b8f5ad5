import html
import re
from urllib.parse import parse_qs, urlsplit

import pytest

from server.calculator.sums import SUMS
from tests.factories import make_house, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import rows_of, running_section, words_of


@pytest.fixture
def database_url(sqlite_url):
    """What is shown does not depend on the database."""
    return sqlite_url


SPANISH = {"accept-language": "es-CL,es;q=0.9"}


def field(page, name):
    """The tag of a field."""
    return re.search(rf'<(input|select)[^>]* name="{name}"[^>]*>', page.text)[0]


def value(page, name):
    """What stands in a field."""
    found = re.search(r' value="([^"]*)"', field(page, name))
    return html.unescape(found[1]) if found else ""


def main_of(page):
    """The words of the page's own part."""
    content = page.text.partition("<main")[2].partition("</main>")[0]
    return " ".join(html.unescape(re.sub(r"<[^>]+>", " ", content)).split())


def test_every_sum_is_listed_with_what_it_answers(client, session):
    make_section(session)

    page = client.get("/calculator")

    assert page.status_code == 200
    for name, found in SUMS.items():
        assert f'href="/calculator/{name}"' in page.text
        assert found.question in html.unescape(page.text)


def test_the_navigation_offers_it_to_every_role(client_of, session):
    make_section(session)

    assert 'href="/calculator"' in client_of("reader").get("/").text


@pytest.mark.parametrize("name", SUMS)
def test_every_sum_has_a_page_with_the_plant_s_values(client, session, name):
    running_section(session)

    page = client.get(f"/calculator/{name}")

    assert page.status_code == 200
    said = main_of(page)
    assert "How it was worked out" in said
    assert "Where its doubt is from" in said
    assert "Link with these inputs" in said
    assert 'aria-invalid="true"' not in page.text


def test_the_figure_stands_first_with_its_doubt(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/charge-to-mass")

    facts = re.search(r'<dl class="facts">(.*?)</dl>', page.text, re.DOTALL)[1]
    assert re.search(r"metal made, ±\u202f\d+</dt><dd>9\u2009526\u202fkg", facts)
    assert page.text.index('class="facts"') < page.text.index('class="inputs"')


def test_values_are_filled_in_with_where_they_are_from(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/charge-to-mass?section=A")

    assert value(page, "current_ka") == "36"
    assert value(page, "cells") == "10"
    assert "rated current, set-up" in main_of(page)
    assert 'placeholder="0.104"' in field(page, "u_current_ka")


def test_what_was_typed_is_what_the_link_carries(client, session):
    make_section(session, name="A")
    sent = {"section": "A", "current_ka": "30,5", "hours": "24", "cells": "10", "u_hours": ""}

    page = client.get("/calculator/charge-to-mass", params=sent)

    assert page.status_code == 303
    assert page.headers["location"] == "/calculator/charge-to-mass?section=A&current_ka=30.5"
    shown = client.get(page.headers["location"])
    assert shown.status_code == 200
    assert value(shown, "current_ka") == "30.5"
    assert "typed, in place of 36" in main_of(shown)
    assert 'href="?section=A&amp;current_ka=30.5"' in shown.text


def test_a_fault_stands_beside_its_field_and_what_was_typed_stays(client, session):
    make_section(session, name="A")
    sent = {"section": "A", "current_ka": "thirty", "hours": "48"}

    page = client.get("/calculator/charge-to-mass", params=sent)

    assert page.status_code == 422
    assert value(page, "current_ka") == "thirty"
    assert value(page, "hours") == "48"
    assert 'aria-invalid="true" aria-describedby="fault-current_ka' in field(page, "current_ka")
    fault = re.search(r'id="fault-current_ka">([^<]*)<', page.text)[1]
    assert html.unescape(fault) == (
        "“thirty” is not a number. Expected a number above 0, up to 1\u2009000 kA."
    )
    assert 'class="facts"' not in page.text


def test_a_fault_of_an_uncertainty_stands_there_too(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/charge-to-mass?section=A&u_current_ka=-1")

    assert 'id="fault-u_current_ka"' in page.text
    assert value(page, "u_current_ka") == "-1"


def test_an_unknown_key_is_named(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/charge-to-mass?section=A&currant_ka=3")

    assert page.status_code == 422
    assert "“currant_ka” is no input of this sum." in main_of(page)


def test_another_section_is_filled_in_and_what_was_typed_is_kept(client, session):
    make_section(session, name="A")
    make_section(session, name="B 2", rated_amps=18_000.0)

    page = client.get(
        "/calculator/charge-to-mass", params={"of": "section B 2", "hours": "48", "cells": ""}
    )

    where = urlsplit(page.headers["location"])
    assert parse_qs(where.query) == {"section": ["B 2"], "hours": ["48"]}
    assert value(client.get(page.headers["location"]), "current_ka") == "18"


def test_a_process_stands_in_for_a_section(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/energy-per-tonne", params={"of": "process zinc electrowinning"})
    shown = client.get(page.headers["location"])

    assert page.headers["location"] == "/calculator/energy-per-tonne?process=zinc+electrowinning"
    assert value(shown, "volts") == "3.4"
    assert "typical of the process" in main_of(shown)
    assert "Zinc electrowinning · zinc, 2 electrons" in main_of(shown)


def test_what_is_missing_is_asked_for(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/charge-to-mass?process=zinc+electrowinning")

    assert page.status_code == 200
    assert "Type what is missing: Current." in main_of(page)


def test_a_process_without_a_model_says_which_have_one(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/cell-voltage?process=lead+electrorefining")

    assert page.status_code == 200
    assert "There is no model of this for Lead electrorefining" in main_of(page)


def test_an_unknown_process_is_told_and_the_page_stays(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/charge-to-mass?process=copper+electrowining")

    assert page.status_code == 422
    assert "perhaps copper electrowinning" in main_of(page)


def test_more_metal_than_can_be_is_marked(client, session):
    make_section(session, name="A")
    sent = "section=A&net_kg=10160&current_ka=53.76&hours=156&cells=1"

    page = client.get(f"/calculator/efficiency-from-weight?{sent}")

    assert "cannot be" in main_of(page)
    assert 'class="note grave"' in page.text
    assert '<dd class="high">' in page.text


def test_a_short_warns_whoever_goes_there(client, session):
    running_section(session, low=(4,))

    said = main_of(client.get("/calculator/short-current"))

    assert "cell 4 against the median" in said
    assert "Voltage of the healthy cell" in said
    assert "Cell voltage" not in said
    assert "the site's procedure governs" in said


def test_the_terms_of_a_voltage_add_up(client, session):
    running_section(session)

    page = client.get("/calculator/cell-voltage")

    rows = rows_of(page, "What it is made of")
    assert len(rows) == 5
    assert sum(float(row[2]) for row in rows) == pytest.approx(100, abs=0.3)
    assert [row[0] for row in rows_of(page, "How it answers")] == [
        "100 A/m² more",
        "1 °C warmer",
        "10 g/L more acid",
        "10 g/L more metal",
        "1 mm more gap",
    ]


def test_anodes_are_chosen_in_the_form(client, session):
    make_section(session, name="A")

    page = client.get("/calculator/cell-voltage?section=A&anodes=coated")

    assert page.status_code == 200
    assert '<option value="coated" selected>' in page.text


def test_an_unknown_sum_is_no_page(client, session):
    make_section(session, name="A")

    assert client.get("/calculator/1").status_code == 404


def test_it_speaks_spanish_with_a_decimal_comma(client, session):
    running_section(session)

    page = client.get("/calculator/cell-voltage", headers=SPANISH)

    said = main_of(page)
    assert "Tensión de celda esperada" in said
    content = re.sub(r'(value|placeholder|href)="[^"]*"', "", page.text.partition("<main")[2])
    content = re.sub(r"<ul class=\"sources\">.*?</ul>", "", content, flags=re.DOTALL)
    assert re.findall(r"\d\.\d", content.partition("</main>")[0]) == []


def test_a_day_is_the_tankhouse_s(client, session):
    make_house(session, time_zone="America/Santiago")
    running_section(session)

    said = words_of(client.get("/calculator/efficiency-from-weight"))

    assert "lot L-2, pulled Mon 4 Mar 2024" in said


@pytest.mark.browser
@pytest.mark.parametrize("name", ["cell-voltage", "charge-to-mass"])
def test_a_phone_can_type_and_read_it(phone, live_server, sign_in, session, name):
    running_section(session)
    sign_in(phone, role="reader")

    phone.goto(f"{live_server}/calculator/{name}")
    phone.get_by_label("Current", exact=True).fill("30,5")
    phone.get_by_role("button", name="Work it out").click()
    phone.wait_for_url("**current_ka=30.5**")

    assert phone.get_by_label("Current", exact=True).input_value() == "30.5"
    assert phone.evaluate("document.documentElement.scrollWidth <= innerWidth")
    small = phone.evaluate(
        """() => [...document.querySelectorAll("main input:not([type=hidden]), main select,"
            + "main button, aside a")].filter(e => e.getBoundingClientRect().height < 48)
            .map(e => e.outerHTML.slice(0, 80))"""
    )
    assert small == []
    assert accessibility_faults(phone) == []


@pytest.mark.browser
@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_everyone_can_use_it_at_a_desk(open_page, live_server, sign_in, session, scheme):
    running_section(session)
    page = open_page(color_scheme=scheme)
    sign_in(page, role="reader")

    for path in ("/calculator", "/calculator/short-current", "/calculator/time-to-weight"):
        page.goto(live_server + path)
        assert accessibility_faults(page) == []


@pytest.mark.browser
def test_it_works_without_script(open_page, live_server, sign_in, session):
    running_section(session)
    make_section(session, name="B", rated_amps=18_000.0)
    page = open_page(java_script_enabled=False)
    sign_in(page, role="reader")

    page.goto(f"{live_server}/calculator/charge-to-mass")
    page.get_by_label("Values of").select_option("B")
    page.get_by_role("button", name="Fill in").click()

    assert page.url.endswith("/calculator/charge-to-mass?section=B")
    assert page.get_by_label("Current", exact=True).input_value() == "18"
