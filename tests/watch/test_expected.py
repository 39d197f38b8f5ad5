import numpy as np
import pytest

from server.storage.plant import house
from server.storage.watch_rows import OF_A_CELL, has_rounds, replace_rounds
from server.watch.expected import carpet, expected_at
from tests.factories import HOUR_MS, NOW_MS, make_section


@pytest.fixture
def section(session):
    return make_section(session, name="EW1", cells=3)


def keep_rounds(session, section, deviations_v):
    """Rounds eight hours apart, of which each gives the deviations of its cells, V."""
    rows = []
    for nth, row in enumerate(deviations_v):
        started_ms = NOW_MS + nth * 8 * HOUR_MS
        cells = np.zeros(len(section.cell_ids), OF_A_CELL)
        for place, deviation_v in enumerate(row):
            if deviation_v is not None:
                cells[place] = (started_ms + place, 2.0 + nth, 0.0, 0.0, deviation_v, 0.01, 0.25)
        rows.append((started_ms, started_ms + 10, 36_000.0, cells.tobytes()))
    replace_rounds(session, section.id, NOW_MS, 2**60, rows)


def test_each_reading_gets_what_was_expected_of_it(session, section):
    keep_rounds(session, section, [[0.0, 0.0, 0.0], [0.0, None, 0.0], [0.0, 0.0, 0.0]])
    at_ms = NOW_MS + 1 + np.array([0, 3, 16]) * HOUR_MS

    found = expected_at(session, house(session).section("EW1"), 2, at_ms)

    assert found.expected_v.tolist() == pytest.approx([2.0, np.nan, 4.0], nan_ok=True)
    assert found.band_v[0] == pytest.approx(0.01, rel=1e-3)
    assert found.probability[0] == pytest.approx(0.25)


def test_a_cell_without_readings_gets_nothing(session, section):
    found = expected_at(session, house(session).section("EW1"), 2, np.zeros(0, np.int64))

    assert len(found.expected_v) == 0


def test_a_carpet_has_the_cells_by_rounds_and_blanks_where_none_was_read(session, section):
    keep_rounds(session, section, [[0.01, None, -0.03], [0.0, 0.02, 0.0]])

    woven = carpet(session, house(session).section("EW1"), NOW_MS, 2**60, 400)

    assert woven.times_band == pytest.approx(
        np.array([[1.0, 0.0], [np.nan, 2.0], [-3.0, 0.0]]), rel=2e-3, nan_ok=True
    )
    assert woven.deviation_v[2, 0] == pytest.approx(-0.03, rel=1e-3)
    assert np.diff(woven.started_ms).tolist() == [8 * HOUR_MS]


def test_a_thinned_carpet_keeps_of_each_cell_what_was_furthest_off(session, section):
    rounds = [[0.0, 0.001 * nth, None] for nth in range(10)]
    rounds[4][0], rounds[7][0] = -0.05, 0.07
    keep_rounds(session, section, rounds)

    woven = carpet(session, house(session).section("EW1"), NOW_MS, 2**60, 2)

    assert woven.times_band[0] == pytest.approx([-5.0, 7.0], rel=2e-3)
    assert woven.times_band[1] == pytest.approx([0.4, 0.9], rel=2e-3)
    assert np.isnan(woven.times_band[2]).all()
    assert woven.ended_ms[0] == NOW_MS + 4 * 8 * HOUR_MS + 10


def test_whether_there_is_a_round_is_known_without_reading_it(session, section):
    keep_rounds(session, section, [[0.0, 0.0, 0.0]])

    assert has_rounds(session, section.id, NOW_MS, NOW_MS + 1)
    assert not has_rounds(session, section.id, NOW_MS + 1, NOW_MS + HOUR_MS)
