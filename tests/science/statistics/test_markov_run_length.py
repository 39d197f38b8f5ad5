"""Markov chains: another way to the same run lengths."""

import numpy as np
import pytest

from server.science.errors import OutOfRange
from server.science.statistics.ewma_run_length import ewma_run_length
from server.science.statistics.markov_run_length import (
    cusum_markov_run_length,
    ewma_markov_run_length,
)
from server.science.statistics.run_length import cusum_run_length


@pytest.mark.parametrize(("k", "h"), [(0.0, 6.0), (0.25, 8.0), (0.5, 4.0), (1.0, 2.5)])
@pytest.mark.parametrize("shift", [-0.25, 0.0, 1.0])
def test_cusum_agrees_with_the_integral_equation(k, h, shift):
    found = cusum_markov_run_length(k, h, shift, cells=300)

    assert found == pytest.approx(float(cusum_run_length(k, h, shift)), rel=5e-4)


def test_a_head_start_falls_on_a_cell():
    # Of 200 cells for a limit of 3.99 the hundredth is at 2.
    found = cusum_markov_run_length(0.5, 3.99, 0.5, head_start=2.0, cells=200)

    assert found == pytest.approx(float(cusum_run_length(0.5, 3.99, 0.5, 2.0)), rel=1e-3)


@pytest.mark.parametrize(("weight", "width"), [(0.05, 2.615), (0.25, 2.998), (1.0, 3.0)])
@pytest.mark.parametrize("shift", [0.0, 1.0])
def test_ewma_agrees_with_the_integral_equation(weight, width, shift):
    found = ewma_markov_run_length(weight, width, shift, cells=401)

    assert found == pytest.approx(float(ewma_run_length(weight, width, shift)), rel=2e-3)


def test_the_error_falls_with_the_square_of_the_cells():
    exact = float(cusum_run_length(0.5, 4.0))

    coarse, fine = (
        abs(float(cusum_markov_run_length(0.5, 4.0, cells=cells)) - exact) for cells in (50, 100)
    )

    assert coarse / fine == pytest.approx(4.0, rel=0.1)


def test_a_missing_shift_gives_no_run_length():
    assert np.isnan(cusum_markov_run_length(0.5, 4.0, [np.nan, 0.0])).tolist() == [True, False]


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [({"h": 0.0}, "h"), ({"head_start": 4.1}, "head_start"), ({"cells": 4}, "cells")],
)
def test_cusum_charts_that_cannot_be_are_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        cusum_markov_run_length(**{"k": 0.5, "h": 4.0, **arguments})


@pytest.mark.parametrize(
    ("arguments", "quantity"),
    [({"weight": 0.0}, "weight"), ({"width": 0.0}, "width"), ({"cells": 100}, "cells")],
)
def test_ewma_charts_that_cannot_be_are_refused(arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        ewma_markov_run_length(**{"weight": 0.2, "width": 3.0, **arguments})
