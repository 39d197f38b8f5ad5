import numpy as np
import pytest

from server.storage.plant import house
from server.storage.watch_rows import OF_A_CELL, replace_rounds
from server.watch.deviations import leans_now
from server.watch.worklist import worklist
from tests.factories import DAY_MS, HOUR_MS, NOW_MS, make_flag, make_section


@pytest.fixture
def section(session):
    return make_section(session, name="EW1", cells=5)


def keep_round(session, section, started_ms, **cells):
    """A round that said, of each cell named by its number: deviation, probability, amperes."""
    said = np.zeros(len(section.cell_ids), OF_A_CELL)
    for name, (deviation_v, probability, short_amps) in cells.items():
        number = int(name.removeprefix("c"))
        said[number - 1] = (
            started_ms + number * 1000,
            2.03,
            short_amps,
            150.0,
            deviation_v,
            0.008,
            probability,
        )
    row = (started_ms, started_ms + 10 * 60_000, 36_000.0, said.tobytes())
    replace_rounds(session, section.id, started_ms, started_ms + 1, [row])


def short(session, section, number, **given):
    return make_flag(
        session,
        section.id,
        section.cell_ids[number - 1],
        **{
            "kind": "short",
            "tier": "act",
            "short_amps": 600.0,
            "u_short_amps": 200.0,
            "lost_kg_per_day": 16.0,
            "lost_value_per_day": 130.0,
            "probability": 0.9,
            "raised_ms": NOW_MS - 10 * HOUR_MS,
        }
        | given,
    )


def test_an_item_has_the_numbers_of_the_cells_last_round(session, section):
    short(session, section, 2)
    keep_round(session, section, NOW_MS - 6 * HOUR_MS, c2=(-0.031, 0.98, 900.0))
    keep_round(session, section, NOW_MS - 2 * HOUR_MS, c1=(0.001, 0.001, 0.5))

    (item,) = worklist(session, house(session), NOW_MS)

    assert item.flag.short_amps == 600.0
    assert item.newest.updated_ms == NOW_MS - 6 * HOUR_MS + 2000
    assert item.newest.short_amps == pytest.approx(900.0 / 0.98, rel=1e-3)
    assert item.newest.u_short_amps == 150.0
    assert item.newest.deviation_v == pytest.approx(-0.031, rel=1e-3)
    assert item.newest.probability == pytest.approx(0.98, rel=1e-3)
    # 900 A for a day make 25.6 kg of copper where nothing else is lost.
    terms = house(session).section("EW1").terms_at(NOW_MS)
    assert item.newest.lost_kg_per_day == pytest.approx(
        25.6 * terms.target_current_efficiency, rel=2e-3
    )


def test_the_list_is_ranked_by_what_the_cells_cost_by_now(session, section):
    short(session, section, 1, lost_value_per_day=300.0)
    short(session, section, 2, lost_value_per_day=100.0)
    keep_round(
        session, section, NOW_MS - 6 * HOUR_MS, c1=(-0.01, 0.5, 100.0), c2=(-0.05, 1.0, 2000.0)
    )

    assert [item.flag.cell for item in worklist(session, house(session), NOW_MS)] == [2, 1]
    before = worklist(session, house(session), NOW_MS - 8 * HOUR_MS)
    assert [item.flag.cell for item in before] == [1, 2]
    assert before[0].newest.lost_value_per_day == 300.0


def test_a_cell_not_read_for_days_keeps_the_numbers_of_its_last_round(session, section):
    short(session, section, 3, raised_ms=NOW_MS - 9 * DAY_MS)
    keep_round(session, section, NOW_MS - 5 * DAY_MS, c3=(-0.02, 0.9, 500.0))

    (item,) = worklist(session, house(session), NOW_MS)

    assert item.newest.updated_ms == NOW_MS - 5 * DAY_MS + 3000


def test_what_is_no_short_gets_no_short_current(session, section):
    make_flag(session, section.id, section.cell_ids[0], raised_ms=NOW_MS - DAY_MS)
    keep_round(session, section, NOW_MS - HOUR_MS, c1=(0.12, 0.0, 0.0))

    (item,) = worklist(session, house(session), NOW_MS)

    assert item.newest.deviation_v == pytest.approx(0.12, rel=1e-3)
    assert item.newest.short_amps is None
    assert item.newest.lost_value_per_day is None


def test_needles_lean_by_the_last_round_over_its_band(session, section):
    keep_round(session, section, NOW_MS - 6 * HOUR_MS, c1=(-0.016, 0.1, 50.0), c2=(0.024, 0.0, 0.0))
    keep_round(session, section, NOW_MS - 2 * HOUR_MS, c1=(-0.04, 0.9, 500.0))

    found = leans_now(session, house(session), "EW1", NOW_MS)

    assert sorted(found) == [1, 2]
    assert found[1].times_noise == pytest.approx(-5.0, rel=2e-3)
    assert found[2].times_noise == pytest.approx(3.0, rel=2e-3)
    assert leans_now(session, house(session), "EW1", NOW_MS + 25 * HOUR_MS) == {}
