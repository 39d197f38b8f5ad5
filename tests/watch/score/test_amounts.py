"""Measures of stated currents and of the work list, on answers that a test sets itself."""

from dataclasses import replace

import numpy as np
import pytest

from tests.watch.plants.making import make
from tests.watch.plants.scenario import Scenario
from tests.watch.plants.scenarios import LARGE, REFINING
from tests.watch.score.amounts import (
    coverage,
    current_error,
    section_error,
    sections_within,
    stated_ah,
    work_list,
)
from tests.watch.score.watched import Case, Flag, Watched


@pytest.fixture(scope="module")
def plant():
    return make(Scenario("large", REFINING, cells=60, days=36, shorts=LARGE), 1)


def knowing(plant, factor=1.0, u_share=0.1):
    """A watch that knows every short, up to a factor."""
    amps = plant.short_at_reading_amps * factor
    flags = tuple(Flag(s.cell, "short", "act", s.from_ms, s.to_ms) for s in plant.shorts)
    return Case(plant, Watched(flags, amps, amps, amps * u_share, plant.healthy_v))


def test_the_error_is_that_of_the_stated_current(plant):
    assert current_error([knowing(plant)]) == pytest.approx(0.0, abs=1e-12)
    assert current_error([knowing(plant, factor=0.8)]) == pytest.approx(0.2)


def test_the_interval_holds_the_truth_or_not(plant):
    assert coverage([knowing(plant, factor=1.15)]) == 1.0
    assert coverage([knowing(plant, factor=1.3)]) == 0.0


def test_ampere_hours_of_a_section_are_met_by_one_that_knows(plant):
    assert section_error(knowing(plant)) == pytest.approx(0.0, abs=0.05)
    assert sections_within([knowing(plant), knowing(plant, factor=1.5)])[0] == 0.5


def test_a_steady_current_adds_up_to_its_hours(plant):
    steady = np.full(plant.at_ms.shape, 100.0)
    found = Case(plant, Watched((), steady, steady, steady, plant.healthy_v))
    most_ah = 100.0 * 36 * 24 * plant.cells

    # After a pull nothing is counted until the first reading, eight hours later at most.
    assert 0.95 * most_ah < stated_ah(found) < most_ah


def test_the_list_of_one_that_knows_is_in_the_right_order(plant):
    precision, gain = work_list([knowing(plant)])

    assert precision > 0.95
    assert gain > 0.98


def test_a_list_upside_down_gains_less(plant):
    known = knowing(plant)
    upside_down = replace(known.watched, given_amps=1e5 - known.watched.given_amps)

    assert work_list([Case(plant, upside_down)])[1] < work_list([known])[1] - 0.1


def test_a_false_flag_costs_precision(plant):
    known = knowing(plant)
    false = [
        Flag(cell, "short", "act", int(plant.at_ms[0, 0]), None)
        for cell in set(range(1, 61)) - {s.cell for s in plant.shorts}
    ]
    stated = known.watched.given_amps.copy()
    stated[:, [flag.cell - 1 for flag in false]] = 1e5
    found = replace(known.watched, flags=(*known.watched.flags, *false), given_amps=stated)

    assert false
    assert work_list([Case(plant, found)])[0] < work_list([known])[0]
