"""Cells that deserve a planned stop: which, and what the repair should bring."""

import pytest

from server.science.units import kwh_from_joules
from server.storage.plant import house
from server.watch.planned import planned_stops
from server.watch.worklist import worklist
from tests.factories import DAY_MS, HOUR_MS, NOW_MS, make_flag, make_section
from tests.web.pages.running import running_section

MONTHLY_C = 36_000.0 * (7 * 86_400 + 13 * 3_600) / 8 * 30
"""36 kA since 11:00 of the day before the last seven whole ones, a day, in 30 days."""


@pytest.fixture
def section(session):
    return running_section(session)


def planned(session):
    plant = house(session)
    return planned_stops(session, plant, worklist(session, plant, NOW_MS), NOW_MS)


def flag(session, section, cell, days_ago, lasted_days=None, **given):
    raised_ms = NOW_MS - days_ago * DAY_MS
    ended_ms = None if lasted_days is None else raised_ms + lasted_days * DAY_MS
    return make_flag(
        *(session, section.id, section.cell_ids[cell - 1]),
        raised_ms=raised_ms,
        ended_ms=ended_ms,
        **{"deviation_v": 0.1} | given,
    )


def test_a_drift_high_that_is_open_for_more_than_a_week_deserves_a_stop(session, section):
    flag(session, section, 3, 40)
    flag(session, section, 4, 7)

    (stop,) = planned(session)

    assert (stop.section, stop.cell, stop.flags) == ("EW1", 3, 1)
    assert stop.since_ms == stop.last_ms == NOW_MS - 40 * DAY_MS


def test_the_gain_is_the_voltage_by_now_times_a_month_s_charge(session, section):
    flag(session, section, 3, 8, deviation_v=0.5)

    (stop,) = planned(session)

    # The rounds since say how high the cell reads by now; the flag's own number is older.
    assert stop.deviation_v is not None
    assert abs(stop.deviation_v) < 0.05
    assert stop.gain_j_per_month == pytest.approx(max(stop.deviation_v, 0.0) * MONTHLY_C)
    assert stop.gain_kg_per_month is None


def test_three_drifts_in_ninety_days_deserve_one_though_none_is_open(session, section):
    for days_ago in (80, 50, 20):
        flag(session, section, 5, days_ago, lasted_days=3)
    for days_ago in (95, 60, 30):
        flag(session, section, 6, days_ago, lasted_days=3)

    (stop,) = planned(session)

    assert (stop.cell, stop.flags, stop.since_ms) == (5, 3, None)
    assert stop.last_ms == NOW_MS - 20 * DAY_MS
    # 0.1 V for 9 of 90 days.
    assert kwh_from_joules(stop.gain_j_per_month) == pytest.approx(
        0.1 * MONTHLY_C * 0.1 / 3.6e6, rel=1e-9
    )


def test_a_short_in_the_same_cell_adds_the_metal_it_takes(session, section):
    for days_ago in (80, 50, 20):
        flag(session, section, 5, days_ago, lasted_days=3)
    make_flag(
        *(session, section.id, section.cell_ids[4]),
        kind="short",
        raised_ms=NOW_MS - HOUR_MS,
        lost_kg_per_day=24.0,
    )

    (stop,) = planned(session)

    assert stop.gain_kg_per_month == pytest.approx(720.0)


def test_other_kinds_and_other_cells_do_not_count(session, section):
    for days_ago in (80, 50, 20):
        flag(session, section, 5, days_ago, lasted_days=3, kind="drift low")
    for cell, days_ago in ((1, 80), (2, 50), (3, 20)):
        flag(session, section, cell, days_ago, lasted_days=3)

    assert planned(session) == []


def test_without_a_recorded_charge_no_gain_is_told(session):
    section = make_section(session)
    flag(session, section, 3, 40)

    (stop,) = planned(session)

    assert stop.deviation_v == 0.1
    assert stop.gain_j_per_month is None


def test_the_cell_that_gains_most_comes_first(session, section):
    for cell, volts in ((5, 0.05), (6, 0.15), (7, 0.1)):
        for days_ago in (80, 50, 20):
            flag(session, section, cell, days_ago, lasted_days=3, deviation_v=volts)

    assert [stop.cell for stop in planned(session)] == [6, 7, 5]
