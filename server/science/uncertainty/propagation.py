"""Standard uncertainties, combined by the law of propagation (JCGM 100) and expanded."""

import math

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, finite, not_negative
from server.science.errors import OutOfRange, WrongShape


def standard_from_limit(limit: ArrayLike) -> Numbers:
    """Standard uncertainty of a quantity known only to lie within plus or minus a limit.

    u = a / sqrt 3, the standard deviation of a rectangular distribution: every value inside
    the limit is equally believable, none outside. For an accuracy printed on an instrument.

    Parameters
    ----------
    limit : array_like, any shape
        Half-width a, in any unit; not negative.

    Returns
    -------
    ndarray, same shape
        Standard uncertainty, in the unit of the limit. NaN where the limit is NaN.

    Raises
    ------
    OutOfRange
        If any limit is negative or infinite.

    Source
    ------
    JCGM 100:2008, 4.3.7, eq. (7).

    Example
    -------
    A shunt of 0.5 % accuracy, as a share.

    >>> f"{standard_from_limit(0.005):.5f}"
    '0.00289'
    """
    return np.asarray(not_negative("limit", limit) / math.sqrt(3.0))


def combined(
    sensitivities: ArrayLike,
    standard_uncertainties: ArrayLike,
    correlation: ArrayLike | None = None,
) -> Numbers:
    """Combined standard uncertainty of a result, from those of its inputs.

    u_c^2 = sum over i, j of c_i u_i r_ij u_j c_j; without a correlation matrix only the terms
    i = j are left. First order: good while the result bends little within the uncertainties;
    otherwise use `monte_carlo`. Inputs run along the first axis, so that many results can be
    worked out at once.

    Parameters
    ----------
    sensitivities : array_like, shape (N, ...)
        Partial derivatives of the result by each of the N inputs.
    standard_uncertainties : array_like, shape (N, ...), broadcast with the sensitivities
        Standard uncertainties of the inputs; not negative.
    correlation : array_like, shape (N, N), optional
        Correlation coefficients of the inputs; independent inputs when not given.

    Returns
    -------
    ndarray, shape (...)
        Combined standard uncertainty, unit of the result. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an uncertainty is negative, or the matrix is no correlation matrix.
    WrongShape
        If the inputs cannot be broadcast, or the matrix is not N by N.

    Source
    ------
    JCGM 100:2008, 5.1.2 eq. (10) independent, 5.2.2 eq. (13) and (16) correlated inputs.

    Example
    -------
    Two lots from one scale do not average its error out.

    >>> f"{combined([0.5, 0.5], [10.0, 10.0]):.2f}"
    '7.07'
    >>> f"{combined([0.5, 0.5], [10.0, 10.0], [[1, 1], [1, 1]]):.2f}"
    '10.00'
    """
    slopes = finite("sensitivities", sensitivities)
    errors = not_negative("standard_uncertainties", standard_uncertainties)
    try:
        parts = slopes * errors
    except ValueError as problem:
        found = f"{errors.shape} against {slopes.shape} sensitivities"
        raise WrongShape("standard_uncertainties", found, "shapes that broadcast") from problem
    if parts.ndim == 0:
        raise WrongShape("sensitivities", found="a single number", allowed="inputs in a sequence")
    if correlation is None:
        return np.asarray(np.sqrt((parts**2).sum(axis=0)))
    matrix = correlation_matrix(correlation, inputs=parts.shape[0])
    variance = np.einsum("i...,ij,j...->...", parts, matrix, parts)
    # A variance a rounding error below zero is zero: the inputs cancel.
    return np.asarray(np.sqrt(np.where(variance < 0.0, 0.0, variance)))


def correlation_matrix(correlation: ArrayLike, inputs: int) -> Numbers:
    """Correlation coefficients as a matrix, once it is certain that they are some.

    Ones on the diagonal, the same on both sides of it, and no set of errors that would have a
    negative variance: two inputs cannot both follow a third and oppose each other.

    Parameters
    ----------
    correlation : array_like, shape (N, N)
        Correlation coefficients, without unit.
    inputs : int
        The number N of inputs.

    Returns
    -------
    ndarray, shape (N, N)
        The same numbers.

    Raises
    ------
    OutOfRange
        If a number is missing or infinite, or the matrix is no correlation matrix.
    WrongShape
        If it is not N by N.

    Source
    ------
    JCGM 100:2008, 5.2.2 and C.3.6.

    Example
    -------
    >>> correlation_matrix([[1, 0.5], [0.5, 1]], inputs=2).tolist()
    [[1.0, 0.5], [0.5, 1.0]]
    """
    matrix = finite("correlation", correlation)
    if matrix.shape != (inputs, inputs):
        raise WrongShape("correlation", found=matrix.shape, allowed=f"({inputs}, {inputs})")
    if not np.allclose(np.diag(matrix), 1.0):
        worst = float(np.diag(matrix)[np.argmax(np.abs(np.diag(matrix) - 1.0))])
        raise OutOfRange("correlation", found=worst, allowed="1 on the diagonal")
    if not np.allclose(matrix, matrix.T):
        worst = float(np.abs(matrix - matrix.T).max())
        raise OutOfRange("correlation", found=worst, allowed="0 between the matrix and its mirror")
    lowest = float(np.linalg.eigvalsh(matrix).min())
    if lowest < -1e-9:
        raise OutOfRange("correlation", found=lowest, allowed="eigenvalues of zero or more")
    return matrix


