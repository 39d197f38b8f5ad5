"""Draws from the distributions that little knowledge of an input calls for (JCGM 101, 6.4)."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.errors import OutOfRange, WrongShape
from server.science.uncertainty.monte_carlo import Draw
from server.science.uncertainty.propagation import correlation_matrix


def trapezoidal(low: float, high: float, top_share: float) -> Draw:
    """A draw from a symmetric trapezoid, as an input of `monte_carlo`.

    For the sum of two rectangular inputs, or limits near which values are less likely. A top of
    the whole width is a rectangle, a top of none a triangle.

    Parameters
    ----------
    low : float
        Lower limit, any unit.
    high : float
        Upper limit, same unit; not below the lower.
    top_share : float
        Width of the flat top as a share of the width between the limits; 0 to 1.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives that many values.

    Raises
    ------
    OutOfRange
        If the upper limit lies below the lower, or the share is outside its range.

    Source
    ------
    JCGM 101:2008, 6.4.4.

    Example
    -------
    >>> trapezoidal(1.0, 1.0, 0.5)(np.random.default_rng(1), 2)
    array([1., 1.])
    """
    _ordered(low, high)
    if not 0.0 <= top_share <= 1.0:
        raise OutOfRange("top_share", found=top_share, allowed="0 to 1")
    width = (high - low) / 2.0

    def draw(rng: np.random.Generator, trials: int) -> Numbers:
        one, other = rng.random(trials), rng.random(trials)
        return low + width * ((1.0 + top_share) * one + (1.0 - top_share) * other)

    return draw


def triangular(low: float, high: float) -> Draw:
    """A draw from a symmetric triangle, as an input of `monte_carlo`.

    For the sum or difference of two inputs with the same rectangle, or limits with the middle
    the likeliest.

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
    JCGM 101:2008, 6.4.5.

    Example
    -------
    >>> triangular(1.0, 1.0)(np.random.default_rng(1), 2)
    array([1., 1.])
    """
    return trapezoidal(low, high, top_share=0.0)


def rectangular_in_doubt(low: float, high: float, doubt: float) -> Draw:
    """A draw between two limits that are known only to a doubt of their own.

    For an accuracy printed with one digit: 0.1 may be anything from 0.05 to 0.15. Both limits
    move against each other, the middle stays.

    Parameters
    ----------
    low : float
        Lower limit, any unit.
    high : float
        Upper limit, same unit; not below the lower.
    doubt : float
        How far each limit may lie from where it is said to be, same unit; not negative, and no
        more than half of the width.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives that many values.

    Raises
    ------
    OutOfRange
        If the upper limit lies below the lower, or the doubt is outside its range.

    Source
    ------
    JCGM 101:2008, 6.4.3 (curvilinear trapezoid).

    Example
    -------
    >>> values = rectangular_in_doubt(-0.1, 0.1, 0.05)(np.random.default_rng(1), 100_000)
    >>> f"{values.std():.3f}"
    '0.060'
    """
    _ordered(low, high)
    if not 0.0 <= doubt <= (high - low) / 2.0:
        raise OutOfRange("doubt", found=doubt, allowed=f"0 to {(high - low) / 2.0}")

    def draw(rng: np.random.Generator, trials: int) -> Numbers:
        start = low - doubt + 2.0 * doubt * rng.random(trials)
        return start + (low + high - 2.0 * start) * rng.random(trials)

    return draw


def arc_sine(low: float, high: float) -> Draw:
    """A draw from a quantity that swings between two limits, as an input of `monte_carlo`.

    For a temperature under a thermostat or a ripple on a current, caught at no chosen moment of
    its sinusoidal swing: near the limits it is seen most often (U-shaped).

    Parameters
    ----------
    low : float
        Lowest point of the swing, any unit.
    high : float
        Highest point, same unit; not below the lower.

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
    JCGM 101:2008, 6.4.6.

    Example
    -------
    >>> values = arc_sine(59.0, 61.0)(np.random.default_rng(1), 100_000)
    >>> f"{values.std():.2f}"
    '0.71'
    """
    _ordered(low, high)

    def draw(rng: np.random.Generator, trials: int) -> Numbers:
        swing = np.sin(2.0 * np.pi * rng.random(trials))
        return np.asarray((low + high) / 2.0 + (high - low) / 2.0 * swing)

    return draw


def student(mean: float, standard_uncertainty: float, degrees_of_freedom: float) -> Draw:
    """A draw from a scaled and shifted t-distribution, as an input of `monte_carlo`.

    For a mean of few readings, whose own scatter is all that is known of its uncertainty. The
    fewer the degrees of freedom, the longer the tails.

    Parameters
    ----------
    mean : float
        Mean of the readings, any unit.
    standard_uncertainty : float
        Standard deviation of that mean, same unit; not negative.
    degrees_of_freedom : float
        One less than the number of readings; above zero.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives that many values.

    Raises
    ------
    OutOfRange
        If the uncertainty is negative or the degrees of freedom are not above zero.

    Source
    ------
    JCGM 101:2008, 6.4.9.

    Example
    -------
    >>> student(2.0, 0.0, 3)(np.random.default_rng(1), 2)
    array([2., 2.])
    """
    not_negative("standard_uncertainty", standard_uncertainty)
    above_zero("degrees_of_freedom", degrees_of_freedom)
    return lambda rng, trials: (
        mean + standard_uncertainty * rng.standard_t(degrees_of_freedom, trials)
    )


def exponential(mean: float) -> Draw:
    """A draw from an exponential distribution, as an input of `monte_carlo`.

    For a quantity that cannot be negative and of which only the estimate is known, such as the
    trace of an impurity.

    Parameters
    ----------
    mean : float
        Best estimate, any unit; above zero.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives that many values.

    Raises
    ------
    OutOfRange
        If the mean is not above zero.

    Source
    ------
    JCGM 101:2008, 6.4.10.

    Example
    -------
    >>> bool((exponential(0.2)(np.random.default_rng(1), 100) > 0.0).all())
    True
    """
    above_zero("mean", mean)
    return lambda rng, trials: rng.exponential(mean, trials)


def counted(count: int) -> Draw:
    """A draw of the rate behind a count, as an input of `monte_carlo`.

    For a number of events counted over one interval, such as shorts found in a round: gamma
    distributed, so that even a count of nothing leaves a doubt.

    Parameters
    ----------
    count : int
        Events counted; not negative.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives as many expected counts.

    Raises
    ------
    OutOfRange
        If the count is negative.

    Source
    ------
    JCGM 101:2008, 6.4.11: gamma distribution with shape q + 1 and scale 1.

    Example
    -------
    >>> f"{counted(0)(np.random.default_rng(1), 100_000).mean():.1f}"
    '1.0'
    """
    not_negative("count", count)
    return lambda rng, trials: rng.gamma(count + 1.0, 1.0, trials)


def truncated_normal(mean: float, standard_uncertainty: float, low: float, high: float) -> Draw:
    """A draw from a normal distribution cut off at limits, as an input of `monte_carlo`.

    For an input with a standard uncertainty that also cannot pass a limit: a share above 1, a
    concentration below 0. Its mean is no longer the given one where a limit is near.

    Parameters
    ----------
    mean : float
        Mean before the cut, any unit.
    standard_uncertainty : float
        Standard deviation before the cut, same unit; above zero.
    low : float
        Lower limit, same unit; minus infinity for none.
    high : float
        Upper limit, same unit; above the lower, infinity for none.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives that many values.

    Raises
    ------
    OutOfRange
        If the uncertainty is not above zero, or the limits are not in order.

    Source
    ------
    Definition: the normal distribution, given that the value lies within the limits.

    Example
    -------
    >>> values = truncated_normal(0.99, 0.02, 0.0, 1.0)(np.random.default_rng(1), 10_000)
    >>> f"{values.max():.3f} {values.mean():.3f}"
    '1.000 0.980'
    """
    above_zero("standard_uncertainty", standard_uncertainty)
    if not low < high:
        raise OutOfRange("high", found=high, allowed=f"above {low}")
    from_mean = (low - mean) / standard_uncertainty, (high - mean) / standard_uncertainty

    def draw(rng: np.random.Generator, trials: int) -> Numbers:
        # Loaded here: it takes a good part of the time in which a command starts.
        from scipy import stats

        cut = stats.truncnorm(*from_mean, loc=mean, scale=standard_uncertainty)
        return np.asarray(cut.rvs(size=trials, random_state=rng))

    return draw


def correlated_normal(
    means: ArrayLike, standard_uncertainties: ArrayLike, correlation: ArrayLike
) -> Draw:
    """A draw of several normal inputs together, with their correlation.

    Stands for as many inputs of `monte_carlo` as it has means, in their order.

    Parameters
    ----------
    means : array_like, shape (N,)
        Best estimates, any units.
    standard_uncertainties : array_like, shape (N,)
        Their standard uncertainties, same units; not negative.
    correlation : array_like, shape (N, N)
        Correlation coefficients.

    Returns
    -------
    callable
        Takes a Generator and a number of trials, gives an array of shape (N, trials).

    Raises
    ------
    OutOfRange
        If a number is infinite, an uncertainty negative or the matrix no correlation matrix.
    WrongShape
        If the three do not belong together.

    Source
    ------
    JCGM 101:2008, 6.4.8.

    Example
    -------
    >>> together = correlated_normal([5.0, 3.0], [0.1, 0.1], [[1.0, 1.0], [1.0, 1.0]])
    >>> a, b = together(np.random.default_rng(1), 1000)
    >>> f"{(a - b).std():.3f}"
    '0.000'
    """
    centres = np.atleast_1d(finite("means", means))
    errors = np.atleast_1d(not_negative("standard_uncertainties", standard_uncertainties))
    if centres.ndim != 1 or errors.shape != centres.shape:
        raise WrongShape("standard_uncertainties", errors.shape, allowed=f"{centres.shape}, a row")
    spread, axes = np.linalg.eigh(correlation_matrix(correlation, centres.size))
    # The root of the correlation alone: a missing uncertainty stays with its own input.
    root = axes * np.sqrt(np.maximum(spread, 0.0))

    def draw(rng: np.random.Generator, trials: int) -> Numbers:
        scattered = root @ rng.standard_normal((centres.size, trials))
        return np.asarray(centres[:, None] + errors[:, None] * scattered)

    return draw


def _ordered(low: float, high: float) -> None:
    """Refuse limits in the wrong order."""
    if not low <= high:
        raise OutOfRange("high", found=high, allowed=f"{low} or more")
