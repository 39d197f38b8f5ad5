"""Trials until a wanted digit stands still, and the law of propagation held against them."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from server.science.arrays import Numbers
from server.science.errors import OutOfRange
from server.science.uncertainty.monte_carlo import Draw, MonteCarlo, coverage_interval, tried


@dataclass(frozen=True)
class AdaptiveMonteCarlo(MonteCarlo):
    """What the trials came to, and whether there were enough of them.

    `tolerance` is how far each figure may still move, in the unit of the result; `settled` says
    that none of the four does, by twice its standard deviation over the batches.
    """

    tolerance: float
    settled: bool


@dataclass(frozen=True)
class Validation:
    """How far the ends of an interval by the law of propagation lie from those by trial.

    `holds` says that neither is further than the tolerance, all three in the unit of the result.
    """

    d_low: float
    d_high: float
    tolerance: float
    holds: bool


def numerical_tolerance(standard_uncertainty: float, digits: int = 2) -> float:
    """How exactly a standard uncertainty must be known for its digits to mean something.

    Half of the place of its last digit: 0.0754 with two digits is 0.075, so 0.0005.

    Parameters
    ----------
    standard_uncertainty : float
        Standard uncertainty, any unit; not negative.
    digits : int
        Digits of it that are to stand; 1 or more.

    Returns
    -------
    float
        Tolerance, same unit. NaN where the uncertainty is NaN, zero where it is zero.

    Raises
    ------
    OutOfRange
        If the uncertainty is negative or infinite, or there is not one digit.

    Source
    ------
    JCGM 101:2008, 7.9.2.

    Example
    -------
    >>> f"{numerical_tolerance(0.0754, digits=2):.4f}"
    '0.0005'
    """
    if digits < 1:
        raise OutOfRange("digits", found=digits, allowed="1 or more")
    if standard_uncertainty < 0.0 or math.isinf(standard_uncertainty):
        raise OutOfRange("standard_uncertainty", standard_uncertainty, allowed="zero or more")
    if math.isnan(standard_uncertainty) or standard_uncertainty == 0.0:
        return standard_uncertainty
    # Rounded by the formatter, so that 0.996 with two digits becomes 1.0 and not 0.99.
    exponent = int(f"{standard_uncertainty:.{digits - 1}e}".split("e")[1]) - (digits - 1)
    return 0.5 * 10.0**exponent


def adaptive_monte_carlo(
    model: Callable[..., Numbers],
    inputs: Sequence[Draw],
    rng: np.random.Generator,
    level: float = 0.95,
    digits: int = 2,
    shortest: bool = False,
    tolerance_share: float = 1.0,
    most_trials: int = 5_000_000,
) -> AdaptiveMonteCarlo:
    """Distribution of a result, by drawing its inputs until the figures stand.

    Batch after batch of trials is made. After each, the estimate, the uncertainty and both ends
    of the interval have a mean over the batches with a standard deviation of that mean; it is
    enough when twice every one of these is below the tolerance that the digits ask for. Memory is
    what bounds the number: eight bytes per trial.

    Parameters
    ----------
    model : callable
        Takes one array of values per input, each of shape (M,), and gives the results.
    inputs : sequence of callable
        One draw per input, or per group of inputs drawn together.
    rng : numpy.random.Generator
        Source of random numbers; its seed makes the answer repeatable.
    level : float
        Coverage probability of the interval, as a share; above 0 and below 1.
    digits : int
        Digits of the standard uncertainty that are to stand; usually 1 or 2.
    shortest : bool
        Give the shortest interval instead of the one that leaves out equal shares at both ends.
    tolerance_share : float
        Part of the tolerance that must be met; above zero. A fifth, when `validated` follows.
    most_trials : int
        Trials after which to stop in any case; at least two batches are made.

    Returns
    -------
    AdaptiveMonteCarlo
        Figures in the unit of the result from all trials; NaN and not settled if any result is.

    Raises
    ------
    OutOfRange
        If the level, the digits or the share lie outside their range.
    WrongShape
        If the model does not give one result per trial.

    Source
    ------
    JCGM 101:2008, 7.9.4; for a fifth of the tolerance 8.2.

    Example
    -------
    >>> from server.science.uncertainty.monte_carlo import normal
    >>> result = adaptive_monte_carlo(
    ...     np.multiply, [normal(10, 0.1), normal(3, 0.1)], np.random.default_rng(7), digits=1
    ... )
    >>> f"{result.standard_uncertainty:.0f} {result.tolerance:.1f} {result.settled}"
    '1 0.5 True'
    """
    if not 0.0 < level < 1.0:
        raise OutOfRange("level", found=level, allowed="above 0 and below 1")
    if not tolerance_share > 0.0:
        raise OutOfRange("tolerance_share", found=tolerance_share, allowed="above zero")
    batch = max(math.ceil(100.0 / (1.0 - level)), 10_000)
    drawn: list[Numbers] = []
    figures: list[tuple[float, float, float, float]] = []
    uncertainty, tolerance, settled = math.nan, math.nan, False
    while not settled and (len(drawn) < 2 or (len(drawn) + 1) * batch <= most_trials):
        drawn.append(tried(model, inputs, rng, batch))
        figures.append(_figures(drawn[-1], level, shortest))
        # The spread over all trials from those of the batches, without going through them again.
        uncertainty = _pooled(figures, batch)
        tolerance = numerical_tolerance(uncertainty, digits)
        if math.isnan(uncertainty):
            break
        if len(drawn) > 1:
            scatter = np.std(figures, axis=0, ddof=1) / math.sqrt(len(drawn))
            settled = bool((2.0 * scatter <= tolerance * tolerance_share).all())
    estimate, _, low, high = _figures(np.concatenate(drawn), level, shortest)
    return AdaptiveMonteCarlo(
        estimate=estimate,
        standard_uncertainty=uncertainty,
        low=low,
        high=high,
        level=level,
        trials=batch * len(drawn),
        tolerance=tolerance,
        settled=settled,
    )


def validated(
    value: float, expanded_uncertainty: float, trials: MonteCarlo, digits: int = 2
) -> Validation:
    """Whether the law of propagation with a coverage factor is good enough, by trial.

    Compares value minus and plus expanded uncertainty with the ends of the interval by trial. If
    both agree within the tolerance, the law may be used for this model and others like it; if
    not, report the trials.

    Parameters
    ----------
    value : float
        Result at the best estimates, any unit.
    expanded_uncertainty : float
        Its expanded uncertainty at the level of the trials, same unit; not negative.
    trials : MonteCarlo
        The same result by trial; by `adaptive_monte_carlo` with a `tolerance_share` of 0.2.
    digits : int
        Digits of the standard uncertainty that are held to be meaningful; 1 or more.

    Returns
    -------
    Validation
        Distances of the ends and the verdict; NaN and not held where an input is NaN.

    Raises
    ------
    OutOfRange
        If there is not one digit.

    Source
    ------
    JCGM 101:2008, 8.1.

    Example
    -------
    A rectangle is not a normal distribution.

    >>> from server.science.uncertainty.monte_carlo import monte_carlo, rectangular
    >>> trials = monte_carlo(lambda a: a, [rectangular(-1, 1)], np.random.default_rng(3))
    >>> verdict = validated(0.0, 1.96 * 0.577, trials)
    >>> f"{verdict.d_low:.2f} {verdict.d_high:.2f} {verdict.holds}"
    '0.18 0.18 False'
    """
    tolerance = numerical_tolerance(trials.standard_uncertainty, digits)
    d_low = abs(value - expanded_uncertainty - trials.low)
    d_high = abs(value + expanded_uncertainty - trials.high)
    return Validation(d_low, d_high, tolerance, holds=d_low <= tolerance and d_high <= tolerance)


def _figures(results: Numbers, level: float, shortest: bool) -> tuple[float, float, float, float]:
    """Mean, standard deviation and both ends of the interval of a batch."""
    low, high = coverage_interval(results, level, shortest)
    return float(results.mean()), float(results.std(ddof=1)), low, high


def _pooled(figures: list[tuple[float, float, float, float]], batch: int) -> float:
    """Standard deviation of all trials from means and deviations of equally large batches."""
    means, deviations = np.array(figures)[:, :2].T
    within = (batch - 1) * (deviations**2).sum()
    between = batch * ((means - means.mean()) ** 2).sum()
    return math.sqrt((within + between) / (batch * means.size - 1))
