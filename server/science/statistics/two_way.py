"""What is common to a cell and what to a round: additive fits of a table that wild values spare."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, finite, not_negative
from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.spread import NORMAL_CONSISTENCY, median

# P. J. Huber, Ann. Math. Stat. 35 (1964) 73: bound that keeps 95 % efficiency for normal values.
HUBER_BOUND = 1.345
# A. E. Beaton and J. W. Tukey, Technometrics 16 (1974) 147: the same for the biweight.
BIWEIGHT_BOUND = 4.685


@dataclass(frozen=True)
class TwoWay:
    """A table as overall + cell + round + residual, all in its unit.

    `cells` and `rounds` have a median of zero each, and are NaN where nothing was read.
    `residuals` have the shape of the table, NaN where it has. `scale` is the robust standard
    deviation of the residuals. `converged` says that further sweeps would change nothing;
    `connected` that every cell can be compared with every other, by way of the rounds in which
    they were read. Where it is False, effects hold only within each part of the table.
    """

    overall: float
    cells: Numbers
    rounds: Numbers
    residuals: Numbers
    scale: float
    converged: bool
    sweeps: int
    connected: bool

    @property
    def fitted(self) -> Numbers:
        """What the fit makes of every place of the table, read or not."""
        return np.asarray(self.overall + self.cells[:, None] + self.rounds)


def median_polish(values: ArrayLike, most_sweeps: int = 50) -> TwoWay:
    """Additive fit of a table by medians, taken out of its rows and columns in turn.

    Tukey's median polish: up to nearly half of the values of each row and column may be wild.
    Every sweep takes the medians of all rows at once and then of all columns, so that the order
    in which they stand is without influence; that rows come first is not.

    Parameters
    ----------
    values : array_like, shape (cells, rounds)
        Readings of each cell in each round, any unit; NaN where missing.
    most_sweeps : int
        Sweeps after which to stop in any case; 1 or more.

    Returns
    -------
    TwoWay
        The fit; all NaN where nothing was read.

    Raises
    ------
    OutOfRange
        If a value is infinite or there is no sweep.
    WrongShape
        If the values are no table.

    Source
    ------
    J. W. Tukey, Exploratory Data Analysis, Addison-Wesley, 1977, ch. 11.

    Example
    -------
    Three cells in three rounds, the current higher in the last; the middle cell was shorted once.

    >>> fit = median_polish([[2.00, 2.01, 2.10], [2.02, 1.60, 2.12], [1.99, 2.00, 2.09]])
    >>> fit.cells.round(3).tolist(), fit.rounds.round(3).tolist()
    ([0.0, 0.02, -0.01], [-0.01, 0.0, 0.09])
    >>> fit.residuals.round(3)[1].tolist()
    [0.0, -0.43, 0.0]
    """
    table = _table(values)
    if most_sweeps < 1:
        raise OutOfRange("most_sweeps", found=most_sweeps, allowed="1 or more")
    left = table.copy()
    cells, rounds = np.zeros(table.shape[0]), np.zeros(table.shape[1])
    converged, sweep = False, 0
    while not converged and sweep < most_sweeps:
        sweep += 1
        by_cell = median(left, axis=1)
        left = left - by_cell[:, None]
        by_round = median(left, axis=0)
        left = left - by_round
        cells, rounds = cells + by_cell, rounds + by_round
        converged = _still(np.concatenate([by_cell, by_round]), _scale(left, upper=False))
    return _centred(table, cells, rounds, _scale(left, upper=False), converged, sweep)


def robust_two_way(
    values: ArrayLike,
    weights: ArrayLike | None = None,
    drop_lows: bool = False,
    floor: float = 0.0,
    most_sweeps: int = 200,
) -> TwoWay:
    """Additive fit of a table that good values determine together and wild ones hardly.

    Starts from the medians and goes on with weighted means, in which a value counts less the
    further it lies from the fit (Huber). It uses good values to 95 %, where medians use 64 %. A
    short only ever lowers a voltage, and one power cut lowers many at once: with `drop_lows` the
    deviation is taken from the values above the fit alone, and low values lose all weight (the
    biweight), so that they no longer draw the centre down. Less than half of each cell and
    of each round may be wild all the same. Rows and columns may stand in any order.

    Parameters
    ----------
    values : array_like, shape (cells, rounds)
        Readings of each cell in each round, any unit; NaN where missing.
    weights : array_like, broadcast with the values, optional
        How much each reading counts beforehand, such as 1 over its variance in some unit; not
        negative, zero for none. All the same where not given.
    drop_lows : bool
        Let low values lose all their weight, and high ones not.
    floor : float
        Least standard deviation, unit of the values, such as the accuracy of the meter; not
        negative. With more than half of the residuals zero there is no other.
    most_sweeps : int
        Sweeps after which to stop in any case; 1 or more.

    Returns
    -------
    TwoWay
        The fit; all NaN where nothing was read.

    Raises
    ------
    OutOfRange
        If a value is infinite, a weight or the floor negative, or there is no sweep.
    WrongShape
        If the values are no table, or the weights do not fit it.

    Source
    ------
    P. J. Huber, Robust Statistics, Wiley, 1981, ch. 7 and 8 (weights for regression).

    Example
    -------
    Eight cells, three of which are shorted in the second of three rounds, all else alike.

    >>> volts = 2.0 + 0.003 * np.cos(np.arange(24.0)).reshape(8, 3)
    >>> volts[:3, 1] -= 0.2
    >>> f"{1000 * robust_two_way(volts).rounds[1]:.1f} mV"
    '-2.3 mV'
    >>> f"{1000 * robust_two_way(volts, drop_lows=True).rounds[1]:.1f} mV"
    '-0.1 mV'
    """
    table = _table(values)
    try:
        prior = np.broadcast_to(
            not_negative("weights", 1.0 if weights is None else weights), table.shape
        )
    except ValueError as problem:
        if isinstance(problem, OutOfRange):
            raise
        shape = np.asarray(weights).shape
        raise WrongShape("weights", shape, allowed=f"broadcast with {table.shape}") from problem
    least = float(not_negative("floor", floor))
    counted = np.where(np.isfinite(prior) & (prior > 0.0), table, np.nan)
    # A few sweeps leave no wild values in the medians; the means do the rest.
    start = median_polish(counted, most_sweeps=min(most_sweeps, 10))
    cells, rounds = start.overall + start.cells, start.rounds
    scale, converged, sweep = max(_scale(start.residuals, drop_lows), least), start.converged, 0
    settled = not scale > 0.0
    while not settled and sweep < most_sweeps:
        sweep += 1
        left = counted - cells[:, None] - rounds
        # Held after some sweeps: a scale that goes on answering to the fit may swing for ever.
        if sweep <= 10:
            scale = max(_scale(left, drop_lows), least) or scale
        trust = np.where(np.isfinite(left), prior * _trust(left / scale, drop_lows), 0.0)
        by_cell = _mean(left, trust, axis=1)
        by_round = _mean(left - by_cell[:, None], trust, axis=0)
        cells, rounds = cells + by_cell, rounds + by_round
        settled = converged = _still(np.concatenate([by_cell, by_round]), scale)
    return _centred(table, cells, rounds, scale, converged, start.sweeps + sweep, counted)


def _table(values: ArrayLike) -> Numbers:
    """The values, once it is certain that they are a table."""
    table = finite("values", values)
    if table.ndim != 2:
        raise WrongShape("values", found=table.shape, allowed="cells by rounds")
    return table


def _still(changes: Numbers, scale: float) -> bool:
    """Whether the last changes are nothing beside the scale of the residuals."""
    return bool(np.nan_to_num(np.abs(changes)).max(initial=0.0) <= 1e-7 * scale)


def _scale(residuals: Numbers, upper: bool) -> float:
    """Robust standard deviation around zero, of all residuals or of those above zero."""
    sizes = np.abs(residuals[np.isfinite(residuals)])
    if upper:
        # A residual that is zero but for rounding lies on neither side, whatever its sign.
        sizes = residuals[residuals > 1e-9 * sizes.max(initial=0.0)]
    return NORMAL_CONSISTENCY * float(median(sizes)) if sizes.size else 0.0


def _trust(scores: Numbers, drop_lows: bool) -> Numbers:
    """Weight of residuals in standard deviations: Huber's, or the biweight for low ones."""
    sizes = np.abs(scores)
    with np.errstate(divide="ignore"):
        trust = np.minimum(1.0, HUBER_BOUND / sizes)
    if drop_lows:
        biweight = np.maximum(1.0 - (sizes / BIWEIGHT_BOUND) ** 2, 0.0) ** 2
        trust = np.where(scores < 0.0, biweight, trust)
    return np.asarray(trust)


