"""Distributions propagated by trial (JCGM 101), where the law of propagation bends too much."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from server.science.arrays import Numbers, not_negative
from server.science.errors import OutOfRange, WrongShape

# An input: takes a generator and a number of trials, gives that many values.
Draw = Callable[[np.random.Generator, int], Numbers]


@dataclass(frozen=True)
class MonteCarlo:
    """What the trials of one result came to: its mean, its scatter and a coverage interval."""

    estimate: float
    standard_uncertainty: float
    low: float
    high: float
    level: float
    trials: int


def normal(mean: float, standard_uncertainty: float) -> Draw:
    """A draw from a normal distribution, as an input of `monte_carlo`.

    For an input with a best estimate and a standard uncertainty and no hard limits.

    Parameters
    ----------
    mean : float
        Best estimate, any unit.
    standard_uncertainty : float
        Its standard uncertainty, same unit; not negative.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives that many values.

    Raises
    ------
    OutOfRange
        If the uncertainty is negative.

    Source
    ------
    JCGM 101:2008, 6.4.7.

    Example
    -------
    >>> normal(2.0, 0.0)(np.random.default_rng(1), 2)
    array([2., 2.])
    """
    not_negative("standard_uncertainty", standard_uncertainty)
    return lambda rng, trials: rng.normal(mean, standard_uncertainty, trials)


def rectangular(low: float, high: float) -> Draw:
    """A draw from a rectangular distribution, as an input of `monte_carlo`.

    For an input known only to lie between two limits.

    Parameters
    ----------
    low : float
        Lower limit, any unit.
    high : float
        Upper limit, same unit; not below the lower.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives that many values.

    Raises
    ------
    OutOfRange
        If the upper limit lies below the lower.

    Source
    ------
    JCGM 101:2008, 6.4.2.

    Example
    -------
    >>> rectangular(1.0, 1.0)(np.random.default_rng(1), 2)
    array([1., 1.])
    """
    if not low <= high:
        raise OutOfRange("high", found=high, allowed=f"{low} or more")
    return lambda rng, trials: rng.uniform(low, high, trials)


def monte_carlo(
    model: Callable[..., Numbers],
    inputs: Sequence[Draw],
    rng: np.random.Generator,
    trials: int = 200_000,
    level: float = 0.95,
) -> MonteCarlo:
    """Distribution of a result, by drawing its inputs many times.

    Needs no derivatives and no normal distribution, so it checks `combined` and replaces it
    near limits. The interval leaves out equal shares at both ends. With the default number of
    trials the ends of a 95 % interval are good to about one per cent of the uncertainty.

    Parameters
    ----------
    model : callable
        Takes one array of values per input, each of shape (trials,), and gives the results.
    inputs : sequence of callable
        One draw per input, such as `normal` and `rectangular`; correlated inputs are built
        inside the model from independent ones.
    rng : numpy.random.Generator
        Source of random numbers; its seed makes the answer repeatable.
    trials : int
        Number of draws; at least 1000.
    level : float
        Coverage probability of the interval, as a share; above 0 and below 1.

    Returns
    -------
    MonteCarlo
        Estimate, standard uncertainty and interval in the unit of the result; NaN if any
        result is NaN.

    Raises
    ------
    OutOfRange
        If there are too few trials, or the level lies outside its range.
    WrongShape
        If the model does not give one result per trial.

    Source
    ------
    JCGM 101:2008, 7.2 to 7.7 (probabilistically symmetric interval).

    Example
    -------
    >>> result = monte_carlo(
    ...     lambda a, b: a + b, [normal(3, 0.3), normal(4, 0.4)], np.random.default_rng(7)
    ... )
    >>> f"{result.estimate:.2f} {result.standard_uncertainty:.2f}"
    '7.00 0.50'
    """
    if trials < 1000:
        raise OutOfRange("trials", found=trials, allowed="1000 or more")
    if not 0.0 < level < 1.0:
        raise OutOfRange("level", found=level, allowed="above 0 and below 1")
    results = np.asarray(model(*(draw(rng, trials) for draw in inputs)), dtype=np.float64)
    if results.shape != (trials,):
        raise WrongShape("model", found=results.shape, allowed=f"one result per trial, ({trials},)")
    tail = (1.0 - level) / 2.0
    low, high = np.quantile(results, [tail, 1.0 - tail])
    return MonteCarlo(
        estimate=float(results.mean()),
        standard_uncertainty=float(results.std(ddof=1)),
        low=float(low),
        high=float(high),
        level=level,
        trials=trials,
    )
