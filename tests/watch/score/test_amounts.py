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

MANY = replace(LARGE, per_crop=1.2)


@pytest.fixture(scope="module")
def plant():
    return make(Scenario("large", REFINING, cells=60, days=36, shorts=MANY), 1)


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


def test_flags_that_stand_on_after_the_short_cost_precision(plant):
    known = knowing(plant)
    flags = tuple(replace(flag, ended_ms=None) for flag in known.watched.flags)
    stated = np.where(plant.has_short, 1.0, 1e5)
    found = replace(known.watched, flags=flags, given_amps=stated)

    assert work_list([Case(plant, found)])[0] < 0.2
