import pytest
from sqlalchemy.orm import Session

from server.intake.corrections import withdraw_record
from tests.factories import DAY_MS, NOW_MS, make_terms
from tests.intake.conftest import iso

PULLED_MS = NOW_MS - 5 * DAY_MS


def lot(name="A1", **given):
    """A lot of cells 1 to 3 that grew for a week."""
    return {
        "weighed_at": iso(PULLED_MS + DAY_MS),
        "lot": name,
        "section": "EW1",
        "cells": "1-3",
        "pulled_at": iso(PULLED_MS),
        "started_at": iso(PULLED_MS - 7 * DAY_MS),
        "cathodes_per_cell": 60,
        "net_kg": 2857.3,
        "starter_kg": 0,
    } | given


def test_a_lot_is_kept_as_it_was_weighed(books):
    books.records("lots", lot(cells="3; 1-2"))

    assert books.rows(
        "SELECT name, cells, pulled_ms, started_ms, cathodes_per_cell, net_kg FROM lot"
    ) == [("A1", "1-3", PULLED_MS, PULLED_MS - 7 * DAY_MS, 60, 2857.3)]


@pytest.mark.parametrize(
    ("given", "column"),
    [
        ({"started_at": iso(PULLED_MS)}, "started_at"),
        ({"started_at": iso(PULLED_MS + 1000)}, "started_at"),
        ({"weighed_at": iso(PULLED_MS - 1000)}, "pulled_at"),
        ({"net_kg": -5}, "net_kg"),
        ({"net_kg": "nan"}, "net_kg"),
        ({"net_kg": "1e400"}, "net_kg"),
        ({"net_kg": 0}, "net_kg"),
        ({"starter_kg": -1}, "starter_kg"),
        ({"starter_kg": 2857.3}, "net_kg"),
        ({"starter_kg": 3000}, "starter_kg"),
        ({"cells": "9-11"}, "cells"),
        ({"cells": ""}, "cells"),
        ({"cells": "3-1"}, "cells"),
        ({"cells": "1;1"}, "cells"),
        ({"cathodes_per_cell": 61}, "cathodes_per_cell"),
        ({"cathodes_per_cell": 0}, "cathodes_per_cell"),
        ({"section": "EW9"}, "section"),
        ({"lot": " "}, "lot"),
        ({"pulled_at": iso(NOW_MS + DAY_MS)}, "pulled_at"),
    ],
)
def test_a_lot_that_cannot_be_is_held(books, given, column):
    (result,) = books.records("lots", lot(**given))

    assert result.status == "held"
    ((held_column, reason),) = books.rows("SELECT column_name, reason FROM held_row")
    assert held_column == column
    assert column in reason or given.get("section", "") in reason
    assert books.rows("SELECT COUNT(*) FROM lot") == [(0,)]


@pytest.mark.parametrize(
    "other",
    [
        {"cells": "3-5"},
        {"cells": "2", "started_at": iso(PULLED_MS - DAY_MS), "pulled_at": iso(PULLED_MS)},
        {"started_at": iso(PULLED_MS - 1000), "pulled_at": iso(PULLED_MS + DAY_MS)},
        {"started_at": iso(PULLED_MS - 9 * DAY_MS), "pulled_at": iso(PULLED_MS - 6 * DAY_MS)},
        {"cathodes_per_cell": 1},
        {"started_at": None, "cathodes_per_cell": None},
    ],
)
def test_a_lot_of_cathodes_that_another_lot_has_is_held(books, other):
    books.records("lots", lot())

    (result,) = books.records("lots", lot("A2", **other))

    assert result.status == "held"
    assert "lot A1 of cell" in result.reason


@pytest.mark.parametrize(
    "other",
    [
        {"cells": "4-6"},
        {"started_at": iso(PULLED_MS), "pulled_at": iso(PULLED_MS + DAY_MS)},
        {"started_at": iso(PULLED_MS - 9 * DAY_MS), "pulled_at": iso(PULLED_MS - 7 * DAY_MS)},
        {"started_at": None, "pulled_at": iso(PULLED_MS + DAY_MS)},
        {"started_at": None, "pulled_at": iso(PULLED_MS - 7 * DAY_MS)},
        {"section": "ER1", "cathodes_per_cell": 60},
    ],
)
def test_a_lot_of_other_cathodes_goes_in(books, other):
    books.records("lots", lot())

    (result,) = books.records("lots", lot("A2", **{"weighed_at": iso(NOW_MS)} | other))

    assert result.status == "stored"


def test_two_halves_of_a_cell_may_grow_at_one_time_and_a_third_not(books):
    results = [
        books.records("lots", lot(name, cathodes_per_cell=30))[0].status
        for name in ("A1", "A2", "A3")
    ]

    assert results == ["stored", "stored", "held"]


def test_lots_of_one_file_are_held_against_each_other(books):
    results = books.records("lots", lot("A1"), lot("A2"), lot("A3", cells="4"))

    assert [result.status for result in results] == ["stored", "held", "stored"]


def test_a_corrected_lot_does_not_stand_in_its_own_way(books):
    books.records("lots", lot())

    (result,) = books.records("lots", lot(net_kg=2875.3), reason="digits swapped")

    assert result.status == "stored"
    assert books.rows("SELECT revision, net_kg FROM lot ORDER BY revision") == [
        (0, 2857.3),
        (1, 2875.3),
    ]


def test_a_withdrawn_lot_leaves_its_cathodes_to_others(books):
    books.records("lots", lot())
    fields = {"section": "EW1", "lot": "A1"}
    with books.database.write() as session:
        withdraw_record(
            session, books.house, "lots", fields, "mira", "typed twice", NOW_MS, books.settings
        )

    (result,) = books.records("lots", lot("A2"))

    assert result.status == "stored"


def test_cathodes_are_counted_as_they_hung_then(books):
    with Session(books.database.engine) as session:
        section_id = books.house.section("EW1").id
        make_terms(session, section_id, from_ms=PULLED_MS + DAY_MS, cathodes_per_cell=66)
    books.again()
    later = {
        "pulled_at": iso(NOW_MS),
        "weighed_at": iso(NOW_MS),
        "started_at": iso(PULLED_MS + DAY_MS),
    }

    results = [
        books.records("lots", some)[0].status
        for some in (lot(cathodes_per_cell=66), lot("A2", cathodes_per_cell=66, **later))
    ]

    assert results == ["held", "stored"]


def test_the_time_from_which_crops_change_is_stale(books):
    books.records("lots", lot(), lot("A2", cells="4", started_at=None))

    assert books.stale() == [("EW1", "lots", PULLED_MS - 7 * DAY_MS, PULLED_MS + 1)]


def test_a_lot_that_moved_makes_both_times_stale(books):
    books.records("lots", lot())
    books.settle()

    books.records(
        "lots",
        lot(started_at=iso(PULLED_MS - 9 * DAY_MS), pulled_at=iso(PULLED_MS - DAY_MS)),
        reason="wrong day",
    )

    assert books.stale() == [("EW1", "lots", PULLED_MS - 9 * DAY_MS, PULLED_MS + 1)]
