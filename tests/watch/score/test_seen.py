"""Measures of what was seen, on flags that a test sets itself."""

from dataclasses import replace

import numpy as np
import pytest

from tests.watch.plants.making import make
from tests.watch.plants.scenario import DAY_MS, HOUR_MS, Current, Drifts, Scenario
from tests.watch.plants.scenarios import ELECTROWINNING, LARGE, NONE
from tests.watch.score.seen import (
    act_per_shift,
    chatter,
    drifts_seen,
    false_flags,
    false_per_thousand,
    flagged_share,
    flags_after_events,
    run_length,
    steps_seen,
)
from tests.watch.score.watched import Case, Flag, Watched

DRIFTS = (Drifts("contact", cells=2, from_days=(5, 6)), Drifts("gap", cells=1, from_days=(5, 6)))


@pytest.fixture(scope="module")
def shorted():
    return make(Scenario("shorted", ELECTROWINNING, cells=40, days=24, shorts=LARGE), 1)


@pytest.fixture(scope="module")
def drifting():
    scenario = Scenario("drifting", ELECTROWINNING, cells=12, days=24, shorts=NONE, drifts=DRIFTS)
    return make(scenario, 1)


@pytest.fixture(scope="module")
def quiet():
    return make(Scenario("calm", ELECTROWINNING, cells=50, days=10, shorts=NONE), 1)


def case(plant, *flags):
    nothing = np.full(plant.at_ms.shape, np.nan)
    return Case(plant, Watched(tuple(flags), nothing, nothing, nothing, nothing))


def flag(cell, raised_ms, ended_ms=None, kind="short", tier="look"):
    return Flag(cell, kind, tier, raised_ms, ended_ms)


def all_of(plant):
    """A flag over every short, from its beginning to its end."""
    return [flag(s.cell, s.from_ms, s.to_ms) for s in plant.shorts]


def test_flags_over_every_short_hold_all_ampere_hours(shorted):
    assert flagged_share([case(shorted, *all_of(shorted))]) == pytest.approx(1.0)
    assert flagged_share([case(shorted)]) == 0.0


def test_a_stretch_under_two_flags_counts_once(shorted):
    flags = all_of(shorted)

    assert flagged_share([case(shorted, *flags, *flags)]) == pytest.approx(1.0)


def test_a_drift_flag_holds_no_ampere_hours(shorted):
    flags = [replace(f, kind="drift low") for f in all_of(shorted)]

    assert flagged_share([case(shorted, *flags)]) == 0.0


def test_half_of_a_steady_short_is_half_of_its_ampere_hours(shorted):
    one = max(shorted.shorts, key=lambda s: s.to_ms - s.from_ms)
    middle_ms = (one.from_ms + one.to_ms) // 2
    whole = flagged_share([case(shorted, flag(one.cell, one.from_ms, one.to_ms))])
    half = flagged_share([case(shorted, flag(one.cell, middle_ms, one.to_ms))])

    assert half / whole == pytest.approx(0.5, abs=0.05)


def test_a_flag_without_a_short_is_false(shorted):
    number, column = np.argwhere(shorted.has_short)[0]
    right = flag(int(column) + 1, int(shorted.at_ms[number, column]))
    number, column = np.argwhere(~shorted.has_short)[0]
    wrong = flag(int(column) + 1, int(shorted.at_ms[number, column]))
    found = case(shorted, right, wrong, flag(0, 0), replace(wrong, kind="suspect reading"))

    assert false_flags(found) == [wrong]
    assert false_per_thousand([found]) == pytest.approx(1000.0 / shorted.is_read.sum())


def test_a_drift_has_to_be_flagged_in_its_own_sense(drifting):
    up = next(d for d in drifting.drifts if d.sense > 0)
    down = next(d for d in drifting.drifts if d.sense < 0)
    later = [up.from_ms + 3 * DAY_MS, down.from_ms + 3 * DAY_MS]
    flags = [
        flag(up.cell, later[0], kind="drift high"),
        flag(up.cell, later[0], kind="drift low"),
        flag(down.cell, later[1], kind="drift low"),
        flag(down.cell, later[1], kind="short"),
        flag(down.cell, later[1], kind="drift high"),
    ]

    assert false_flags(case(drifting, *flags)) == [flags[1], flags[4]]


def test_drifts_are_seen_within_twelve_days_or_not(drifting):
    kinds = {1: "drift high", -1: "drift low"}
    soon, late = (
        [flag(d.cell, d.from_ms + days * DAY_MS, kind=kinds[d.sense]) for d in drifting.drifts]
        for days in (11, 13)
    )

    assert drifts_seen([case(drifting, *soon)]) == (1.0, 3)
    assert drifts_seen([case(drifting, *late)]) == (0.0, 3)


def test_steps_count_at_their_first_and_second_reading(shorted):
    at_first = case(shorted, *all_of(shorted))
    delayed = [
        flag(s.cell, int(column[column >= s.from_ms][0]) + 1, s.to_ms)
        for s in shorted.shorts
        for column in [shorted.at_ms[:, s.cell - 1]]
        if s.from_ms < column[-1]
    ]

    first, second, steps = steps_seen([at_first])
    assert (first, second) == (1.0, 1.0)
    assert steps > 20
    first, second, _ = steps_seen([case(shorted, *delayed)])
    assert first < 0.1
    assert second == 1.0
    assert steps_seen([case(shorted)])[:2] == (0.0, 0.0)


def test_flags_to_act_are_counted_for_a_shift_of_a_large_house(quiet):
    act = flag(1, int(quiet.at_ms[5, 0]), tier="act")
    found = case(quiet, act, replace(act, tier="look"))

    assert act_per_shift([found]) == pytest.approx(1.0)  # 50 cells over 30 shifts: 1,500
    assert run_length([found]) == pytest.approx(quiet.is_read.sum() / 2)
    assert run_length([case(quiet)]) == float("inf")


def test_a_flag_that_comes_back_within_three_rounds_chatters(quiet):
    cell, pull_ms = next(
        (p.cells[0], p.pulled_ms) for p in quiet.pulls if p.pulled_ms > quiet.at_ms[9].max()
    )
    before = flag(cell, pull_ms - 40 * HOUR_MS, pull_ms - 30 * HOUR_MS)
    soon, late = (replace(before, raised_ms=before.ended_ms + h * HOUR_MS) for h in (16, 29))
    on_others = replace(before, raised_ms=pull_ms + HOUR_MS)
    across = replace(before, ended_ms=pull_ms - 8 * HOUR_MS)

    assert chatter([case(quiet, before, soon)]) == 1
    assert chatter([case(quiet, before, late)]) == 0
    assert chatter([case(quiet, across, on_others)]) == 0
    assert chatter([case(quiet, before, replace(soon, kind="drift low"))]) == 0


def test_flags_of_two_rounds_after_an_event_are_counted():
    steps = Current(steps=((4.0, 0.9),), trip_days=1e9)
    plant = make(
        Scenario("stepped", ELECTROWINNING, cells=20, days=8, shorts=NONE, current=steps), 1
    )
    (event,) = plant.events
    during = [flag(cell, event.at_ms + 2 * HOUR_MS) for cell in (1, 2)]
    later = flag(3, event.at_ms + 30 * HOUR_MS)
    of_section = flag(0, event.at_ms + 2 * HOUR_MS, kind="section")

    assert flags_after_events([case(plant, *during, later, of_section)]) == (3, 3.0, 1)
