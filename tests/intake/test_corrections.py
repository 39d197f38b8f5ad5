import pytest

from server.intake.corrections import (
    correct_reading,
    withdraw_delivery,
    withdraw_reading,
    withdraw_record,
)
from server.storage.current import samples_between
from server.storage.errors import Conflict, NotFound
from tests.factories import DAY_MS, HOUR_MS, NOW_MS
from tests.intake.conftest import LEVELS, as_csv, iso, rounds
from tests.intake.test_take_in import SHEETS

AT_MS = NOW_MS - 6 * HOUR_MS


def withdraw_one(books, kind, **fields):
    with books.database.write() as session:
        withdraw_record(
            session, books.house, kind, fields, "ines", "wrong plant", NOW_MS + 1, books.settings
        )


def take_back(books, delivery_id, why="wrong file"):
    with books.database.write() as session:
        return withdraw_delivery(session, books.house, delivery_id, "ines", why, NOW_MS + 1)


def test_a_reading_is_corrected_and_the_former_kept(books):
    books.record("volts", at=iso(AT_MS), section="EW1", cell=3, volts=1.987)
    books.settle()

    with books.database.write() as session:
        correct_reading(session, books.house, "EW1", 3, AT_MS, 1.978, "ines", "misread", NOW_MS + 1)

    assert books.series().volts.tolist() == [1.978]
    assert books.rows("SELECT revision, microvolts FROM reading ORDER BY revision") == [
        (0, 1_987_000),
        (1, 1_978_000),
    ]
    assert books.stale() == [("EW1", "readings", AT_MS, AT_MS + 1)]


def test_a_withdrawn_reading_is_kept_and_does_not_count(books):
    books.record("volts", at=iso(AT_MS), section="EW1", cell=3, volts=1.987)

    with books.database.write() as session:
        withdraw_reading(session, books.house, "EW1", 3, AT_MS, "ines", "misread", NOW_MS)
    again = books.record("volts", at=iso(AT_MS), section="EW1", cell=3, volts=1.987)

    assert len(books.series()) == 0
    assert again.status == "duplicate"
    assert books.rows("SELECT COUNT(*) FROM reading") == [(2,)]


def test_what_is_not_stored_cannot_be_corrected(books):
    with books.database.write() as session, pytest.raises(NotFound):
        correct_reading(session, books.house, "EW1", 3, AT_MS, 1.978, "ines", "why", NOW_MS)


def test_what_is_stored_so_already_is_not_corrected(books):
    books.record("volts", at=iso(AT_MS), section="EW1", cell=3, volts=1.987)

    with books.database.write() as session, pytest.raises(Conflict, match="already"):
        correct_reading(session, books.house, "EW1", 3, AT_MS, 1.987, "ines", "why", NOW_MS)


@pytest.mark.parametrize(
    ("kind", "key", "table"),
    [
        ("volts", {"at": "first", "section": "EW1", "cell": "1"}, "reading"),
        ("current", {"at": "2024-03-04T00:00Z", "section": "EW1"}, "current_sample"),
        ("counter", {"at": "2024-03-04T00:00Z", "section": "EW1"}, "counter_sample"),
        ("lots", {"section": "EW1", "lot": "A1"}, "lot"),
        ("outages", {"section": "EW1", "cells": "5;2", "from": "2024-03-02T02:00Z"}, "outage"),
        (
            "electrolyte",
            {"at": "2024-03-04T06:00Z", "section": "EW1", "stream": "Feed"},
            "electrolyte_sample",
        ),
        (
            "finds",
            {"at": "2024-03-04T07:00Z", "section": "EW1", "cell": "3", "cathode": "12"},
            "find",
        ),
    ],
)
def test_a_record_of_any_sheet_is_withdrawn_by_its_key(books, kind, key, table):
    books.file(SHEETS[kind])
    if key.get("at") == "first":
        key = {**key, "at": SHEETS[kind].splitlines()[1].split(",")[0]}
    before = books.rows(f"SELECT COUNT(*) FROM {table}")[0][0]

    withdraw_one(books, kind, **key)

    assert books.rows(f"SELECT COUNT(*) FROM {table}") == [(before + 1,)]
    reasons = books.rows(
        f"SELECT d.sender, d.reason FROM {table} t JOIN delivery d ON d.id = t.delivery_id"
        " WHERE t.revision = 1"
    )
    assert reasons == [("ines", "wrong plant")]
    with pytest.raises(Conflict, match="already"):
        withdraw_one(books, kind, **key)


