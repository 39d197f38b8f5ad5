"""Charge of sections and cells from what was recorded."""

import numpy as np
import pytest

from server.accounts.charge import charge_record, charges_at, period_charge
from server.storage.current import keep_bypasses
from server.storage.plant import house
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_counter,
    make_current,
    make_outage,
    make_section,
    make_terms,
)

START_MS = NOW_MS - 10 * DAY_MS
KAH_C = 3.6e6


@pytest.fixture
def section(session):
    """Ten cells, ten days at 36 kA, logged every hour."""
    section = make_section(session)
    hours = np.arange(START_MS, NOW_MS, HOUR_MS)
    make_current(session, section.id, hours.tolist(), [36_000.0] * len(hours))
    return section


def test_each_cell_gets_the_charge_of_its_section(session, section):
    keep_books(session)

    charge = period_charge(session, section, START_MS, START_MS + DAY_MS)

    assert charge.section_c / KAH_C == pytest.approx(864)
    assert charge.cell_c / KAH_C == pytest.approx([864] * 10)


def test_a_bypassed_cell_gets_nothing_while_it_is_bypassed(session, section):
    bypass = (section.cell_ids[3], START_MS + DAY_MS, START_MS + DAY_MS + 6 * HOUR_MS)
    keep_bypasses(session, section.cell_ids, [bypass])
    keep_books(session)

    charge = period_charge(session, section, START_MS, START_MS + 2 * DAY_MS)

    expected = np.full(10, 1728.0)
    expected[3] -= 216
    assert charge.cell_c / KAH_C == pytest.approx(expected)


def test_a_section_that_is_off_passes_nothing(session, section):
    make_outage(session, section.id, from_ms=START_MS + HOUR_MS, to_ms=START_MS + 13 * HOUR_MS)
    keep_books(session)

    charge = period_charge(session, section, START_MS, START_MS + DAY_MS)

    assert charge.section_c / KAH_C == pytest.approx(432)
    assert charge.estimated_share == 0


def test_cells_that_were_added_count_from_their_day_on(session, section):
    make_terms(session, section.id, from_ms=START_MS + DAY_MS, cells=10)
    session.query(type(section.terms[0])).filter_by(section_id=section.id, from_ms=0).update(
        {"cells": 8}
    )
    session.commit()
    section = house(session).sections[0]
    keep_books(session)

    charge = period_charge(session, section, START_MS, START_MS + 2 * DAY_MS)

    assert charge.cell_c / KAH_C == pytest.approx([1728] * 8 + [864] * 2)


def test_a_gap_in_the_log_is_estimated_and_said_so(session):
    section = make_section(session)
    at_ms = [START_MS, START_MS + 12 * HOUR_MS, START_MS + 13 * HOUR_MS]
    make_current(session, section.id, at_ms, [30_000.0, 36_000.0, 36_000.0])
    keep_books(session)

    charge = period_charge(session, section, START_MS, START_MS + 14 * HOUR_MS)

    assert charge.section_c / KAH_C == pytest.approx(2 * 30 + 10 * 33 + 2 * 36)
    assert charge.estimated_share == pytest.approx(330 / 462)


def test_the_end_of_the_record_is_told(session, section):
    keep_books(session)

    charge = period_charge(session, section, NOW_MS - DAY_MS, NOW_MS + DAY_MS)

    assert charge.recorded_to_ms == NOW_MS + HOUR_MS
    assert charge.section_c / KAH_C == pytest.approx(864 + 36)


def test_before_the_record_there_is_no_charge(session, section):
    keep_books(session)

    charge = period_charge(session, section, START_MS - 5 * DAY_MS, START_MS)

    assert charge.section_c == 0


def test_the_counter_gives_the_charge_and_the_samples_its_shape(session):
    section = make_section(session)
    hours = np.arange(START_MS, START_MS + 2 * DAY_MS, HOUR_MS)
    make_current(session, section.id, hours.tolist(), [36_000.0] * 24 + [18_000.0] * 24)
    make_counter(
        session, section.id, [START_MS, START_MS + 46 * HOUR_MS], [0.0, 1.02 * 1260 * KAH_C]
    )
    keep_books(session)

    first, second = (
        period_charge(session, section, START_MS + day * DAY_MS, START_MS + (day + 1) * DAY_MS)
        for day in (0, 1)
    )

    assert first.section_c / KAH_C == pytest.approx(1.02 * 864)
    assert second.section_c / KAH_C == pytest.approx(1.02 * 396 + 36)


def test_looking_up_a_moment_agrees_with_the_loaded_record(session, section):
    keep_books(session)
    rng = np.random.default_rng(3)
    moments = np.sort(rng.integers(START_MS - DAY_MS, NOW_MS + DAY_MS, 50))

    record = charge_record(session, section.id, int(moments[0]), int(moments[-1]) + 1)

    looked_up = charges_at(session, section.id, moments.tolist())
    assert record.charge_at(moments)[0].tolist() == [charge_c for charge_c, _ in looked_up]
