"""Measured flows adjusted within their uncertainties until the balances close, and tested."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, finite, not_negative
from server.science.errors import OutOfRange, WrongShape
from server.science.uncertainty.propagation import correlation_matrix

# House rule: a share of the largest number beside it below which a number is a rounding error.
ROUNDING = 1e-9


@dataclass(frozen=True)
class Reconciled:
    """Flows that close the balances, with what was done to them and what it says of them.

    Arrays have one number per flow, in the order of the flows. `values` and
    `standard_uncertainties` are of the flows as they now are, worked out from the others where
    they were not measured, NaN where the balances do not say; `covariance` is of all of them.
    `adjustments` are new less measured, NaN where not measured. `scores` are the tests of the
    measurements, in standard deviations, NaN where nothing checks one. `redundant` marks
    measurements that others check; `observable` flows that are known, measured or not.

    `statistic` is the sum of squares of the adjustments in their uncertainties, chi squared with
    `degrees_of_freedom` if all is well, and `p_value` the chance of one as large or larger (NaN
    without a degree of freedom). `critical_score` is what the largest of all scores passes by
    chance with the same probability as the level leaves. `suspects` are the places of the
    measurements with the largest score if it passes: one, or several that no balance tells apart.
    """

    values: Numbers
    standard_uncertainties: Numbers
    covariance: Numbers
    adjustments: Numbers
    scores: Numbers
    redundant: NDArray[np.bool_]
    observable: NDArray[np.bool_]
    statistic: float
    degrees_of_freedom: int
    p_value: float
    critical_score: float
    suspects: tuple[int, ...]


@dataclass(frozen=True)
class Elimination:
    """Measurements taken out one after another, and the reconciliation before and after each.

    `removed` are places in the order of removal; `steps` has one reconciliation more, of which
    the last is the one to use. It can still have `suspects`: several that cannot be told apart.
    """

    removed: tuple[int, ...]
    steps: tuple[Reconciled, ...]


def sidak_score(tests: int, level: float = 0.95) -> float:
    """Score that the largest of many tests passes by chance as seldom as a single one would.

    The two-sided normal quantile for 1 - level^(1/m): the more measurements are tested, the
    larger a score must be to mean anything. Exact for independent tests, on the safe side else.

    Parameters
    ----------
    tests : int
        Number m of tests; 1 or more.
    level : float
        Probability that no good measurement is suspected; above 0 and below 1.

    Returns
    -------
    float
        Critical score, in standard deviations.

    Raises
    ------
    OutOfRange
        If there is no test or the level lies outside its range.

    Source
    ------
    R. S. H. Mah and A. C. Tamhane, AIChE J. 28 (1982) 828; Z. Sidak, J. Am. Stat. Assoc. 62
    (1967) 626.

    Example
    -------
    >>> f"{sidak_score(1):.3f} {sidak_score(6):.3f}"
    '1.960 2.631'
    """
    if tests < 1:
        raise OutOfRange("tests", found=tests, allowed="1 or more")
    if not 0.0 < level < 1.0:
        raise OutOfRange("level", found=level, allowed="above 0 and below 1")
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import special

    # expm1 and log keep the digits of a small probability.
    single = -math.expm1(math.log(level) / tests)
    return float(-special.ndtri(single / 2.0))


def reconciled(
    balances: ArrayLike,
    values: ArrayLike,
    standard_uncertainties: ArrayLike,
    correlation: ArrayLike | None = None,
    totals: ArrayLike | None = None,
    level: float = 0.95,
) -> Reconciled:
    """Flows nearest to the measured ones that close every balance.

    Weighted least squares: the sum of squares of the adjustments, in the uncertainties and with
    the correlation of the measurements, is the least that does it. Flows that are not measured
    are taken out of the balances by projection, and worked out from the adjusted ones where
    these say enough. Balances may depend on one another. For linear balances of normal errors; a
    result can be negative.

    Parameters
    ----------
    balances : array_like, shape (m, n)
        Coefficient of each flow in each balance: 1 for in, -1 for out; any unit and any scale.
    values : array_like, shape (n,)
        Measured flows, in one unit; NaN where not measured.
    standard_uncertainties : array_like, shape (n,)
        Their standard uncertainties, same unit; not negative, zero for a flow known exactly. A
        flow with NaN counts as not measured, as nothing says what it weighs.
    correlation : array_like, shape (n, n), optional
        Correlation coefficients of the measurements; independent where not given. Rows of flows
        that are not measured are not looked at beyond being correlations.
    totals : array_like, shape (m,), optional
        What each balance comes to, such as a change of stock known exactly; zero where not given.
    level : float
        Probability that no good measurement is suspected; above 0 and below 1.

    Returns
    -------
    Reconciled
        Arrays of shape (n,), covariance (n, n); NaN for flows that cannot be known.

    Raises
    ------
    OutOfRange
        If a number is infinite, an uncertainty negative, the correlation impossible, the level
        outside its range, or if the balances contradict each other or flows known exactly.
    WrongShape
        If the arrays do not belong together.

    Source
    ------
    S. Narasimhan and C. Jordache, Data Reconciliation and Gross Error Detection, Gulf, 2000, ch. 3
    and 7; projection: C. M. Crowe, Y. A. Garcia Campos and A. Hrymak, AIChE J. 29 (1983) 881;
    tests: R. S. H. Mah and A. C. Tamhane, AIChE J. 28 (1982) 828 (in the form of maximum power).

    Example
    -------
    Copper comes in, leaves in the spent bath and on the cathodes, kg/h.

    >>> result = reconciled([[1, -1, -1]], [1000, 905, 102], [10, 9, 2])
    >>> result.values.round(2).tolist()
    [1003.78, 901.94, 101.85]
    >>> f"{result.statistic:.3f} {result.p_value:.2f} {result.suspects}"
    '0.265 0.61 ()'
    """
    matrix, measured, errors, aims = _belonging(balances, values, standard_uncertainties, totals)
    known = np.isfinite(measured) & np.isfinite(errors)
    root = _root(errors, known, correlation)
    free = _Free(matrix[:, ~known])
    solved = _solved(free.without @ matrix[:, known], free.without @ aims, measured[known], root)
    # Each flow as a sum of the measured ones, and of what the balances come to.
    shares = np.zeros((measured.size, solved.flows.size))
    shares[known] = np.eye(solved.flows.size)
    shares[~known] = -free.solve @ matrix[:, known]
    flows = shares @ solved.flows
    flows[~known] += free.solve @ aims
    covariance = shares @ solved.covariance @ shares.T
    observable = _placed(known, True, ~known, free.observable)
    flows[~observable] = np.nan
    covariance[~observable, :] = covariance[:, ~observable] = np.nan
    scores = np.full(measured.shape, np.nan)
    scores[known] = solved.scores
    redundant = _placed(known, solved.checked, ~known, False)
    critical = sidak_score(max(int(redundant.sum()), 1), level)
    return Reconciled(
        values=flows,
        standard_uncertainties=np.sqrt(np.maximum(np.diag(covariance), 0.0)),
        covariance=covariance,
        adjustments=np.where(known, flows - measured, np.nan),
        scores=scores,
        redundant=redundant,
        observable=observable,
        statistic=solved.statistic,
        degrees_of_freedom=solved.degrees,
        p_value=_chance(solved.statistic, solved.degrees),
        critical_score=critical,
        suspects=_suspects(scores, critical),
    )


def without_gross_errors(
    balances: ArrayLike,
    values: ArrayLike,
    standard_uncertainties: ArrayLike,
    correlation: ArrayLike | None = None,
    totals: ArrayLike | None = None,
    level: float = 0.95,
) -> Elimination:
    """Reconciliation from which measurements that do not fit are taken out one after another.

    The measurement with the largest score beyond the critical one counts as not measured, and all
    is reconciled again, until none is left or several cannot be told apart. Taking one out lowers
    the statistic by the square of its score, so that no other would lower it more. A suggestion:
    that a meter disagrees with the others does not prove that it is the wrong one.

    Parameters
    ----------
    balances : array_like, shape (m, n)
        Coefficient of each flow in each balance.
    values : array_like, shape (n,)
        Measured flows, in one unit; NaN where not measured.
    standard_uncertainties : array_like, shape (n,)
        Their standard uncertainties, same unit; not negative.
    correlation : array_like, shape (n, n), optional
        Correlation coefficients of the measurements; independent where not given.
    totals : array_like, shape (m,), optional
        What each balance comes to; zero where not given.
    level : float
        Probability, at each step, that no good measurement is suspected; above 0 and below 1.

    Returns
    -------
    Elimination
        What was taken out, and every step.

    Raises
    ------
    OutOfRange
        As for `reconciled`.
    WrongShape
        As for `reconciled`.

    Source
    ------
    S. Narasimhan and C. Jordache, Data Reconciliation and Gross Error Detection, Gulf, 2000, ch. 8
    (serial elimination).

    Example
    -------
    Two balances, the second meter 30 too high.

    >>> flows = [[1, -1, 0, 0], [0, 1, -1, -1], [1, 0, -1, -1]]
    >>> found = without_gross_errors(flows, [100, 130, 60, 41], [1, 1, 1, 1])
    >>> found.removed
    (1,)
    >>> found.steps[-1].values.round(2).tolist()
    [100.33, 100.33, 59.67, 40.67]
    """
    measured = np.array(values, dtype=np.float64)
    removed: list[int] = []
    steps = [reconciled(balances, measured, standard_uncertainties, correlation, totals, level)]
    while len(steps[-1].suspects) == 1:
        removed.append(steps[-1].suspects[0])
        measured[removed[-1]] = np.nan
        steps.append(
            reconciled(balances, measured, standard_uncertainties, correlation, totals, level)
        )
    return Elimination(tuple(removed), tuple(steps))


class _Free:
    """Flows that are not measured: how to take them out of the balances and work them out."""

    def __init__(self, columns: Numbers) -> None:
        left, singular, right = np.linalg.svd(columns, full_matrices=True)
        rank = int((singular > ROUNDING * np.max(singular, initial=0.0)).sum())
        # Combinations of the balances in which none of these flows appears.
        self.without = left[:, rank:].T
        self.solve = right[:rank].T @ (left[:, :rank] / singular[:rank]).T
        # A flow is known unless it can change with others while every balance stays closed.
        self.observable = np.abs(right[rank:]).max(axis=0, initial=0.0) < ROUNDING


def _belonging(
    balances: ArrayLike, values: ArrayLike, errors: ArrayLike, totals: ArrayLike | None
) -> tuple[Numbers, Numbers, Numbers, Numbers]:
    """The four as arrays that belong together, each balance brought to a scale of one."""
    matrix = finite("balances", balances)
    measured = finite("values", values)
    if matrix.ndim != 2 or np.isnan(matrix).any():
        raise WrongShape("balances", found=matrix.shape, allowed="balances by flows, none missing")
    if measured.shape != (matrix.shape[1],):
        raise WrongShape("values", found=measured.shape, allowed=f"({matrix.shape[1]},)")
    doubts = not_negative("standard_uncertainties", errors)
    if doubts.shape != measured.shape:
        raise WrongShape("standard_uncertainties", doubts.shape, allowed=f"{measured.shape}")
    aims = finite("totals", np.zeros(matrix.shape[0]) if totals is None else totals)
    if aims.shape != (matrix.shape[0],) or np.isnan(aims).any():
        raise WrongShape("totals", found=aims.shape, allowed=f"({matrix.shape[0]},), none missing")
    largest = np.abs(matrix).max(axis=1, initial=0.0)
    scale = np.where(largest > 0.0, largest, 1.0)
    return matrix / scale[:, None], measured, doubts, aims / scale


def _root(errors: Numbers, known: NDArray[np.bool_], correlation: ArrayLike | None) -> Numbers:
    """A matrix that turns independent unit errors into those of the measurements."""
    if correlation is None:
        return np.diag(errors[known])
    related = correlation_matrix(correlation, errors.size)[np.ix_(known, known)]
    spread, axes = np.linalg.eigh(related)
    return np.asarray(errors[known, None] * axes * np.sqrt(np.maximum(spread, 0.0)))


@dataclass(frozen=True)
class _Solved:
    """The measured flows adjusted, once the others are out of the balances."""

    flows: Numbers
    covariance: Numbers
    scores: Numbers
    checked: NDArray[np.bool_]
    statistic: float
    degrees: int


def _solved(balances: Numbers, aims: Numbers, measured: Numbers, root: Numbers) -> _Solved:
    """The shortest step of independent unit errors that closes the balances, and its tests."""
    miss = aims - balances @ measured
    left, singular, right = np.linalg.svd(balances @ root, full_matrices=False)
    kept = singular > ROUNDING * np.max(singular, initial=0.0)
    left, singular, right = left[:, kept], singular[kept], right[kept]
    left_over = np.abs(miss - left @ (left.T @ miss))
    scale = np.abs(aims) + np.abs(balances) @ np.abs(measured)
    if (left_over > ROUNDING * np.max(scale, initial=0.0)).any():
        allowed = "no contradiction of numbers known exactly"
        raise OutOfRange("balances", found=float(left_over.max()), allowed=allowed)
    moved = right.T @ (left.T @ miss / singular)
    # How hard the balances pull at each measurement, and how hard they do so by chance.
    pull = balances.T @ (left @ (left.T @ miss / singular**2))
    by_chance = np.sqrt(((left.T @ balances / singular[:, None]) ** 2).sum(axis=0))
    checked = np.abs(balances).max(axis=0, initial=0.0) > ROUNDING
    tested = checked & (by_chance > 0.0)
    return _Solved(
        flows=measured + root @ moved,
        covariance=root @ (np.eye(root.shape[1]) - right.T @ right) @ root.T,
        scores=np.divide(pull, by_chance, out=np.full(pull.shape, np.nan), where=tested),
        checked=checked,
        statistic=float(moved @ moved),
        degrees=int(singular.size),
    )


def _placed(
    here: NDArray[np.bool_],
    of_these: NDArray[np.bool_] | bool,
    there: NDArray[np.bool_],
    of_those: NDArray[np.bool_] | bool,
) -> NDArray[np.bool_]:
    """Marks of two groups of flows in the order of all flows."""
    marks = np.zeros(here.shape, dtype=bool)
    marks[here], marks[there] = of_these, of_those
    return marks


def _chance(statistic: float, degrees: int) -> float:
    """Chance of a sum of squares as large or larger."""
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import special

    return float(special.chdtrc(degrees, statistic)) if degrees else math.nan


def _suspects(scores: Numbers, critical: float) -> tuple[int, ...]:
    """Measurements with the largest score, where it is beyond the critical one."""
    sizes = np.nan_to_num(np.abs(scores))
    largest = np.max(sizes, initial=0.0)
    if largest <= critical:
        return ()
    # Scores that differ by rounding alone are those of measurements that nothing tells apart.
    return tuple(int(place) for place in np.flatnonzero(sizes >= largest * (1.0 - 1e-7)))