def relative_product(*relative_uncertainties: ArrayLike) -> Numbers:
    """Relative standard uncertainty of a product or quotient of independent quantities.

    The root of the sum of squares. A factor raised to a power p counts with |p| times its
    relative uncertainty. First order, so for relative uncertainties well below 1.

    Parameters
    ----------
    *relative_uncertainties : array_like, shapes that broadcast
        Relative standard uncertainty of each factor, as a share; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Relative standard uncertainty of the product, as a share. NaN where one is NaN.

    Raises
    ------
    OutOfRange
        If any relative uncertainty is negative or infinite.

    Source
    ------
    JCGM 100:2008, 5.1.6, eq. (12).

    Example
    -------
    Scale 0.1 % and current 0.5 % give the current efficiency to

    >>> f"{relative_product(0.001, 0.005):.5f}"
    '0.00510'
    """
    squares = np.zeros(())
    for share in relative_uncertainties:
        squares = squares + not_negative("relative_uncertainties", share) ** 2
    return np.asarray(np.sqrt(squares))


def effective_degrees_of_freedom(contributions: ArrayLike, degrees_of_freedom: ArrayLike) -> float:
    """Degrees of freedom of a combined standard uncertainty.

    The Welch-Satterthwaite formula: nu = u_c^4 / sum(u_i^4 / nu_i). For independent, roughly
    normal inputs. An input known from a data sheet has infinitely many.

    Parameters
    ----------
    contributions : array_like, shape (N,)
        Contributions c_i u_i of the inputs, all in the unit of the result.
    degrees_of_freedom : array_like, shape (N,)
        Degrees of freedom of each; above zero, infinity allowed.

    Returns
    -------
    float
        Effective degrees of freedom, infinite when all inputs are; NaN where one is NaN.

    Raises
    ------
    OutOfRange
        If any number of degrees of freedom is not above zero.
    WrongShape
        If the two do not have the same length.

    Source
    ------
    JCGM 100:2008, G.4.1, eq. (G.2b).

    Example
    -------
    >>> f"{effective_degrees_of_freedom([3.0, 4.0], [10, float('inf')]):.1f}"
    '77.2'
    """
    parts = finite("contributions", contributions)
    degrees = np.asarray(degrees_of_freedom, dtype=np.float64)
    if parts.shape != degrees.shape or parts.ndim != 1:
        raise WrongShape("degrees_of_freedom", found=degrees.shape, allowed=f"{parts.shape}")
    if (degrees <= 0.0).any():
        raise OutOfRange("degrees_of_freedom", float(np.nanmin(degrees)), allowed="above zero")
    doubt = float((parts**4 / degrees).sum())
    total = float((parts**2).sum() ** 2)
    if doubt == 0.0:
        return math.inf
    return total / doubt


def coverage_factor(level: float = 0.95, degrees_of_freedom: float = math.inf) -> float:
    """Factor that turns a standard uncertainty into the half-width of a coverage interval.

    Student's t for the degrees of freedom, the normal quantile when they are infinite. For
    results with a bell-shaped distribution.

    Parameters
    ----------
    level : float
        Coverage probability, as a share; above 0 and below 1.
    degrees_of_freedom : float
        Effective degrees of freedom; above zero, infinity allowed.

    Returns
    -------
    float
        Coverage factor k, without unit.

    Raises
    ------
    OutOfRange
        If the level or the degrees of freedom lie outside their range.

    Source
    ------
    JCGM 100:2008, G.3 and table G.2.

    Example
    -------
    >>> f"{coverage_factor(0.95):.3f}"
    '1.960'
    >>> f"{coverage_factor(0.99, degrees_of_freedom=16):.2f}"
    '2.92'
    """
    if not 0.0 < level < 1.0:
        raise OutOfRange("level", found=level, allowed="above 0 and below 1")
    if not degrees_of_freedom > 0.0:
        raise OutOfRange("degrees_of_freedom", found=degrees_of_freedom, allowed="above zero")
    upper = 0.5 + level / 2.0
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import special

    if math.isinf(degrees_of_freedom):
        return float(special.ndtri(upper))
    return float(special.stdtrit(degrees_of_freedom, upper))


def expanded(standard_uncertainty: ArrayLike, coverage_factor: float = 2.0) -> Numbers:
    """Expanded uncertainty: the half-width to print behind a plus-minus sign.

    U = k u. k = 2 covers about 95 % of a normal distribution. Always print k or the level too.

    Parameters
    ----------
    standard_uncertainty : array_like, any shape
        Standard uncertainty, any unit; not negative.
    coverage_factor : float
        Factor k; above zero.

    Returns
    -------
    ndarray, same shape
        Expanded uncertainty, same unit. NaN where the input is NaN.

    Raises
    ------
    OutOfRange
        If an uncertainty is negative or the factor is not above zero.

    Source
    ------
    JCGM 100:2008, 6.2.1, eq. (18).

    Example
    -------
    >>> expanded(0.25)
    array(0.5)
    """
    if not coverage_factor > 0.0:
        raise OutOfRange("coverage_factor", found=coverage_factor, allowed="above zero")
    return np.asarray(coverage_factor * not_negative("standard_uncertainty", standard_uncertainty))
