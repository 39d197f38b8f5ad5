"""What the readings teach, held against the truth of a made-up section."""

import numpy as np
import pytest

from server.watch.model.learn import onsets_per_crop
from server.watch.model.sizes import ONSETS_PER_CROP
from server.watch.model.state import RESISTANCE, RESISTANCE_VAR, fresh_state
from tests.watch.model.sections import NOISE_V, OHM, RATED_AMPS, facts, made_up, pull_every_week

CUTS = np.where(np.arange(90) % 3 == 2, 0.75, 1.0) * RATED_AMPS


@pytest.mark.parametrize("told", [0.7, 1.3])
def test_the_resistance_moves_to_the_truth_where_the_current_varies(told):
    known = facts(resistance_ohm=told * OHM, u_resistance_ohm=0.2 * OHM)

    shared = made_up(rounds=90, amps=CUTS).replayed(known).state.shared

    assert shared[RESISTANCE] == pytest.approx(OHM, rel=0.1)
    assert abs(shared[RESISTANCE] - OHM) < 3 * np.sqrt(shared[RESISTANCE_VAR])
    assert shared[RESISTANCE_VAR] < (0.1 * OHM) ** 2


def test_a_steady_current_teaches_nothing_of_the_resistance():
    known = facts(resistance_ohm=1.3 * OHM, u_resistance_ohm=0.2 * OHM)

    shared = made_up(rounds=90).replayed(known).state.shared

    assert shared[RESISTANCE] == 1.3 * OHM
    assert shared[RESISTANCE_VAR] == (0.2 * OHM) ** 2


def test_a_cell_read_twice_is_no_round_that_teaches():
    section = made_up(rounds=90, amps=CUTS)
    # One cell alone, shorted, an hour before every round and at another current.
    section.volts[::2, 1:] = np.nan
    section.volts[::2, 0] -= 0.3
    section.amps[::2] *= 0.5

    whole = section.replayed().state.shared
    section.volts[::2] = np.nan
    without = section.replayed().state.shared

    assert whole[RESISTANCE] == pytest.approx(without[RESISTANCE], rel=0.01)


@pytest.mark.parametrize("noise_v", [0.003, 0.006, 0.015])
def test_the_noise_is_that_of_the_readings(noise_v):
    section = made_up(rounds=200, noise_v=noise_v)
    pull_every_week(section)

    state = section.replayed().state

    assert np.median(state.noise_v) * np.sqrt(np.pi / 2) == pytest.approx(noise_v, rel=0.1)


def test_a_noisy_cell_is_known_as_one():
    section = made_up(rounds=200)
    section.volts[:, 4] += np.random.default_rng(2).normal(0, 3 * NOISE_V, 200)
    pull_every_week(section)

    state = section.replayed().state

    assert state.noise_v[4] > 1.5 * np.median(state.noise_v)


def test_before_any_pull_as_many_shorts_are_held_likely_as_the_trade_sees():
    assert np.sum(onsets_per_crop(fresh_state(facts()))) == pytest.approx(ONSETS_PER_CROP)


def test_pulls_teach_how_often_a_short_begins():
    rng = np.random.default_rng(6)
    healthy, shorted = made_up(rounds=300), made_up(rounds=300)
    for section in (healthy, shorted):
        pull_every_week(section)
    count = 0
    for place in range(40):
        for turn in range(3 * (-place % 7), 300 - 21, 21):
            if rng.random() < 0.25:
                shorted.volts[turn + 8 : turn + 21, place] -= 8 * NOISE_V
                count += 1

    few, many = (
        np.sum(onsets_per_crop(section.replayed().state)) for section in (healthy, shorted)
    )

    assert few < 0.4 * ONSETS_PER_CROP
    assert many == pytest.approx(0.25, rel=0.35)


def test_pulls_that_nobody_wrote_down_do_not_let_every_cell_be_held_for_shorted():
    outcome = made_up(rounds=300).replayed().outcomes[-1]

    assert outcome.probability.mean() < 0.04
