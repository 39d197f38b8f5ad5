"""Made-up plants: their physics, their faults and what people wrote of them."""

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest

from tests.source import ROOT, imports
from tests.watch.plants.making import make
from tests.watch.plants.scenario import DAY_MS, HOUR_MS, START_MS, Common, Pen, Scenario, Shorts
from tests.watch.plants.scenarios import ELECTROWINNING, REFINING, SCENARIOS


def scenario(name: str) -> Scenario:
    return next(s for s in SCENARIOS if s.name == name)


@pytest.fixture(scope="module")
def plain():
    return make(scenario("ew plain"), 1)


@pytest.fixture(scope="module")
def shorted():
    """A bath that never changes, in which shorts are many."""
    still = Common(temperature_k=0.0, daily_k=0.0, acid_v=0.0)
    return make(
        Scenario("ew shorted", ELECTROWINNING, common=still, shorts=Shorts(per_crop=0.5), days=40),
        3,
    )


def test_there_are_more_than_twenty_scenarios_of_three_processes():
    names = {s.name for s in SCENARIOS}

    assert len(names) == len(SCENARIOS) >= 20
    assert len({s.trade.process for s in SCENARIOS}) == 3


def test_nothing_is_taken_from_the_program():
    of_ours = [i.place for i in imports(ROOT / "tests") if i.imported.startswith("server")]

    assert [place for place in of_ours if "watch.plants" in place and "test_" not in place] == []


def test_the_same_seed_gives_the_same_plant_and_another_one_another(plain):
    again, other = make(plain.scenario, 1), make(plain.scenario, 2)

    np.testing.assert_array_equal(again.volts, plain.volts)
    assert again.shorts == plain.shorts
    assert other.shorts != plain.shorts


def test_a_short_lowers_the_voltage_by_the_current_that_the_plates_miss(shorted):
    there = shorted.has_short & shorted.in_service
    missed_v = (shorted.healthy_v - shorted.true_v)[there]
    expected_v = (shorted.resistance_ohm * shorted.short_at_reading_amps)[there]

    assert there.sum() > 200
    np.testing.assert_allclose(missed_v, expected_v, rtol=1e-9)


def test_a_sound_cell_reads_what_is_healthy(plain):
    sound = plain.in_service & ~plain.has_short & (plain.amps > 0.0)

    np.testing.assert_allclose(plain.true_v[sound], plain.healthy_v[sound], rtol=1e-12)


def test_readings_scatter_as_the_scenario_says(plain):
    scatter = (plain.volts - plain.true_v)[plain.is_read].std()

    assert scatter == pytest.approx(plain.scenario.noise_v, rel=0.05)


@pytest.mark.parametrize("rounding_v", [0.001, 0.005, 0.010])
def test_volts_are_written_to_the_step_of_the_pen(rounding_v):
    plant = make(Scenario("rounded", REFINING, days=5, pen=Pen(rounding_v=rounding_v)), 1)
    steps = plant.volts[np.isfinite(plant.volts)] / rounding_v

    np.testing.assert_allclose(steps, np.round(steps), atol=1e-6)


def test_shorts_come_late_in_a_crop(shorted):
    """The age at which one begins is that whose third power is even: 0.79 of a crop half of them.

    Some are cut off by the pull before they began, none before.
    """
    pulls = {(cell, p.pulled_ms): p.hung_ms for p in shorted.pulls for cell in p.cells}
    ages = [
        (short.from_ms - pulls[short.cell, short.to_ms]) / (7 * DAY_MS)
        for short in shorted.shorts
        if (short.cell, short.to_ms) in pulls
    ]

    assert len(ages) > 50
    assert 0.65 < np.median(ages) < 0.9


def test_a_sudden_short_takes_its_share_of_the_current_until_it_ends(shorted):
    often = [s.cell for s in shorted.shorts]
    alone = [
        s
        for s in shorted.shorts
        if s.is_sudden and s.from_ms > START_MS + DAY_MS and often.count(s.cell) == 1
    ]
    one = max(alone, key=lambda s: s.to_ms - s.from_ms)
    lasts_h = (one.to_ms - one.from_ms) / HOUR_MS
    taken_ah = shorted.short_ah(one.cell, one.from_ms, one.to_ms)

    assert taken_ah / lasts_h == pytest.approx(one.share * 36_000.0, rel=0.03)
    assert shorted.short_ah(one.cell, START_MS, shorted.end_ms) == pytest.approx(taken_ah)


def test_no_short_outlives_its_cathodes(shorted):
    pulled = [(cell, p.pulled_ms) for p in shorted.pulls for cell in p.cells]
    outlived = [
        (short, at_ms)
        for short in shorted.shorts
        for cell, at_ms in pulled
        if cell == short.cell and short.from_ms < at_ms < short.to_ms
    ]

    assert outlived == []


def test_the_ampere_hours_of_a_part_add_up_to_those_of_the_whole(shorted):
    cell = shorted.shorts[0].cell
    edges = [START_MS, START_MS + 12_345_678, START_MS + 9 * DAY_MS, shorted.end_ms]
    parts = [shorted.short_ah(cell, a, b) for a, b in pairwise(edges)]

    assert sum(parts) == pytest.approx(shorted.short_ah(cell, edges[0], edges[-1]))


def test_a_drift_of_one_sigma_a_week_goes_one_sigma_in_a_week():
    plant = make(scenario("ew drifts"), 1)
    one = next(d for d in plant.drifts if d.sigma_a_week == 1.0 and d.sense > 0)
    cell = one.cell - 1
    week = (plant.at_ms[:, cell] - one.from_ms) / (7 * DAY_MS)
    load = plant.amps[:, cell] / plant.scenario.trade.rated_amps
    sound = (week > 0.0) & (week < 3.0) & (load > 0.5) & ~plant.has_short[:, cell]
    gone_v = (plant.true_v - plant.healthy_v)[:, cell] / load

    slope = np.polyfit(week[sound], gone_v[sound], 1)[0]
    assert slope == pytest.approx(plant.scenario.noise_v, rel=0.02)


def test_some_trips_come_in_the_middle_of_a_walk():
    plant = make(scenario("ew trips and a new set-point"), 1)
    broken = (plant.amps == 0.0).any(axis=1) & (plant.amps > 0.0).any(axis=1)

    assert broken.sum() >= 5


def test_quiet_plants_have_no_fault():
    quiet = [make(s, 1) for s in SCENARIOS if s.is_quiet]

    assert len({p.scenario.trade.process for p in quiet}) == 3
    assert all(p.shorts == () and p.drifts == () and not p.short_amps.any() for p in quiet)


def test_every_fourth_cell_is_shorted_at_once():
    plant = make(scenario("er every fourth cell"), 1)

    assert plant.has_short.mean(axis=1).max() > 0.2


def test_slips_of_the_pen_are_rare_and_known():
    plant = make(scenario("ew slips of the pen"), 1)
    away = np.abs(plant.volts - plant.true_v) > 8 * plant.scenario.noise_v

    assert 5 < plant.is_wrong.sum() < 40
    assert not away[plant.is_read].any()


def test_bypassed_cells_are_out_and_come_back_empty():
    plant = make(scenario("zn re-hung and bypassed"), 1)
    out = ~plant.in_service

    assert len(plant.bypasses) == 10
    assert np.nanmax(plant.volts[out]) < 0.1
    assert not plant.short_at_reading_amps[out].any()


def test_a_scenario_without_errors_writes_none():
    plant = make(replace(scenario("er quiet"), days=5), 1)

    assert not plant.is_wrong.any()
