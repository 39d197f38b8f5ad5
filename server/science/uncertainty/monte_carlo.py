"""Distributions propagated by trial (JCGM 101), where the law of propagation bends too much."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, not_negative
from server.science.errors import OutOfRange, WrongShape

# An input: takes a generator and a number of trials, gives that many values; several inputs drawn
# together give one row of values each.
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
    shortest: bool = False,
) -> MonteCarlo:
    """Distribution of a result, by drawing its inputs many times.

    Needs no derivatives and no normal distribution, so it checks `combined` and replaces it
    near limits. With the default number of trials the ends of a 95 % interval are good to about
    one per cent of the uncertainty; `adaptive_monte_carlo` tries until a wanted digit stands.

    Parameters
    ----------
    model : callable
        Takes one array of values per input, each of shape (trials,), and gives the results.
    inputs : sequence of callable
        One draw per input, such as `normal` and `rectangular`; a draw of several inputs together,
        such as `correlated_normal`, stands for as many of them, in its order.
    rng : numpy.random.Generator
        Source of random numbers; its seed makes the answer repeatable.
    trials : int
        Number of draws; at least 1000.
    level : float
        Coverage probability of the interval, as a share; above 0 and below 1.
    shortest : bool
        Give the shortest interval instead of the one that leaves out equal shares at both ends.

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
    JCGM 101:2008, 7.2 to 7.7.

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
    results = tried(model, inputs, rng, trials)
    low, high = coverage_interval(results, level, shortest)
    return MonteCarlo(
        estimate=float(results.mean()),
        standard_uncertainty=float(results.std(ddof=1)),
        low=low,
        high=high,
        level=level,
        trials=trials,
    )


def tried(
    model: Callable[..., Numbers], inputs: Sequence[Draw], rng: np.random.Generator, trials: int
) -> Numbers:
    """Results of a model for drawn inputs, one per trial.

    What `monte_carlo` summarises; for a histogram, or for a question of its own.

    Parameters
    ----------
    model : callable
        Takes one array of values per input, each of shape (trials,), and gives the results.
    inputs : sequence of callable
        One draw per input, or per group of inputs drawn together.
    rng : numpy.random.Generator
        Source of random numbers.
    trials : int
        Number of draws.

    Returns
    -------
    ndarray, shape (trials,)
        Results in the unit of the model; NaN where the model has none.

    Raises
    ------
    WrongShape
        If the model does not give one result per trial.

    Source
    ------
    JCGM 101:2008, 7.3 and 7.4.

    Example
    -------
    >>> tried(lambda a: 2 * a, [normal(1.5, 0.0)], np.random.default_rng(1), 3)
    array([3., 3., 3.])
    """
    values = [row for draw in inputs for row in np.atleast_2d(draw(rng, trials))]
    results = np.asarray(model(*values), dtype=np.float64)
    if results.shape != (trials,):
        raise WrongShape("model", found=results.shape, allowed=f"one result per trial, ({trials},)")
    return results


def coverage_interval(
    values: ArrayLike, level: float = 0.95, shortest: bool = False
) -> tuple[float, float]:
    """Interval that holds a wanted share of drawn values.

    The symmetric one leaves out the same share at both ends. The shortest one lies where the
    values are densest: the better answer for a lopsided distribution or one that ends at a
    limit, where the symmetric one leaves out the likeliest values.

    Parameters
    ----------
    values : array_like, shape (M,)
        Values drawn, any unit and order.
    level : float
        Share of them that the interval holds; above 0 and below 1.
    shortest : bool
        The shortest interval, not the symmetric one.

    Returns
    -------
    tuple of float
        Lower and upper end, in the unit of the values; NaN where a value is NaN or there are none.

    Raises
    ------
    OutOfRange
        If the level lies outside its range.

    Source
    ------
    JCGM 101:2008, 7.7 (symmetric) and 5.3.4 (shortest).

    Example
    -------
    >>> coverage_interval([0.0, 0.0, 0.1, 0.2, 0.4, 0.7, 1.1, 1.6, 2.5, 6.0], 0.8, shortest=True)
    (0.0, 1.6)
    """
    if not 0.0 < level < 1.0:
        raise OutOfRange("level", found=level, allowed="above 0 and below 1")
    drawn = np.sort(np.asarray(values, dtype=np.float64), axis=None)
    if not drawn.size or np.isnan(drawn[-1]):
        return float("nan"), float("nan")
    if not shortest:
        tail = (1.0 - level) / 2.0
        low, high = np.quantile(drawn, [tail, 1.0 - tail])
        return float(low), float(high)
    held = min(max(round(level * drawn.size), 1), drawn.size)
    start = int(np.argmin(drawn[held - 1 :] - drawn[: drawn.size - held + 1]))
    return float(drawn[start]), float(drawn[start + held - 1])
