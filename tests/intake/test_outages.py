import pytest

from tests.factories import DAY_MS, HOUR_MS, NOW_MS
from tests.intake.conftest import iso

FROM_MS = NOW_MS - 5 * DAY_MS
TO_MS = FROM_MS + 6 * HOUR_MS
FOREVER_MS = 2**53


def outage(cells="", from_ms=FROM_MS, to_ms=TO_MS, state=None, section="EW1"):
    return {
        "section": section,
        "cells": cells,
        "from": iso(from_ms),
        "to": "" if to_ms is None else iso(to_ms),
        "state": state or ("bypassed" if cells else "off"),
    }


def bypasses(books):
    return books.rows(
        "SELECT c.number, b.from_ms, b.to_ms FROM bypassed_cell b JOIN cell c ON c.id = b.cell_id"
        " ORDER BY c.number, b.from_ms"
    )


@pytest.mark.parametrize(
    ("row", "column"),
    [
        (outage(to_ms=FROM_MS), "to"),
        (outage(to_ms=FROM_MS - 1000), "to"),
        (outage(state="bypassed"), "cells"),
        (outage("11"), "cells"),
        (outage(state="resting"), "state"),
        (outage(section="EW9"), "section"),
        (outage(from_ms=NOW_MS + DAY_MS, to_ms=None), "from"),
        (outage(to_ms=NOW_MS + DAY_MS), "to"),
    ],
)
def test_an_outage_that_cannot_be_is_held(books, row, column):
    (result,) = books.records("outages", row)

    assert result.status == "held"
    assert books.rows("SELECT column_name FROM held_row") == [(column,)]


@pytest.mark.parametrize(
    "other",
    [
        outage("", TO_MS - 1000, TO_MS + HOUR_MS),
        outage("", FROM_MS - HOUR_MS, None),
        outage("", FROM_MS + HOUR_MS, TO_MS - HOUR_MS),
    ],
)
def test_two_outages_of_a_section_may_not_overlap(books, other):
    books.records("outages", outage())

    (result,) = books.records("outages", other)

    assert result.status == "held"
    assert "overlap" in result.reason


def test_two_bypasses_of_a_cell_may_not_overlap(books):
    books.records("outages", outage("1-3", to_ms=None))

    (result,) = books.records("outages", outage("3-5", TO_MS, TO_MS + HOUR_MS))

    assert result.status == "held"
    assert "cell 3" in result.reason
    assert "still lasts" in result.reason


@pytest.mark.parametrize(
    "other",
    [
        outage("", TO_MS, TO_MS + HOUR_MS),
        outage("", FROM_MS - HOUR_MS, FROM_MS),
        outage("2"),
        outage(section="ER1"),
    ],
)
def test_what_does_not_overlap_goes_in(books, other):
    books.records("outages", outage())

    (result,) = books.records("outages", other)

    assert result.status == "stored"


def test_bypasses_of_other_cells_may_overlap(books):
    results = books.records("outages", outage("1-3"), outage("4;5"))

    assert [result.status for result in results] == ["stored", "stored"]


def test_what_lasted_is_completed_without_a_reason(books):
    books.records("outages", outage("3", to_ms=None))

    (result,) = books.records("outages", outage("3"))

    assert result.status == "stored"
    assert books.rows("SELECT revision, to_ms FROM outage ORDER BY revision") == [
        (0, None),
        (1, TO_MS),
    ]
    assert bypasses(books) == [(3, FROM_MS, TO_MS)]


def test_the_open_row_again_does_not_open_what_was_completed(books):
    books.records("outages", outage("3", to_ms=None))
    books.records("outages", outage("3"))

    (result,) = books.records("outages", outage("3", to_ms=None))

    assert result.status == "duplicate"
    assert bypasses(books) == [(3, FROM_MS, TO_MS)]


def test_an_end_that_is_known_is_not_changed_without_a_reason(books):
    books.records("outages", outage())

    (result,) = books.records("outages", outage(to_ms=TO_MS + HOUR_MS))

    assert result.status == "held"


def test_bypasses_are_kept_by_cell(books):
    books.records(
        "outages",
        outage("1-2"),
        outage("2", TO_MS, TO_MS + HOUR_MS),
        outage("5", TO_MS, None),
        outage(""),
    )

    assert bypasses(books) == [
        (1, FROM_MS, TO_MS),
        (2, FROM_MS, TO_MS + HOUR_MS),
        (5, TO_MS, FOREVER_MS),
    ]


def test_a_cell_that_is_off_is_as_good_as_bypassed(books):
    books.records("outages", outage("4", state="off"))

    assert bypasses(books) == [(4, FROM_MS, TO_MS)]


def test_a_correction_changes_the_bypass(books):
    books.records("outages", outage("4"))

    books.records("outages", outage("4", to_ms=TO_MS + HOUR_MS), reason="later")

    assert bypasses(books) == [(4, FROM_MS, TO_MS + HOUR_MS)]


@pytest.mark.parametrize("cells", ["", "2"])
def test_the_time_of_an_outage_is_stale(books, cells):
    books.records("outages", outage(cells))

    assert books.stale() == [("EW1", "charge", FROM_MS, TO_MS + 1)]


def test_what_still_lasts_is_stale_up_to_now(books):
    books.records("outages", outage("2", to_ms=None))

    assert books.stale() == [("EW1", "charge", FROM_MS, NOW_MS + 1)]


def test_what_is_completed_is_stale_from_its_end(books):
    books.records("outages", outage("2", to_ms=None))
    books.settle()

    books.records("outages", outage("2"))

    assert books.stale() == [("EW1", "charge", TO_MS, NOW_MS + 1)]
