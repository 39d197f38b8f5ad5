import pytest
from sqlalchemy import select

from server.storage.deliveries import HeldRow
from server.storage.records import Lot
from tests.factories import DAY_MS, HOUR_MS, NOW_MS, keep_books, make_lot, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import rows_of, running_section, words_of

FORM = {
    "section": "EW1",
    "lot": "B-7",
    "cells": "3-4",
    "pulled_at": "2024-03-05T09:00",
    "weighed_at": "2024-03-05T11:00",
    "started_at": "2024-02-27T09:00",
    "cathodes_per_cell": "",
    "net_kg": "13338,5",
    "starter_kg": "0",
}


def test_lots_are_listed_with_what_became_of_their_charge(client, session):
    running_section(session)

    page = client.get("/lots")

    first = rows_of(page, "Lots, the newest first")[0]
    assert first[:4] == ["L-2", "93.0 ± 0.3", "EW1", "2"]
    assert first[5:] == ["7 d", "60", "6 669", "0", "6 669", "6.2"]
    assert rows_of(page, "Efficiency of each section's lots")[0][:4] == [
        "EW1",
        "2",
        "93.01 ± 0.29",
        "93.0",
    ]


def test_one_section_is_chosen_in_the_address(client, session):
    running_section(session)
    other = make_section(session, name="EW2")
    make_lot(session, other.id, name="C-1")
    keep_books(session)

    page = client.get("/lots?section=EW1")

    assert [row[0] for row in rows_of(page, "Lots, the newest first")] == ["L-2", "L-1"]
    assert '<input type="hidden" name="section" value="EW1">' in page.text


def test_a_lot_heavier_than_its_charge_allows_is_marked_and_told(client, session):
    section = running_section(session)
    pulled_ms = NOW_MS - 2 * HOUR_MS
    make_lot(
        session,
        section.id,
        name="H-1",
        cells="5",
        pulled_ms=pulled_ms,
        started_ms=pulled_ms - 7 * DAY_MS,
        net_kg=7400.0,
    )
    keep_books(session)

    said = words_of(client.get("/lots"))

    assert "H-1 ▲ 103.2 more than its charge could make" in said


def test_an_operator_logs_a_lot(client_of, session):
    running_section(session)
    operator = client_of("operator")

    answer = operator.post("/lots", data=FORM)
    page = operator.get(answer.headers["location"])

    assert answer.status_code == 303
    assert "Lot B-7 is in the books." in page.text
    assert rows_of(page, "Lots, the newest first")[0][:2] == ["B-7", "93.0 ± 0.3"]


@pytest.mark.parametrize(
    ("changed", "at"),
    [
        ({"net_kg": "-3"}, "net_kg"),
        ({"net_kg": "heavy"}, "net_kg"),
        ({"cells": "3-44"}, "cells"),
        ({"pulled_at": "2024-03-05T11:30"}, "pulled_at"),
        ({"started_at": "2024-03-05T10:00"}, "started_at"),
        ({"cathodes_per_cell": "61"}, "cathodes_per_cell"),
        ({"lot": ""}, "lot"),
    ],
)
def test_what_is_wrong_stands_at_its_field_and_nothing_is_kept(client, session, changed, at):
    running_section(session)

    page = client.post("/lots", data=FORM | changed)

    assert page.status_code == 422
    assert f'id="fault-{at}"' in page.text
    assert page.text.count('id="fault-') == 1
    assert 'value="2024-03-05T09:00"' in page.text or "pulled_at" in changed
    assert session.scalar(select(HeldRow)) is None
    assert session.scalar(select(Lot).where(Lot.name == "B-7")) is None


def test_a_lot_that_is_in_the_books_with_another_weight_is_told(client, session):
    running_section(session)
    client.post("/lots", data=FORM)

    again = client.post("/lots", data=FORM)
    other = client.post("/lots", data=FORM | {"net_kg": "12000"})

    assert again.status_code == 303
    assert other.status_code == 422
    assert 'id="fault-net_kg"' in other.text


def test_a_reader_sees_the_lots_and_logs_none(client_of, session):
    running_section(session)
    reader = client_of("reader")

    assert "Log a lot" not in reader.get("/lots").text
    assert reader.post("/lots", data=FORM).status_code == 403


def test_a_period_without_lots_says_so(client, session):
    make_section(session, name="EW1")

    assert "No lot was pulled in this period." in client.get("/lots").text


@pytest.mark.browser
def test_the_page_is_whole_on_a_desk_and_on_a_phone(page, phone, live_server, sign_in, session):
    running_section(session)

    for screen in (page, phone):
        sign_in(screen)
        screen.goto(live_server + "/lots")
        width = screen.evaluate("document.documentElement.scrollWidth - innerWidth")
        assert (width, accessibility_faults(screen)) == (0, [])