def _mean(values: Numbers, weights: Numbers, axis: int) -> Numbers:
    """Weighted mean along an axis; zero where nothing has a weight, NaN where nothing is there."""
    total = weights.sum(axis=axis)
    weighed = np.where(weights > 0.0, values * weights, 0.0).sum(axis=axis)
    mean = np.divide(weighed, total, out=np.zeros(total.shape), where=total > 0.0)
    return np.asarray(np.where(np.isfinite(values).any(axis=axis), mean, np.nan))


def _centred(
    table: Numbers,
    cells: Numbers,
    rounds: Numbers,
    scale: float,
    converged: bool,
    sweeps: int,
    counted: Numbers | None = None,
) -> TwoWay:
    """The fit with effects that have a median of zero each."""
    there = np.isfinite(table if counted is None else counted)
    if not there.any():
        nothing = np.full(table.shape, math.nan)
        cells, rounds = np.full(cells.shape, math.nan), np.full(rounds.shape, math.nan)
        return TwoWay(math.nan, cells, rounds, nothing, math.nan, True, sweeps, connected=True)
    middle_cell, middle_round = float(median(cells)), float(median(rounds))
    cells, rounds = cells - middle_cell, rounds - middle_round
    overall = middle_cell + middle_round
    return TwoWay(
        overall=overall,
        cells=cells,
        rounds=rounds,
        residuals=table - overall - cells[:, None] - rounds,
        scale=scale,
        converged=converged,
        sweeps=sweeps,
        connected=_connected(there),
    )


def _connected(there: NDArray[np.bool_]) -> bool:
    """Whether all cells and rounds with a reading hang together by readings."""
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy.sparse import bmat, csr_array
    from scipy.sparse.csgraph import connected_components

    read = csr_array(there[there.any(axis=1)][:, there.any(axis=0)])
    parts, _ = connected_components(bmat([[None, read], [read.T, None]]), directed=False)
    return bool(parts == 1)
