"""JCGM 102:2011 (Supplement 2 to the GUM), clause 9.3: magnitude and phase from two components.

Looked up: a public test suite that quotes tables 6 and 7: by the law of propagation 0.010 and
10.000 (at x1 = 0.001) or 1.000 rad (at 0.010); by trial means 0.013 and 0, u 0.007 and 1.744 rad
(independent), 0.012, -0.556, 0.008, 1.599 rad (r = 0.9), and 0.015, -0.343, 0.008, 0.903 rad (r =
0.9 at 0.010). The component is x2 = 0; both have u = 0.010. Tolerances are those digits.
"""

import numpy as np
import pytest

from server.science.uncertainty.draws import correlated_normal
from server.science.uncertainty.monte_carlo import monte_carlo
from server.science.uncertainty.sensitivities import propagated_together


@pytest.mark.parametrize(("x1", "phase_u"), [(0.001, 10.000), (0.010, 1.000)])
@pytest.mark.parametrize("r", [0.0, 0.9])
def test_by_the_law_of_propagation(x1, phase_u, r):
    # Beside zero the phase turns so sharply that only a small step comes to its derivative.
    result = propagated_together(
        lambda a, b: [np.hypot(a, b), np.arctan2(b, a)],
        [x1, 0.0],
        [0.010, 0.010],
        [[1.0, r], [r, 1.0]],
        step=1e-3,
    )

    assert result.values == pytest.approx([x1, 0.0])
    assert result.standard_uncertainties == pytest.approx([0.010, phase_u], abs=0.0005)


@pytest.mark.parametrize(
    ("x1", "r", "means", "deviations"),
    [
        (0.001, 0.0, (0.013, 0.0), (0.007, 1.744)),
        (0.001, 0.9, (0.012, -0.556), (0.008, 1.599)),
        (0.010, 0.9, (0.015, -0.343), (0.008, 0.903)),
    ],
)
def test_by_trial(x1, r, means, deviations):
    together = correlated_normal([x1, 0.0], [0.010, 0.010], [[1.0, r], [r, 1.0]])

    magnitude = monte_carlo(np.hypot, [together], np.random.default_rng(seed=9301), 1_000_000)
    phase = monte_carlo(
        lambda a, b: np.arctan2(b, a), [together], np.random.default_rng(seed=9302), 1_000_000
    )

    assert magnitude.estimate == pytest.approx(means[0], abs=0.0005)
    assert magnitude.standard_uncertainty == pytest.approx(deviations[0], abs=0.0005)
    # Half of the last digit, and three times the scatter of a million trials, 0.0017 rad.
    assert phase.estimate == pytest.approx(means[1], abs=0.0005 + 0.0052)
    assert phase.standard_uncertainty == pytest.approx(deviations[1], abs=0.0005 + 0.004)
