import pytest

from server.storage.plant import house
from server.watch.deviations import deviations_now
from tests.factories import (
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_outage,
    make_readings,
    make_section,
)


@pytest.fixture
def section(session):
    """Ten cells at rated current, read an hour ago: 2.030 V, the last one 40 mV lower."""
    section = make_section(session, name="EW1", meter_accuracy_v=0.002)
    make_current(session, section.id, [NOW_MS - 2 * HOUR_MS, NOW_MS], [36_000.0, 36_000.0])
    for number, cell_id in enumerate(section.cell_ids, start=1):
        volts = 1.990 if number == 10 else 2.030
        make_readings(session, cell_id, [NOW_MS - HOUR_MS], [volts])
    keep_books(session)
    return section


def test_the_odd_cell_stands_apart_in_multiples_of_the_meters_accuracy(session, section):
    found = deviations_now(session, house(session), "EW1", NOW_MS)

    assert found[9].cell == 10
    assert found[9].deviation_v == pytest.approx(-0.040)
    assert found[9].times_noise == pytest.approx(-20.0)
    assert found[0].deviation_v == pytest.approx(0.0)


def test_readings_at_another_current_are_compared_at_rated_current(session):
    section = make_section(session, name="EW1", differential_resistance_ohm=10e-6)
    at_ms = [NOW_MS - 3 * HOUR_MS, NOW_MS - 2 * HOUR_MS, NOW_MS]
    make_current(session, section.id, at_ms, [36_000.0, 30_000.0, 30_000.0])
    for number, cell_id in enumerate(section.cell_ids, start=1):
        is_late = number > 5
        read_ms = NOW_MS - (1 if is_late else 3) * HOUR_MS
        make_readings(session, cell_id, [read_ms], [1.970 if is_late else 2.030])
    keep_books(session)

    found = deviations_now(session, house(session), "EW1", NOW_MS)

    assert [d.referred_v for d in found] == pytest.approx([2.030] * 10)


def test_a_reading_older_than_a_day_says_nothing(session, section):
    assert deviations_now(session, house(session), "EW1", NOW_MS + 24 * HOUR_MS) == []


def test_a_bypassed_cell_is_left_out(session, section):
    make_outage(session, section.id, cells="3", to_ms=None, state="bypassed")
    from server.intake.outages import refresh_bypasses

    refresh_bypasses(session, section)

    found = deviations_now(session, house(session), "EW1", NOW_MS)

    assert 3 not in [d.cell for d in found]


def test_three_cells_are_too_few_to_say_which_is_odd(session):
    section = make_section(session, name="EW1", cells=3)
    make_current(session, section.id, [NOW_MS - 2 * HOUR_MS, NOW_MS], [36_000.0, 36_000.0])
    for cell_id in section.cell_ids:
        make_readings(session, cell_id, [NOW_MS - HOUR_MS], [2.03])
    keep_books(session)

    assert deviations_now(session, house(session), "EW1", NOW_MS) == []
