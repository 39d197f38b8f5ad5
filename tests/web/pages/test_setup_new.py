import pytest

from server.storage.plant import house
from tests.factories import make_section

NEW = {
    "name": "ZN1",
    "process": "zinc electrowinning",
    "cells": "36",
    "rows": "2",
    "cathodes_per_cell": "48",
    "cathode_area_m2": "2,4",
    "rated_current_ka": "55",
    "current_efficiency_pct": "90",
    "specific_energy_kwh_t": "3100",
    "low_volts": "3.0",
    "high_volts": "3.7",
    "meter_accuracy_mv": "2",
    "current_accuracy_pct": "0.5",
    "scale_accuracy_pct": "0.2",
    "metal_value_per_kg": "2.8",
    "why": "built this year",
}


@pytest.fixture(autouse=True)
def section(session):
    return make_section(session, name="EW1")


def sections(session):
    session.rollback()
    return {section.name: section for section in house(session).sections}


def test_a_section_is_added_with_its_cells(client, session):
    answer = client.post("/setup/new-section", data=NEW)

    added = sections(session)["ZN1"]
    assert answer.headers["location"].startswith("/setup/sections/ZN1")
    assert (added.metal, added.electrons, len(added.cell_ids)) == ("Zn", 2, 36)
    assert added.terms[0].cathode_area_m2 == 2.4
    assert added.terms[0].why == "built this year"


def test_another_process_names_its_metal(client, session):
    other = {"name": "IN1", "process": "other", "metal": "In", "electrons": "3"}

    client.post("/setup/new-section", data=NEW | other)

    added = sections(session)["IN1"]
    assert (added.process, added.metal, added.electrons) == ("other", "In", 3)


def test_the_metal_is_asked_for_another_process_alone(client, session):
    client.post("/setup/new-section", data=NEW | {"metal": "Cu", "electrons": "1"})

    assert sections(session)["ZN1"].metal == "Zn"


@pytest.mark.parametrize(
    ("changed", "sentence"),
    [
        ({"name": "ew1"}, "There is a section ew1 already."),
        ({"name": ""}, "Expected a name."),
        ({"cells": ""}, "Expected a number of cells, 1 or more."),
        ({"process": "tea making"}, "Expected"),
        ({"process": "other", "metal": ""}, "Expected"),
        ({"rows": "40"}, "Expected no more rows than cells, 36."),
        ({"why": ""}, "Say why it is added."),
    ],
)
def test_what_is_wrong_comes_back_with_what_was_typed(client, session, changed, sentence):
    page = client.post("/setup/new-section", data=NEW | changed)

    assert page.status_code == 422
    assert sentence in page.text
    assert 'name="cathode_area_m2" value="2,4"' in page.text
    assert list(sections(session)) == ["EW1"]


def test_it_takes_a_superintendent(client_of):
    assert client_of("planner").get("/setup/new-section").status_code == 403
