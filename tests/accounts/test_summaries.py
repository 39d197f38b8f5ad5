"""Readings summed up by hour, shift and day."""

import pytest

from server.accounts.summaries import unpacked
from server.storage.direct import fetch_rows
from server.storage.summaries import energy_cells
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_readings,
    make_section,
)

MIDNIGHT_MS = NOW_MS // DAY_MS * DAY_MS


@pytest.fixture
def section(session):
    """Three cells; the first is read twice in the night shift, the second once, the third never."""
    section = make_section(session, cells=3)
    make_readings(
        session,
        section.cell_ids[0],
        [MIDNIGHT_MS + HOUR_MS, MIDNIGHT_MS + HOUR_MS + 60_000],
        [2.0, 2.1],
    )
    make_readings(session, section.cell_ids[1], [MIDNIGHT_MS + 9 * HOUR_MS], [1.9])
    keep_books(session)
    return section


def summaries(session, level):
    return fetch_rows(
        session,
        "SELECT start_ms, name, cells_read, readings, sum_uv, cells FROM summary"
        " WHERE level = ? ORDER BY start_ms",
        (level,),
    )


def told(cells):
    return [
        (int(c["readings"]), int(c["least_uv"]), int(c["greatest_uv"]), int(c["sum_uv"]))
        for c in unpacked(cells)
    ]


def test_a_shift_tells_what_each_of_its_cells_read(session, section):
    night, day = summaries(session, "shift")

    assert night[:5] == (MIDNIGHT_MS, "night", 1, 2, 4_100_000)
    assert told(night[5]) == [(2, 2_000_000, 2_100_000, 4_100_000)]
    assert day[:5] == (MIDNIGHT_MS + 8 * HOUR_MS, "day", 1, 1, 1_900_000)
    assert told(day[5]) == [(0, 0, 0, 0), (1, 1_900_000, 1_900_000, 1_900_000)]


def test_a_day_tells_of_all_its_shifts(session, section):
    ((start_ms, name, cells_read, readings, sum_uv, _),) = summaries(session, "day")

    assert (start_ms, name, cells_read, readings, sum_uv) == (MIDNIGHT_MS, "", 2, 3, 6_000_000)


def test_an_hour_of_single_readings_is_its_own_summary(session, section):
    assert [row[0] for row in summaries(session, "hour")] == [MIDNIGHT_MS + HOUR_MS]


def test_energy_is_kept_by_cell(session, section):
    hours = list(range(MIDNIGHT_MS, MIDNIGHT_MS + DAY_MS, HOUR_MS))
    make_current(session, section.id, hours, [36_000.0] * 24)
    keep_books(session)

    days = dict(energy_cells(session, section.id, MIDNIGHT_MS, MIDNIGHT_MS + DAY_MS))

    charge_c, energy_j = days[MIDNIGHT_MS].T
    assert charge_c == pytest.approx([36_000 * 86_400] * 3)
    assert energy_j[1] / charge_c[1] == pytest.approx(1.9)
    # A cell that is never read is given the median of the others.
    assert 1.9 < energy_j[2] / charge_c[2] < 2.1
