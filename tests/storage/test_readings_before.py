import numpy as np

from server.storage.readings_before import last_believed
from tests.factories import make_readings, make_section

HOUR_MS = 3_600_000


def found(session, cells, reach_ms=100 * HOUR_MS, count=3):
    return list(
        zip(
            *(part.tolist() for part in last_believed(session, cells, reach_ms, count)), strict=True
        )
    )


def test_the_last_readings_before_a_moment_come_by_cell_and_time(session):
    section = make_section(session)
    one, two = section.cell_ids[:2]
    make_readings(
        session, one, [HOUR_MS * h for h in range(1, 7)], [2.0 + h / 10 for h in range(6)]
    )
    make_readings(session, two, [HOUR_MS * 2], [1.9])

    assert found(session, [(two, 5 * HOUR_MS), (one, 5 * HOUR_MS)]) == [
        (one, 2 * HOUR_MS, 2_100_000),
        (one, 3 * HOUR_MS, 2_200_000),
        (one, 4 * HOUR_MS, 2_300_000),
        (two, 2 * HOUR_MS, 1_900_000),
    ]


def test_older_readings_than_the_reach_are_left_out(session):
    cell = make_section(session).cell_ids[0]
    make_readings(session, cell, [HOUR_MS, 9 * HOUR_MS], [2.0, 2.1])

    assert found(session, [(cell, 10 * HOUR_MS)], reach_ms=2 * HOUR_MS) == [
        (cell, 9 * HOUR_MS, 2_100_000)
    ]


def test_a_doubted_reading_does_not_count_and_its_correction_does(session):
    cell = make_section(session).cell_ids[0]
    make_readings(session, cell, [HOUR_MS, 2 * HOUR_MS], [2013.0, 2014.0], suspect=1)
    make_readings(session, cell, [HOUR_MS], [2.013], revision=1)

    assert found(session, [(cell, 3 * HOUR_MS)]) == [(cell, HOUR_MS, 2_013_000)]


def test_nothing_is_found_where_nothing_was_read(session):
    cell = make_section(session).cell_ids[0]

    assert found(session, [(cell, HOUR_MS)]) == []
    assert found(session, []) == []


def test_many_cells_are_looked_up_at_once(session):
    section = make_section(session, cells=600)
    for cell in section.cell_ids[::100]:
        make_readings(session, cell, [HOUR_MS], [2.0])

    cells, at_ms, _ = last_believed(
        session, [(cell, 2 * HOUR_MS) for cell in section.cell_ids], 10 * HOUR_MS, 5
    )

    assert cells.tolist() == list(section.cell_ids[::100])
    assert np.all(at_ms == HOUR_MS)
