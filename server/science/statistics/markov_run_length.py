"""Run lengths of charts by a Markov chain of cells, as a check of the integral equations."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.errors import OutOfRange
from server.science.statistics.signal_chain import each_shift

# The largest chain that is solved: 32 MB, about a second for each shift.
MOST_CELLS = 2000


def cusum_markov_run_length(
    k: float, h: float, shift: ArrayLike = 0.0, head_start: float = 0.0, cells: int = 200
) -> Numbers:
    """Average run length of a one-sided CUSUM from its start, by a Markov chain.

    The range of the sum is cut into cells, each held to sit at its middle, the first at zero. The
    error falls with the square of the number of cells; two numbers of cells and Richardson's rule
    give four more digits. Kept beside the integral equation as an independent check of it. Zero-
    state, independent normal readings with known mean and standard deviation.

    Parameters
    ----------
    k : float
        Reference value, in standard deviations.
    h : float
        Limit, in standard deviations; above zero.
    shift : array_like, any shape
        True mean of the readings less the target, in standard deviations.
    head_start : float
        Sum at the start, in standard deviations; zero to h. Taken at the nearest cell.
    cells : int
        Number of cells, 5 to 2000.

    Returns
    -------
    ndarray, shape of the shifts
        Average run length, in readings. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If h is not above zero, or the head start or the cells are not as said.

    Source
    ------
    D. Brook and D. A. Evans, Biometrika 59 (1972) 539.

    Example
    -------
    >>> f"{cusum_markov_run_length(0.5, 4.0):.2f}"
    '335.35'
    """
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import special

    shifts = finite("shift", shift)
    limit = float(above_zero("h", h))
    finite("k", k)
    _check_cells(cells)
    if not 0.0 <= head_start <= limit:
        raise OutOfRange("head_start", found=head_start, allowed=f"from 0 to {limit:g}")
    # The first cell reaches from minus to plus half a width, so that its middle is zero.
    wide = 2.0 * limit / (2 * cells - 1)
    middles = wide * np.arange(cells)
    started = round(head_start / wide)

    def averaged(one: float) -> float:
        upper = middles[np.newaxis, :] + wide / 2.0 - middles[:, np.newaxis] + k - one
        below = special.ndtr(upper)
        moves = np.diff(below, axis=1, prepend=0.0)
        return float(
            np.linalg.solve(np.eye(cells) - moves, np.ones(cells))[min(started, cells - 1)]
        )

    return each_shift(shifts, averaged)


def ewma_markov_run_length(
    weight: float, width: float, shift: ArrayLike = 0.0, cells: int = 201
) -> Numbers:
    """Average run length of a two-sided EWMA with fixed limits, by a Markov chain.

    As `cusum_markov_run_length`, with cells between the two limits and the start in the middle
    one. For small weights many cells are needed: a step should be wider than a cell.

    Parameters
    ----------
    weight : float
        Weight of the newest reading; above 0, at most 1.
    width : float
        Half-width of the limits, in standard deviations of the average; above zero.
    shift : array_like, any shape
        True mean of the readings less the target, in standard deviations.
    cells : int
        Number of cells, odd, 5 to 2000.

    Returns
    -------
    ndarray, shape of the shifts
        Average run length, in readings. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If the weight, the width or the cells are not as said.

    Source
    ------
    J. M. Lucas and M. S. Saccucci, Technometrics 32 (1990) 1, appendix.

    Example
    -------
    >>> f"{ewma_markov_run_length(0.2, 3.0):.1f}"
    '559.6'
    """
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import special

    shifts = finite("shift", shift)
    if not 0.0 < weight <= 1.0:
        raise OutOfRange("weight", found=weight, allowed="above 0, at most 1")
    _check_cells(cells)
    if cells % 2 == 0:
        raise OutOfRange("cells", found=cells, allowed="an odd number")
    limit = float(above_zero("width", width)) * np.sqrt(weight / (2.0 - weight))
    edges = np.linspace(-limit, limit, cells + 1)
    middles = (edges[:-1] + edges[1:]) / 2.0

    def averaged(one: float) -> float:
        readings = (edges[np.newaxis, :] - (1.0 - weight) * middles[:, np.newaxis]) / weight
        moves = np.diff(special.ndtr(readings - one), axis=1)
        return float(np.linalg.solve(np.eye(cells) - moves, np.ones(cells))[cells // 2])

    return each_shift(shifts, averaged)


def _check_cells(cells: int) -> None:
    """Refuse chains that are too coarse to mean anything or too large to solve."""
    if not 5 <= cells <= MOST_CELLS:
        raise OutOfRange("cells", found=cells, allowed=f"5 to {MOST_CELLS}")