@pytest.mark.parametrize(
    ("kind", "key", "error"),
    [
        ("lots", {"section": "EW1", "lot": "Z9"}, NotFound),
        ("lots", {"section": "EW9", "lot": "A1"}, NotFound),
        ("lots", {"section": "EW1"}, Conflict),
        ("current", {"at": "yesterday", "section": "EW1"}, Conflict),
        ("current", {"at": "2024-03-04T00:00Z", "section": "EW1"}, NotFound),
        ("finds", {"at": "2024-03-04T00:00Z", "section": "EW1", "cell": "99"}, NotFound),
        ("finds", {"at": "2024-03-04T00:00Z", "section": "EW1", "cell": "x"}, Conflict),
        ("outages", {"section": "EW1", "cells": "5-2", "from": "2024-03-04T00:00Z"}, Conflict),
    ],
)
def test_a_key_that_leads_nowhere_is_told(books, kind, key, error):
    with pytest.raises(error):
        withdraw_one(books, kind, **key)


def test_a_withdrawn_bypass_puts_the_cell_back_in_service(books):
    books.file(SHEETS["outages"])
    books.settle()

    withdraw_one(books, "outages", section="EW1", cells="2;5", **{"from": "2024-03-02T02:00Z"})

    assert books.rows("SELECT COUNT(*) FROM bypassed_cell") == [(0,)]
    from_ms = NOW_MS - 3 * DAY_MS - 10 * HOUR_MS
    assert books.stale() == [("EW1", "charge", from_ms, NOW_MS + 2)]


@pytest.mark.parametrize("kind", SHEETS)
def test_a_whole_delivery_is_taken_back(books, kind):
    (delivery,) = books.file(SHEETS[kind]).deliveries
    before = books.contents()
    books.settle()

    count = take_back(books, delivery.delivery_id)

    assert count == delivery.stored
    assert len(books.series()) == 0
    after = books.contents()
    kept = {"bypassed_cell", "held_row", "suspicion"}
    assert all(set(before[t]) <= set(after[t]) for t in before if t not in kept)
    assert books.rows("SELECT sender, reason, stored FROM delivery ORDER BY id DESC")[0] == (
        "ines",
        "wrong file",
        count,
    )
    has_figures = kind not in ("electrolyte", "finds")
    assert bool(books.stale()) == has_figures


def test_taking_a_correction_back_restores_what_was_before(books):
    current = "at,section,current_ka\n2024-03-04T00:00Z,EW1,{}\n"
    books.file(current.format(35.9))
    (correction,) = books.file(current.format(34.9), reason="shunt").deliveries

    take_back(books, correction.delivery_id)

    with books.database.read() as session:
        _, amps = samples_between(session, books.house.section("EW1").id, 0, 2**53)
    assert amps.tolist() == [35_900.0]
    assert books.rows("SELECT revision FROM current_sample ORDER BY revision") == [(0,), (1,), (2,)]


def test_taking_a_corrected_lot_back_restores_the_weight(books):
    books.file(SHEETS["lots"])
    (correction,) = books.file(
        SHEETS["lots"].replace("2857.3", "2875.3"), reason="swapped"
    ).deliveries

    take_back(books, correction.delivery_id)

    assert books.rows("SELECT net_kg FROM lot WHERE name = 'A1' ORDER BY revision") == [
        (2857.3,),
        (2875.3,),
        (2857.3,),
    ]


def test_what_was_corrected_since_stays_when_its_first_delivery_is_taken_back(books):
    records = rounds("EW1", LEVELS, 2)
    (first,) = books.file(as_csv(records)).deliveries
    books.record("volts", **records[0] | {"volts": 2.1}, reason="misread")

    count = take_back(books, first.delivery_id)

    assert count == len(records) - 1
    assert books.series().volts.tolist() == [2.1]


def test_what_a_delivery_holds_and_doubts_goes_with_it(books):
    (delivery,) = books.file(
        "at,section,cell,volts\n2024-03-05T06:00Z,EW1,1,2013\n2024-03-05T06:00Z,EW9,1,2.0\n"
    ).deliveries

    take_back(books, delivery.delivery_id)

    assert books.rows("SELECT state, decided_why FROM suspicion") == [("withdrawn", "wrong file")]
    assert books.rows("SELECT state, decided_why FROM held_row") == [("dropped", "wrong file")]


def test_a_delivery_is_taken_back_once_and_with_a_reason(books):
    (delivery,) = books.file(SHEETS["volts"]).deliveries

    with pytest.raises(Conflict, match="reason"):
        take_back(books, delivery.delivery_id, why="")
    take_back(books, delivery.delivery_id)
    with pytest.raises(Conflict, match="nothing of this delivery"):
        take_back(books, delivery.delivery_id)
    with pytest.raises(NotFound):
        take_back(books, 999)
