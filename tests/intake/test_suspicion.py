import pytest

from server.intake.suspicion import (
    confirm,
    correct,
    suspect_count,
    suspect_reading,
    suspect_readings,
    withdraw,
)
from server.storage.errors import Conflict, NotFound
from server.storage.readings import history
from tests.factories import NOW_MS

AT = "2024-03-05T06:00Z"
AT_MS = NOW_MS - 6 * 3_600_000


@pytest.fixture
def doubted(books):
    """One reading, in millivolts, that is not believed."""
    books.record("volts", at=AT, section="EW1", cell=3, volts=1987)
    books.settle()
    return books


def decide(books, decision, *given, why="looked at the meter"):
    with books.database.write() as session:
        (doubt,) = suspect_readings(session, books.house)
        decision(session, books.house, doubt.id, *given, "ines", why, NOW_MS + 1)


def revisions(books):
    with books.database.read() as session:
        return [row[:3] for row in history(session, books.cell("EW1", 3), AT_MS)]


def test_a_doubted_reading_tells_what_was_found_and_what_was_meant(doubted):
    with doubted.database.read() as session:
        (doubt,) = suspect_readings(session, doubted.house)
        assert suspect_reading(session, doubted.house, doubt.id) == doubt
        assert suspect_count(session) == 1

    assert (doubt.section, doubt.cell, doubt.at_ms, doubt.volts) == ("EW1", 3, AT_MS, 1987.0)
    assert (doubt.code, doubt.suggested_volts) == ("slipped_unit", 1.987)
    assert (doubt.source, doubt.state) == ("API", "open")


def test_doubts_are_asked_for_by_section(doubted):
    with doubted.database.read() as session:
        assert len(suspect_readings(session, doubted.house, section="EW1")) == 1
        assert suspect_readings(session, doubted.house, section="ER1") == []


@pytest.mark.parametrize(
    ("decision", "given", "state", "effective"),
    [
        (confirm, (), "confirmed", [1987.0]),
        (correct, (1.987,), "corrected", [1.987]),
        (withdraw, (), "withdrawn", []),
    ],
)
def test_a_decision_is_a_new_revision_that_counts(doubted, decision, given, state, effective):
    decide(doubted, decision, *given)

    assert doubted.series().believed().volts.tolist() == effective
    assert [row[0] for row in revisions(doubted)] == [0, 1]
    assert revisions(doubted)[0][1] == 1_987_000_000
    assert doubted.rows("SELECT state, decided_by, decided_why, decided_ms FROM suspicion") == [
        (state, "ines", "looked at the meter", NOW_MS + 1)
    ]
    assert doubted.rows("SELECT source, sender, reason FROM delivery ORDER BY id DESC")[0] == (
        state,
        "ines",
        "looked at the meter",
    )
    assert doubted.stale() == [("EW1", "readings", AT_MS, AT_MS + 1)]


def test_a_decision_is_made_once(doubted):
    with doubted.database.read() as session:
        (doubt,) = suspect_readings(session, doubted.house)
    decide(doubted, withdraw)

    with doubted.database.write() as session, pytest.raises(Conflict, match="withdrawn by ines"):
        confirm(session, doubted.house, doubt.id, "tomas", "fine", NOW_MS)


@pytest.mark.parametrize(("decision", "given"), [(correct, (1.987,)), (withdraw, ())])
def test_a_value_is_not_changed_without_a_reason(doubted, decision, given):
    with pytest.raises(Conflict, match="reason"):
        decide(doubted, decision, *given, why=" ")

    assert [row[0] for row in revisions(doubted)] == [0]


def test_a_correction_by_file_answers_the_doubt(doubted):
    doubted.record("volts", at=AT, section="EW1", cell=3, volts=1.987, reason="millivolts")

    assert doubted.rows("SELECT state, decided_by, decided_why FROM suspicion") == [
        ("corrected", "mira", "millivolts")
    ]
    assert doubted.series().believed().volts.tolist() == [1.987]


def test_a_doubt_that_never_was_is_not_found(books):
    with books.database.read() as session, pytest.raises(NotFound):
        suspect_reading(session, books.house, 7)
