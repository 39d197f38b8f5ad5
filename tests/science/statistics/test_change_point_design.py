"""Run lengths of the Shiryaev-Roberts evidence: laws they obey, and simulated charts."""

import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.statistics.change_point import shiryaev_roberts
from server.science.statistics.change_point_design import (
    shiryaev_roberts_chain,
    shiryaev_roberts_run_length,
    shiryaev_roberts_settled_run_length,
    shiryaev_roberts_threshold,
)


def test_the_evidence_itself_signals_as_foretold():
    deviations = np.random.default_rng(seed=97).normal(-0.8, 1.0, (60, 20_000))
    above = shiryaev_roberts(deviations, shift=1.0) >= np.log(100.0)

    readings = np.where(above.any(axis=0), above.argmax(axis=0) + 1, 60)

    found = shiryaev_roberts_run_length(100.0, 1.0, 0.8)
    assert found == pytest.approx(readings.mean(), abs=4.0 * readings.std() / 20_000**0.5)


@pytest.mark.parametrize("size", [0.25, 1.0, 2.0])
def test_without_a_change_it_runs_longer_than_its_threshold(size):
    for threshold in (10.0, 100.0, 1000.0):
        assert shiryaev_roberts_run_length(threshold, size) > threshold


def test_a_start_takes_away_as_many_readings_as_it_has():
    fresh = float(shiryaev_roberts_run_length(300.0, 1.0))

    ahead = float(shiryaev_roberts_run_length(300.0, 1.0, start=50.0))

    # R less the number of readings is a martingale, and R at the signal hardly knows its start.
    assert fresh - ahead == pytest.approx(50.0, rel=0.02)


@pytest.mark.parametrize(("run_length", "size"), [(20.0, 2.0), (500.0, 1.0), (500.0, 0.25)])
def test_the_threshold_gives_the_wanted_run_length(run_length, size):
    threshold = shiryaev_roberts_threshold(run_length, size)

    assert shiryaev_roberts_run_length(threshold, size) == pytest.approx(run_length, rel=1e-6)


def test_a_settled_chart_is_quicker():
    settled = shiryaev_roberts_settled_run_length(100.0, 1.0, [0.0, 1.0])

    assert (settled < shiryaev_roberts_run_length(100.0, 1.0, [0.0, 1.0])).all()


def test_the_median_is_at_hand():
    chain = shiryaev_roberts_chain(100.0, 1.0, 0.0)

    assert chain.quantile(-15.0, 0.5) == pytest.approx(np.log(2.0) * 179.0, rel=0.03)


def test_a_missing_shift_gives_no_run_length():
    found = shiryaev_roberts_run_length(100.0, 1.0, [np.nan, 1.0])

    assert np.isnan(found).tolist() == [True, False]


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: shiryaev_roberts_run_length(0.0, 1.0), "threshold"),
        (lambda: shiryaev_roberts_run_length(100.0, 0.0), "size"),
        (lambda: shiryaev_roberts_run_length(100.0, 1.0, start=100.0), "start"),
        (lambda: shiryaev_roberts_threshold(1.0, 1.0), "run_length"),
        (lambda: shiryaev_roberts_threshold(3.0, 6.0), "run_length"),
    ],
)
def test_what_cannot_be_is_refused(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
