import pytest

from server.intake.plant_change import (
    add_section,
    change_house,
    change_section,
    plant_toml,
    section_fields,
)
from server.intake.plant_file import PlantFileWrong, found_plant, read_plant
from server.storage.errors import Conflict
from server.storage.plant import house
from tests.factories import DAY_MS, HOUR_MS, NOW_MS
from tests.intake.conftest import LEVELS, as_csv, iso, rounds
from tests.intake.test_plant_file import PLANT

FROM_MS = NOW_MS - DAY_MS


def change(books, changes, from_ms=FROM_MS, section="EW1", why="re-plated"):
    with books.database.write() as session:
        change_section(session, section, changes, from_ms, "ines", why, NOW_MS)
    books.again()


def terms(books, at_ms, section="EW1"):
    return books.house.section(section).terms_at(at_ms)


def test_a_change_holds_from_its_date_and_leaves_the_past(books):
    change(books, {"current_efficiency_pct": 95.0, "cathode_area_m2": 2.2})

    before, after = terms(books, FROM_MS - 1), terms(books, FROM_MS)
    assert (before.target_current_efficiency, before.cathode_area_m2) == (0.93, 2.0)
    assert after.target_current_efficiency == pytest.approx(0.95)
    assert after.cathode_area_m2 == 2.2
    assert (after.changed_by, after.why, after.changed_ms) == ("ines", "re-plated", NOW_MS)


def test_what_is_not_changed_stays(books):
    change(books, {"rated_current_ka": 38.0})

    before, after = terms(books, FROM_MS - 1), terms(books, FROM_MS)
    same = ("cells", "rows", "cathodes_per_cell", "low_volts", "high_volts", "walk_order")
    assert [getattr(before, name) for name in same] == [getattr(after, name) for name in same]
    assert after.rated_amps == 38_000
    assert after.differential_resistance_ohm == pytest.approx(11e-6, rel=1e-12)


def test_more_cells_are_numbered_on(books):
    change(books, {"cells": 14})

    assert len(books.house.section("EW1").cell_ids) == 14
    assert books.record("volts", at=iso(NOW_MS), section="EW1", cell=14, volts=2.0).status == (
        "stored"
    )


def test_a_change_makes_only_what_comes_after_it_stale(books):
    books.file(as_csv(rounds("EW1", LEVELS, 9)))
    books.record("current", at=iso(NOW_MS - 3 * DAY_MS), section="EW1", current_ka=35.9)
    books.record("current", at=iso(NOW_MS - HOUR_MS), section="EW1", current_ka=35.9)
    books.settle()

    change(books, {"rated_current_ka": 38.0})

    last_ms = int(books.series().at_ms.max())
    assert books.stale() == [
        ("EW1", "charge", FROM_MS, NOW_MS - HOUR_MS + 1),
        ("EW1", "readings", FROM_MS, last_ms + 1),
    ]


def test_a_change_before_another_holds_until_that_one(books):
    change(books, {"rated_current_ka": 38.0}, NOW_MS - DAY_MS)
    change(books, {"rated_current_ka": 37.0}, NOW_MS - 2 * DAY_MS)

    moments = (NOW_MS - 3 * DAY_MS, NOW_MS - 2 * DAY_MS, NOW_MS - DAY_MS)
    assert [terms(books, at).rated_amps for at in moments] == [36_000, 37_000, 38_000]


def test_what_was_planned_may_be_planned_anew(books):
    change(books, {"rated_current_ka": 38.0}, NOW_MS + DAY_MS)
    change(books, {"rated_current_ka": 37.0}, NOW_MS + DAY_MS)

    assert terms(books, NOW_MS + DAY_MS).rated_amps == 37_000


@pytest.mark.parametrize("from_ms", [0, FROM_MS])
def test_what_took_effect_is_not_replaced(books, from_ms):
    if from_ms:
        change(books, {"rated_current_ka": 38.0}, from_ms)

    with pytest.raises(Conflict, match="stays as it was"):
        change(books, {"rated_current_ka": 37.0}, from_ms)


