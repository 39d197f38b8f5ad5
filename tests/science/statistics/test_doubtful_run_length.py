"""Charts whose parameters are estimated, and charts on readings that hang together."""

import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.statistics.doubtful_run_length import (
    autocorrelation_inflation,
    cusum_run_length_estimated,
    ewma_run_length_estimated,
    residual_cusum_run_length,
)
from server.science.statistics.run_length import cusum_run_length


def test_many_readings_are_as_good_as_knowing():
    found = cusum_run_length_estimated(0.5, 4.0, 1.0, readings=10**8, degrees_of_freedom=10**8)

    assert found == pytest.approx(float(cusum_run_length(0.5, 4.0, 1.0)), rel=1e-5)


def test_a_cusum_on_estimates_runs_as_simulated():
    rng = np.random.default_rng(seed=41)
    charts, before = 20_000, 25
    learned = rng.normal(size=(before, charts))
    centre, sigma = learned.mean(axis=0), learned.std(axis=0, ddof=1)
    up = np.zeros(charts)
    first = np.full(charts, 300)
    for number in range(1, 300):
        up = np.maximum(0.0, up + (rng.normal(1.5, 1.0, charts) - centre) / sigma - 0.5)
        first = np.where((up > 4.0) & (first == 300), number, first)

    found = cusum_run_length_estimated(0.5, 4.0, 1.5, before, before - 1)

    assert found == pytest.approx(first.mean(), abs=4.0 * first.std() / charts**0.5)


def test_residuals_of_independent_readings_are_the_readings():
    found = residual_cusum_run_length(0.5, 4.0, [0.0, 1.0], autocorrelation=0.0)

    np.testing.assert_allclose(found, cusum_run_length(0.5, 4.0, [0.0, 1.0]), rtol=1e-9)


def test_a_cusum_on_residuals_runs_as_simulated():
    rng = np.random.default_rng(seed=43)
    charts, correlation, shift = 20_000, 0.6, 1.0
    before = rng.normal(size=charts)
    up = np.zeros(charts)
    first = np.full(charts, 600)
    for number in range(1, 600):
        noise = rng.normal(0.0, (1.0 - correlation**2) ** 0.5, charts)
        now = correlation * before + noise
        seen, seen_before = now + shift, before + (shift if number > 1 else 0.0)
        residual = (seen - correlation * seen_before) / (1.0 - correlation**2) ** 0.5
        up = np.maximum(0.0, up + residual - 0.5)
        first = np.where((up > 4.0) & (first == 600), number, first)
        before = now

    found = residual_cusum_run_length(0.5, 4.0, shift, correlation)

    assert found == pytest.approx(first.mean(), abs=4.0 * first.std() / charts**0.5)


def test_positive_correlation_hides_a_lasting_shift():
    free, bound = (
        float(residual_cusum_run_length(0.5, 5.0, 1.0, correlation)) for correlation in (0.0, 0.5)
    )

    assert bound > 2.0 * free


def test_the_inflation_is_the_spread_of_long_means():
    rng = np.random.default_rng(seed=47)
    noise = rng.normal(size=(2000, 1000))
    readings = np.empty_like(noise)
    readings[0] = noise[0]
    for number in range(1, 2000):
        readings[number] = 0.5 * readings[number - 1] + 0.75**0.5 * noise[number]

    spread = readings.mean(axis=0).std() * 2000**0.5

    assert spread == pytest.approx(float(autocorrelation_inflation(0.5)), rel=0.08)


def test_the_inflation_bounds_the_run_length_of_correlated_readings():
    rng = np.random.default_rng(seed=53)
    charts, correlation = 4000, 0.25
    now = rng.normal(size=charts)
    up = np.zeros(charts)
    first = np.full(charts, 3000)
    for number in range(1, 3000):
        now = correlation * now + (1.0 - correlation**2) ** 0.5 * rng.normal(size=charts)
        up = np.maximum(0.0, up + now - 0.5)
        first = np.where((up > 5.0) & (first == 3000), number, first)

    factor = float(autocorrelation_inflation(correlation))
    bound = float(cusum_run_length(0.5 / factor, 5.0 / factor))
    assert bound == pytest.approx(148, abs=1)
    assert bound < first.mean() == pytest.approx(237, abs=15)
    assert first.mean() < cusum_run_length(0.5, 5.0)


def test_what_is_missing_stays_missing():
    assert np.isnan(autocorrelation_inflation([np.nan, 0.0])).tolist() == [True, False]
    assert np.isnan(residual_cusum_run_length(0.5, 4.0, np.nan, 0.3))


@pytest.mark.parametrize(
    ("arguments", "quantity"), [({"readings": 1}, "readings"), ({"degrees_of_freedom": 0}, "deg")]
)
def test_estimates_that_cannot_be_are_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        ewma_run_length_estimated(
            **{
                "weight": 0.2, "width": 3.0, "shift": 0.0,
                "readings": 20, "degrees_of_freedom": 19, **arguments,
            }
        )  # fmt: skip


@pytest.mark.parametrize("correlation", [1.0, [0.0, -1.0]])
def test_correlations_that_cannot_be_are_refused(correlation):
    with pytest.raises(OutOfRange, match="autocorrelation"):
        autocorrelation_inflation(correlation)
