"""J. W. Tukey, Exploratory Data Analysis (1977); Velleman and Hoaglin, ABC of EDA (1981), page 224.

Looked up: deaths in sport parachuting by experience and year, the example of R's medpolish, and its
result in two public test suites that reproduce it: overall 8, rows 6 -1 0 2 -8, columns 0 -1 0, and
the residuals. The cross-check has our own table and the linear model of a general library of
statistics (statsmodels) with Huber's weights and the scale of our fit.
"""

import numpy as np
import pytest
from statsmodels.robust.norms import HuberT

from server.science.statistics.two_way import HUBER_BOUND, median_polish, robust_two_way

DEATHS = [[14, 15, 14], [7, 4, 7], [8, 2, 10], [15, 9, 10], [0, 2, 0]]


def test_deaths_in_sport_parachuting():
    fit = median_polish(DEATHS)

    assert fit.overall == 8
    assert fit.cells.tolist() == [6, -1, 0, 2, -8]
    assert fit.rounds.tolist() == [0, -1, 0]
    assert fit.residuals.tolist() == [[0, 2, 0], [0, -2, 0], [0, -5, 2], [5, 0, 0], [0, 3, 0]]
    assert fit.converged


def test_a_general_library_solves_the_same_robust_regression():
    rng = np.random.default_rng(seed=1977)
    table = rng.normal(size=(6, 5)) + rng.standard_cauchy(size=(6, 5)) * 0.3
    fit = robust_two_way(table)

    # Each reading as a sum of a cell and a round, the first round being the reference.
    cell, turn = np.divmod(np.arange(30), 5)
    design = np.hstack([np.eye(6)[cell], np.eye(5)[turn][:, 1:]])
    norm, readings = HuberT(t=HUBER_BOUND), table.ravel()
    effects = np.linalg.lstsq(design, readings, rcond=None)[0]
    for _ in range(500):
        weights = norm.weights((readings - design @ effects) / fit.scale)
        root = np.sqrt(weights)
        effects = np.linalg.lstsq(design * root[:, None], readings * root, rcond=None)[0]

    assert fit.fitted.ravel() == pytest.approx(design @ effects, abs=1e-5)
