import numpy as np
import pytest

from server.storage.watch_rows import (
    OF_A_CELL,
    forget_states,
    keep_states,
    last_round,
    replace_rounds,
    rounds_between,
    state_before,
    thin_states,
)
from tests.factories import DAY_MS, HOUR_MS, NOW_MS, make_section

START_MS = NOW_MS // DAY_MS * DAY_MS


@pytest.fixture
def section_id(session):
    return make_section(session, cells=3).id


def a_round(hour, volts=2.0):
    """A round of three cells that takes an hour."""
    cells = np.zeros(3, OF_A_CELL)
    cells["at_ms"] = START_MS + hour * HOUR_MS + np.arange(3)
    cells["expected_v"] = volts
    cells["probability"] = 0.5
    return START_MS + hour * HOUR_MS, START_MS + (hour + 1) * HOUR_MS, 36e3, cells.tobytes()


def hours(rows):
    return [(row[0] - START_MS) // HOUR_MS for row in rows]


def test_rounds_come_back_as_they_were_written(session, section_id):
    replace_rounds(session, section_id, 0, 2**60, [a_round(0, 2.25)])

    ((started, ended, amps, cells),) = rounds_between(session, section_id, 0, 2**60)

    assert (started, ended, amps) == (START_MS, START_MS + HOUR_MS, 36e3)
    assert cells["at_ms"].tolist() == [START_MS, START_MS + 1, START_MS + 2]
    assert cells["expected_v"].tolist() == [2.25] * 3
    assert cells["probability"].tolist() == [0.5] * 3


def test_rounds_are_asked_for_by_when_they_began(session, section_id):
    replace_rounds(session, section_id, 0, 2**60, [a_round(hour) for hour in (0, 8, 16)])

    found = rounds_between(session, section_id, START_MS, START_MS + 16 * HOUR_MS)

    assert hours(found) == [0, 8]


def test_only_the_rounds_of_the_stretch_are_written_anew(session, section_id):
    replace_rounds(session, section_id, 0, 2**60, [a_round(hour) for hour in (0, 8, 16)])

    replace_rounds(
        session, section_id, START_MS + 8 * HOUR_MS, START_MS + 16 * HOUR_MS, [a_round(9)]
    )

    assert hours(rounds_between(session, section_id, 0, 2**60)) == [0, 9, 16]


def test_rounds_of_another_section_stay(session, section_id):
    other_id = make_section(session, cells=3).id
    for each in (section_id, other_id):
        replace_rounds(session, each, 0, 2**60, [a_round(0)])

    replace_rounds(session, section_id, 0, 2**60, [])

    assert hours(rounds_between(session, other_id, 0, 2**60)) == [0]


@pytest.mark.parametrize(("hour", "last"), [(0.5, None), (1, 0), (8.5, 0), (9, 8)])
def test_the_last_round_is_one_that_has_ended(session, section_id, hour, last):
    replace_rounds(session, section_id, 0, 2**60, [a_round(0), a_round(8)])

    found = last_round(session, section_id, START_MS + int(hour * HOUR_MS))

    assert (hours([found])[0] if found else None) == last


@pytest.fixture
def forty_days(session, section_id):
    """States of forty days, each remembered an hour before its day began."""
    days = [n * DAY_MS for n in range(40)]
    keep_states(
        session, section_id, [(day, day - HOUR_MS, b"%d" % (day // DAY_MS)) for day in days]
    )
    return section_id


def kept(session, section_id):
    days = []
    before_ms = 2**60
    while (found := state_before(session, section_id, before_ms)) is not None:
        days.append(found[0] // DAY_MS)
        before_ms = found[0] - 1
    return days[::-1]


def test_what_is_remembered_before_a_moment_is_the_newest_of_those_days(session, forty_days):
    found = state_before(session, forty_days, 7 * DAY_MS + 1)

    assert found == (7 * DAY_MS, 7 * DAY_MS - HOUR_MS, b"7")


def test_a_state_whose_last_round_had_not_ended_does_not_count(session, section_id):
    keep_states(session, section_id, [(0, -1, b"0"), (DAY_MS, 3 * DAY_MS, b"1")])

    assert state_before(session, section_id, 2 * DAY_MS)[2] == b"0"
    assert state_before(session, section_id, 3 * DAY_MS + 1)[2] == b"1"


def test_nothing_is_remembered_before_the_first_day(session, forty_days):
    assert state_before(session, forty_days, -1) is None


def test_days_after_a_moment_are_forgotten(session, forty_days):
    forget_states(session, forty_days, 30 * DAY_MS)

    assert kept(session, forty_days) == list(range(31))


def test_of_the_older_days_every_so_many_stay(session, forty_days):
    thin_states(session, forty_days, 16 * DAY_MS, 35 * DAY_MS)

    assert kept(session, forty_days) == [0, 16, 32, 35, 36, 37, 38, 39]
