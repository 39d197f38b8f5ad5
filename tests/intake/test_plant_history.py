from server.intake.plant_change import change_house, change_section
from server.intake.plant_history import house_history, section_history
from server.storage.plant import house
from tests.factories import NOW_MS, make_section


def test_the_first_terms_have_no_former_ones(session):
    (first,) = section_history(make_section(session))

    assert (first.from_ms, first.changes) == (0, ())


def test_each_step_says_what_it_changed_the_latest_first(session):
    make_section(session, name="EW1")
    change_section(session, "EW1", {"rated_current_ka": 34.0}, NOW_MS, "ana", "new bus", NOW_MS)
    change_section(session, "EW1", {"cells": 12}, NOW_MS + 1, "ben", "two more", NOW_MS)

    latest, middle, _first = section_history(house(session).section("EW1"))

    assert latest.changes == (("cells", 10, 12),)
    assert middle.changes == (("rated_current_ka", 36.0, 34.0),)
    assert (middle.from_ms, middle.changed_by, middle.why) == (NOW_MS, "ana", "new bus")


def test_prices_and_shifts_of_the_house_are_told_too(session):
    make_section(session)
    change_house(session, {"energy_price_per_kwh": 0.1}, NOW_MS, "ana", "new contract", NOW_MS)

    latest, _first = house_history(house(session))

    assert latest.changes == (("energy_price_per_kwh", 0.09, 0.1),)
