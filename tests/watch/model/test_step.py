"""What a round says of each cell."""

import numpy as np
import pytest

from server.watch.model.state import ECHO_COUNT, ECHO_SUM, fresh_state
from server.watch.model.step import temper
from tests.watch.model.sections import NOISE_V, OHM, RATED_AMPS, facts, made_up, pull_every_week


@pytest.fixture(scope="module")
def months():
    """Three months of a healthy section."""
    section = made_up(rounds=270)
    pull_every_week(section)
    return section, section.replayed()


def test_probabilities_are_probabilities(months):
    for outcome in months[1].outcomes:
        assert ((outcome.probability >= 0) & (outcome.probability <= 1)).all()
    assert months[1].state.weight.sum(axis=1) == pytest.approx(np.ones(40))


def test_what_is_expected_and_what_is_off_make_the_reading(months):
    for outcome in months[1].outcomes:
        assert outcome.expected_v + outcome.deviation_v == pytest.approx(outcome.readings.volts)


def test_readings_of_healthy_cells_scatter_as_their_band_says(months):
    z = np.concatenate([one.deviation_v / one.band_v for one in months[1].outcomes[30:]])

    assert np.std(z) == pytest.approx(1.0, abs=0.08)
    assert abs(np.mean(z)) < 0.1
    assert np.mean(np.abs(z) < 1.96) == pytest.approx(0.95, abs=0.015)


def test_a_healthy_cell_is_expected_to_read_what_it_would_read(months):
    section, replayed = months
    truth = np.mean(section.volts[60:], axis=0)
    expected = np.mean([one.expected_v for one in replayed.outcomes[60:]], axis=0)

    assert expected == pytest.approx(truth, abs=0.002)


@pytest.mark.parametrize("share", [0.05, 0.1, 0.3])
def test_the_short_current_is_that_of_the_fallen_voltage(share):
    amps, u_amps = [], []
    for seed in range(6):
        section = made_up(seed, rounds=60)
        section.volts[40:, ::10] -= OHM * share * RATED_AMPS
        outcome = section.replayed().outcomes[50]
        amps += outcome.given_amps[::10].tolist()
        u_amps += outcome.u_given_amps[::10].tolist()

    truth = share * RATED_AMPS
    assert np.median(amps) == pytest.approx(truth, rel=0.2)
    assert np.mean(np.abs(np.array(amps) - truth) < 1.96 * np.array(u_amps)) >= 0.85


def test_the_short_current_weighs_every_size_by_how_likely_it_is(months):
    for outcome in months[1].outcomes[::10]:
        assert outcome.short_amps == pytest.approx(outcome.probability * outcome.given_amps)


def test_a_cell_alone_says_nothing_of_itself():
    section = made_up(rounds=41)
    section.volts[40, 1:] = np.nan
    before = section.replayed().outcomes[-1].probability[0]
    section.volts[40, 0] -= 0.3

    after = section.replayed().outcomes[-1].probability[0]

    assert after == pytest.approx(before)


def test_a_cell_that_is_new_to_the_section_is_no_short():
    section = made_up(rounds=60)
    section.volts[:40, 7] = np.nan
    section.volts[:, 7] -= 0.02

    replayed = section.replayed()

    assert replayed.outcomes[40].probability[7] < 0.5
    assert replayed.outcomes[-1].probability[7] < 0.5


def test_deviations_that_echo_the_last_ones_count_for_less():
    state = fresh_state(facts())

    assert temper(state) == 1.0
    state.shared[[ECHO_COUNT, ECHO_SUM]] = 60.0, 30.0
    assert temper(state) == pytest.approx((1 - 0.5) / (1 + 0.5))
    state.shared[ECHO_SUM] = -30.0
    assert temper(state) == 1.0


def test_a_wild_reading_is_doubted_before_a_level_is_moved():
    section = made_up(rounds=43)
    before = section.replayed().outcomes[-1].expected_v[7]
    section.volts[41, 7] += 100 * NOISE_V

    after = section.replayed().outcomes[-1].expected_v[7]

    assert after == pytest.approx(before, abs=NOISE_V)
