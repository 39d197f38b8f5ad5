"""Every detector on the same plants: the told one, the watch, and what does without a model."""

from collections.abc import Callable, Sequence

import numpy as np

from tests.watch.plants.plant import Plant
from tests.watch.score.charts import Scored, flags_of, limit_for
from tests.watch.score.ours import watch
from tests.watch.score.plain import fixed_limits, own_cusum, own_ewma, three_sigma
from tests.watch.score.told import told_cases
from tests.watch.score.watched import Case, Watched

TOLD, OURS = "told every healthy voltage", "the watch"

_Of = Callable[[Plant], Scored]
PLAIN: dict[str, tuple[_Of, float]] = {
    "plain CUSUM": (own_cusum, 40.0),
    "EWMA": (own_ewma, 12.0),
    "three sigma of own past": (three_sigma, 30.0),
    "fixed limits": (fixed_limits, 1.0),
}
"""Each with a limit that is surely too high."""


def every_case(plants: Sequence[Plant]) -> dict[str, list[Case]]:
    """What each detector says of plants of one process, which share the detector's limit."""
    found = {TOLD: told_cases(plants), OURS: [Case(plant, watch(plant)) for plant in plants]}
    for name, (of, high) in PLAIN.items():
        scored = [of(plant) for plant in plants]
        limit = limit_for(scored, 0.0, high)
        found[name] = [Case(one.plant, _flags_only(one, limit)) for one in scored]
    return found


def _flags_only(scored: Scored, limit: float) -> Watched:
    nothing = np.full(scored.plant.at_ms.shape, np.nan)
    return Watched(flags_of(scored, limit), nothing, nothing, nothing, nothing)
