import numpy as np
import pytest

from server.intake.history import (
    LAST_READINGS,
    REACH_MS,
    Readings,
    by_cell,
    by_round,
    medians_before,
)

HOUR_MS = 3_600_000


def readings_of(number, at_ms, volts=None):
    number, at_ms = np.array(number), np.array(at_ms)
    order = np.lexsort((at_ms, number))
    volts = np.zeros(len(number)) if volts is None else np.asarray(volts, float)
    return Readings(number[order], at_ms[order], volts[order], np.ones(len(number), bool))


@pytest.fixture
def uneven():
    """Three cells read at uneven moments, some of it unusable."""
    rng = np.random.default_rng(seed=20240305)
    number = rng.integers(1, 4, 200)
    at_ms = np.sort(rng.choice(40 * 24, 200, replace=False)) * HOUR_MS
    readings = readings_of(number, at_ms, rng.normal(2, 0.1, 200))
    return readings, rng.random(200) < 0.8


def test_the_median_is_that_of_the_cells_own_last_usable_readings(uneven):
    readings, usable = uneven

    medians = medians_before(readings, readings.volts, usable)

    for i in range(len(readings)):
        own = [j for j in range(i) if readings.number[j] == readings.number[i] and usable[j]]
        near = [
            readings.volts[j]
            for j in own[-LAST_READINGS:]
            if readings.at_ms[i] - readings.at_ms[j] <= REACH_MS
        ]
        expected = np.median(near) if near else np.nan
        assert medians[i] == pytest.approx(expected, nan_ok=True)


def test_only_the_places_asked_for_are_worked_out(uneven):
    readings, usable = uneven
    places = np.array([5, 77, 199])

    some = medians_before(readings, readings.volts, usable, places)

    assert some == pytest.approx(
        medians_before(readings, readings.volts, usable)[places], nan_ok=True
    )


def test_a_round_ends_where_a_cell_is_read_again():
    readings = readings_of([1, 2, 3, 1, 2, 3], [0, 10, 20, 30, 40, 50])

    assert by_round(readings).group.tolist() == [0, 1, 0, 1, 0, 1]


def test_a_round_ends_with_a_long_pause():
    readings = readings_of([1, 2, 3, 4], [0, 20_000, HOUR_MS * 8, HOUR_MS * 8 + 20_000])

    assert by_round(readings).group.tolist() == [0, 0, 1, 1]


def test_cells_that_were_skipped_do_not_shift_the_rounds():
    readings = readings_of([1, 2, 3, 1, 3], [0, 10, 20, HOUR_MS * 8, HOUR_MS * 8 + 20])

    assert by_round(readings).group.tolist() == [0, 1, 0, 0, 1]


@pytest.mark.parametrize("is_even", [True, False])
def test_group_medians_are_those_of_each_group(is_even):
    rng = np.random.default_rng(seed=1)
    number = np.repeat(np.arange(1, 21), 10) if is_even else np.sort(rng.integers(1, 90, 200))
    if not is_even:
        number[:120] = 1
        number.sort()
    readings = readings_of(number, np.arange(200))
    values = np.where(rng.random(200) < 0.2, np.nan, rng.normal(size=200))

    medians = by_cell(readings).medians(values, least=2)

    for cell in np.unique(number):
        own = values[readings.number == cell]
        own = own[np.isfinite(own)]
        expected = np.median(own) if len(own) >= 2 else np.nan
        assert medians[cell] == pytest.approx(expected, nan_ok=True)
