import numpy as np
import pytest

from server.demo.house import truth_house
from server.demo.rounds import swapped_digits


@pytest.mark.parametrize(
    ("meant", "decimals", "written"),
    [(2.035, 3, 2.305), (0.291, 3, 0.921), (3.332, 3, 3.323), (3.35, 2, 3.53), (2.11, 2, 1.21)],
)
def test_two_neighbouring_digits_change_places(meant, decimals, written):
    assert swapped_digits(meant, decimals) == written


def test_a_round_is_walked_from_the_first_cell_on_at_an_even_pace(known):
    rounds = known.section("EW1").records.rounds

    assert np.all(np.diff(rounds.at_ms, axis=1) == 20_000)
    assert rounds.at_ms.shape == (180, 30)


@pytest.mark.parametrize("name", ["EW1", "ER1", "ZN1"])
def test_readings_scatter_about_the_truth_as_the_meter_does(known, name):
    section = known.section(name)
    rounds, pen = section.records.rounds, section.recipe.pen
    true_volts = section.truth.volts_at(rounds.at_ms, np.arange(1, section.recipe.cells + 1))

    errors = (rounds.volts - true_volts)[~np.isnan(rounds.volts)]
    rounding_v = 10.0**-pen.decimals / np.sqrt(12)

    assert errors.mean() == pytest.approx(0.0, abs=0.25 * pen.reader_spread_v + 1e-4)
    assert errors.std() == pytest.approx(
        np.sqrt(pen.meter_noise_v**2 + pen.reader_spread_v**2 + rounding_v**2), rel=0.08
    )


def test_nobody_reads_a_section_that_is_off_or_a_cell_that_is_bypassed(known):
    for section in known.sections:
        rounds, truth = section.records.rounds, section.truth
        is_read = ~np.isnan(rounds.volts)
        cells = np.arange(1, section.recipe.cells + 1)

        assert np.all(truth.amps_at(rounds.at_ms)[is_read] > 0)
        assert np.all(truth.in_service_at(rounds.at_ms, cells)[is_read])


def test_a_house_has_slips_only_when_they_are_asked_for():
    clean, slipped = truth_house(days=30), truth_house(days=30, slips=True)

    assert sum(len(section.truth.slips) for section in clean.sections) == 0
    assert sum(len(section.truth.slips) for section in slipped.sections) == 3
