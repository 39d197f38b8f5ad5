"""The first watch: limits on a reading at rated current."""

import pytest

from server.storage.plant import house
from server.watch.flags import flags_between
from server.watch.worklist import worklist
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_readings,
    make_section,
    make_suspicion,
)

START_MS = NOW_MS - 5 * DAY_MS


@pytest.fixture
def section(session):
    """Four cells with limits of 1.85 V and 2.15 V, logged at rated current."""
    section = make_section(session, name="EW1", cells=4)
    hours = range(START_MS, NOW_MS + HOUR_MS, HOUR_MS)
    make_current(session, section.id, list(hours), [36_000.0] * len(hours))
    return section


def read(session, section, cell, volts, **given):
    """Readings of one cell, one a shift."""
    moments = [START_MS + 8 * HOUR_MS * n + 20_000 * cell for n in range(len(volts))]
    make_readings(session, section.cell_ids[cell - 1], moments, volts, **given)
    return moments


def flags(session):
    keep_books(session)
    return flags_between(session, house(session), 0, 2**53)


def test_a_quiet_section_raises_nothing(session, section):
    for cell in range(1, 5):
        read(session, section, cell, [2.0, 2.01, 2.0])

    assert flags(session) == []


def test_a_cell_under_its_limit_is_flagged_at_the_reading(session, section):
    for cell in (1, 2, 4):
        read(session, section, cell, [2.0] * 4)
    moments = read(session, section, 3, [2.0, 2.0, 1.8, 1.8])

    (flag,) = flags(session)

    assert (flag.section, flag.cell, flag.kind, flag.tier) == ("EW1", 3, "short", "look")
    assert flag.raised_ms == flag.raised_by_ms == moments[2]
    assert flag.ended_ms is None
    assert flag.expected_volts == pytest.approx(2.0)
    assert flag.deviation_v == pytest.approx(-0.2)
    assert flag.short_amps == pytest.approx(0.2 / 11e-6)
    assert "1.800 V" in flag.evidence


def test_a_flag_ends_at_the_second_reading_in_a_row_that_is_inside(session, section):
    moments = read(session, section, 1, [1.8, 2.0, 1.8, 2.0, 2.0, 2.0])

    (flag,) = flags(session)

    assert (flag.raised_ms, flag.ended_ms) == (moments[0], moments[4])


def test_a_cell_over_its_limit_drifts_high(session, section):
    read(session, section, 2, [2.0, 2.2])

    (flag,) = flags(session)

    assert flag.kind == "drift high"
    assert flag.short_amps is None


def test_a_set_point_cut_raises_nothing(session):
    section = make_section(session, name="EW1", cells=4)
    hours = range(START_MS, NOW_MS, HOUR_MS)
    make_current(session, section.id, list(hours), [18_000.0] * len(hours))
    for cell in range(1, 5):
        read(session, section, cell, [2.0 - 11e-6 * 18_000] * 3)

    assert flags(session) == []


def test_a_section_that_is_off_raises_nothing(session):
    section = make_section(session, name="EW1", cells=4)
    hours = range(START_MS, NOW_MS, HOUR_MS)
    make_current(session, section.id, list(hours), [0.0] * len(hours))
    read(session, section, 1, [0.9, 0.8])

    assert flags(session) == []


def test_a_cell_is_watched_where_no_current_is_logged(session):
    section = make_section(session, name="EW1", cells=4)
    read(session, section, 1, [2.0, 1.7])

    assert [flag.kind for flag in flags(session)] == ["short"]


def test_a_reading_that_is_not_believed_is_flagged_until_the_next_good_one(session, section):
    first = read(session, section, 1, [2.0])
    doubted_ms = first[0] + HOUR_MS
    make_readings(session, section.cell_ids[0], [doubted_ms], [2031.0], suspect=1)
    make_suspicion(session, section.id, section.cell_ids[0], at_ms=doubted_ms)
    make_readings(session, section.cell_ids[0], [doubted_ms + HOUR_MS], [2.0])

    (flag,) = flags(session)

    assert (flag.kind, flag.raised_ms) == ("suspect reading", doubted_ms)
    assert flag.ended_ms == doubted_ms + HOUR_MS
    assert flag.evidence == "a thousand times the cell's usual voltage"


def test_a_missing_reading_ends_nothing(session, section):
    read(session, section, 1, [2.0, 1.8])

    (flag,) = flags(session)

    assert flag.ended_ms is None


def test_the_list_of_work_is_costliest_first(session, section):
    for cell, volts in ((1, 1.84), (2, 2.0), (3, 1.70), (4, 2.2)):
        read(session, section, cell, [2.0, volts])
    keep_books(session)

    items = worklist(session, house(session), NOW_MS)

    assert [item.flag.cell for item in items] == [3, 1, 4]
    assert [item.rank for item in items] == [1, 2, 3]
    assert [item.walk for item in items] == [3, 1, 4]
