import pytest

from server.intake.rounds import KEEP, SUGGESTED, TypedRound, take_in_round
from server.settings import Settings
from server.storage.deliveries import Delivery, HeldRow, Suspicion
from server.storage.plant import house
from server.storage.readings import between
from tests.factories import HOUR_MS, NOW_MS, make_house, make_readings, make_section

AT = "2024-03-05T11:00"
AT_MS = NOW_MS - HOUR_MS


@pytest.fixture
def section(session):
    """Ten cells that have read 2.03 V for three days."""
    section = make_section(session, name="EW1")
    rounds = range(NOW_MS - 72 * HOUR_MS, NOW_MS - 8 * HOUR_MS, 8 * HOUR_MS)
    for cell_id in section.cell_ids:
        volts = [2.03 + 0.002 * (place % 3 - 1) for place in range(len(rounds))]
        make_readings(session, cell_id, rounds, volts)
    return section


@pytest.fixture
def take_in(session, section):
    """Takes in a round typed into the form of EW1."""

    def send(**given):
        typed = TypedRound(**{"section": "EW1", "at": AT} | given)
        return take_in_round(session, house(session), typed, "ana", NOW_MS, Settings())

    return send


def stored(session, section):
    """What the round has stored, by cell."""
    series = between(session, section.cell_ids, AT_MS, AT_MS + 1)
    return {
        section.number_of(cell): (volts, bool(suspect))
        for cell, volts, suspect in zip(
            series.cell_id.tolist(), series.volts.tolist(), series.suspect.tolist(), strict=True
        )
    }


def test_a_round_is_stored_with_its_current(take_in, session, section):
    outcome = take_in(current="35.9", volts={1: "2.031", 2: " 2.029 ", 3: ""})

    assert outcome.is_taken
    assert (outcome.stored, outcome.suspect, outcome.known) == (2, 0, 0)
    assert outcome.has_current
    assert stored(session, section) == {1: (2.031, False), 2: (2.029, False)}
    assert {d.source for d in session.query(Delivery).where(Delivery.sender == "ana")} == {"form"}


def test_decimal_commas_are_read_where_they_are_typed_throughout(take_in, session, section):
    outcome = take_in(current="35,9", volts={1: "2,031"})

    assert outcome.decimal == ","
    assert stored(session, section) == {1: (2.031, False)}


def test_two_dialects_in_one_form_are_refused_at_the_fewer(take_in, session, section):
    outcome = take_in(volts={1: "2,031", 2: "2,029", 3: "2.03"})

    assert list(outcome.faults) == ["3"]
    assert "use one of them throughout" in outcome.faults["3"]
    assert stored(session, section) == {}


@pytest.mark.parametrize("text", ["2,o31", "1,234.5", "two", "nan", "inf", "1e3", "٢"])
def test_what_is_no_number_is_refused_as_it_was_typed(take_in, text):
    outcome = take_in(volts={4: text})

    assert outcome.faults == {"4": f"“{text}” is not a number."}


def test_nothing_typed_is_said(take_in):
    assert take_in(volts={1: " "}).faults == {"": "Nothing was typed."}


@pytest.mark.parametrize(
    ("at", "words"),
    [
        ("2024-03-05T15:00", "lies in the future"),
        ("", "at is empty"),
        ("2024-02-30T11:00", "is not in the calendar"),
    ],
)
def test_a_moment_that_cannot_be_is_refused(take_in, at, words):
    outcome = take_in(at=at, volts={1: "2.03"})

    assert words in outcome.faults["at"]


def test_a_local_time_that_came_twice_is_asked_about(session):
    make_house(session, time_zone="America/Santiago")
    make_section(session, name="EW1")
    typed = TypedRound("EW1", "2023-04-01T23:30", volts={1: "2.03"})

    outcome = take_in_round(session, house(session), typed, "ana", NOW_MS, Settings())

    assert "came twice" in outcome.faults["at"]
    assert outcome.offsets == ("2023-04-01T23:30:00-03:00", "2023-04-01T23:30:00-04:00")


def test_a_moment_with_its_offset_is_clear(session):
    make_house(session, time_zone="America/Santiago")
    make_section(session, name="EW1")
    typed = TypedRound("EW1", "2023-04-01T23:30:00-04:00", volts={1: "2.03"})

    outcome = take_in_round(session, house(session), typed, "ana", NOW_MS, Settings())

    assert outcome.is_taken


def test_a_slip_is_asked_about_and_nothing_is_stored_yet(take_in, session, section):
    outcome = take_in(current="36", volts={1: "2.031", 2: "2031"})

    assert not outcome.is_taken
    assert list(outcome.questions) == [2]
    assert outcome.questions[2].suggested == "2.031"
    assert stored(session, section) == {}
    assert session.query(Delivery).where(Delivery.sender == "ana").count() == 0


def test_what_was_probably_meant_is_taken_when_asked_for(take_in, session, section):
    outcome = take_in(volts={2: "2031"}, answers={2: SUGGESTED}, asked={2: "2031"})

    assert (outcome.stored, outcome.suspect) == (1, 0)
    assert stored(session, section) == {2: (2.031, False)}


def test_what_is_kept_as_it_is_stays_suspect(take_in, session, section):
    outcome = take_in(volts={2: "2031"}, answers={2: KEEP}, asked={2: "2031"})

    assert (outcome.stored, outcome.suspect) == (1, 1)
    assert stored(session, section) == {2: (2031.0, True)}
    assert session.query(Suspicion).count() == 1


def test_an_answer_holds_for_what_was_asked_alone(take_in):
    outcome = take_in(volts={2: "20310"}, answers={2: KEEP}, asked={2: "2031"})

    assert list(outcome.questions) == [2]


def test_the_same_round_twice_is_stored_once(take_in, session, section):
    take_in(current="36", volts={1: "2.031"})

    outcome = take_in(current="36", volts={1: "2.031"})

    assert outcome.is_taken
    assert (outcome.stored, outcome.known) == (0, 1)


def test_another_value_at_the_same_moment_is_a_fault_and_is_not_held(take_in, session, section):
    take_in(volts={1: "2.031"})

    outcome = take_in(volts={1: "2.04", 2: "2.03"})

    assert "volts is stored here as 2.031" in outcome.faults["1"]
    assert stored(session, section) == {1: (2.031, False)}
    assert session.query(HeldRow).count() == 0


def test_a_cell_that_is_not_there_is_a_fault(take_in):
    outcome = take_in(volts={11: "2.03"})

    assert list(outcome.faults) == ["11"]


def test_a_current_that_cannot_be_is_a_fault_at_its_field(take_in, session, section):
    outcome = take_in(current="-5", volts={1: "2.03"})

    assert list(outcome.faults) == ["current"]
    assert stored(session, section) == {}


def test_a_current_alone_may_be_logged(take_in):
    outcome = take_in(current="36.2")

    assert outcome.is_taken
    assert (outcome.stored, outcome.has_current) == (0, True)