@pytest.mark.parametrize(
    ("changes", "key"),
    [
        ({"cells": 0}, "cells"),
        ({"cell_volts": [2.2, 1.8]}, "targets.cell_volts"),
        ({"process": "zinc electrowinning"}, "process"),
        ({"name": "EW2"}, "name"),
        ({"colour": "green"}, "colour"),
        ({"walk_order": "1-99"}, "walk_order"),
    ],
)
def test_a_change_that_cannot_be_is_told(books, changes, key):
    with pytest.raises(PlantFileWrong) as wrong:
        change(books, changes)

    assert [fault.key for fault in wrong.value.faults] == [key]


def test_a_change_needs_a_reason(books):
    with pytest.raises(Conflict, match="reason"):
        change(books, {"cells": 12}, why="")


def test_the_price_of_energy_changes_from_a_date(books):
    with books.database.write() as session:
        change_house(
            session, {"energy_price_per_kwh": 0.12}, FROM_MS, "ines", "new contract", NOW_MS
        )
    books.again()

    prices = [books.house.terms_at(at).energy_price_per_kwh for at in (FROM_MS - 1, FROM_MS)]
    assert prices == [0.09, 0.12]
    assert books.house.shifts_at(FROM_MS) == books.house.shifts_at(FROM_MS - 1)
    assert books.stale() == []


def test_other_shifts_make_the_summaries_after_them_stale(books):
    books.file(as_csv(rounds("EW1", LEVELS, 9)))
    books.settle()
    shifts = [{"name": "day", "starts": "06:00"}, {"name": "night", "starts": "18:00"}]

    with books.database.write() as session:
        change_house(session, {"shifts": shifts}, FROM_MS, "ines", "twelve hours", NOW_MS)
    books.again()

    assert books.house.shifts_at(FROM_MS) == ((360, "day"), (1080, "night"))
    assert len(books.house.shifts_at(FROM_MS - 1)) == 3
    assert [row[:3] for row in books.stale()] == [("EW1", "readings", FROM_MS)]


@pytest.mark.parametrize(
    "changes",
    [
        {"time_zone": "Europe/Madrid"},
        {"currency": "x"},
        {"shifts": []},
        {"shifts": [{"name": "day", "starts": "06:00"}] * 2},
        {"energy_price_per_kwh": -1.0},
    ],
)
def test_a_change_of_the_house_that_cannot_be_is_told(books, changes):
    with books.database.write() as session, pytest.raises(PlantFileWrong):
        change_house(session, changes, FROM_MS, "ines", "why", NOW_MS)


def test_a_section_is_added_with_its_cells(books):
    fields = section_fields(books.house.section("EW1"), NOW_MS) | {"name": "EW2", "cells": 12}

    with books.database.write() as session:
        add_section(session, fields, NOW_MS, "ines", "new hall", NOW_MS)
    books.again()

    assert len(books.house.section("EW2").cell_ids) == 12
    with books.database.write() as session, pytest.raises(Conflict, match="already"):
        add_section(session, fields, NOW_MS, "ines", "again", NOW_MS)


def test_the_plant_written_out_founds_the_same_plant(database, sqlite_url):
    from server.storage.database import Database

    with database.write() as session:
        found_plant(session, read_plant(PLANT), NOW_MS, "ana")
    with database.read() as session:
        text = plant_toml(session, NOW_MS)
        first = [section_fields(plan, NOW_MS) for plan in house(session).sections]
    other = Database(sqlite_url + "-copy")
    other.upgrade()

    with other.write() as session:
        found_plant(session, read_plant(text), NOW_MS, "ana")

    with other.read() as session:
        assert [section_fields(plan, NOW_MS) for plan in house(session).sections] == first
        assert plant_toml(session, NOW_MS) == text
    other.close()
