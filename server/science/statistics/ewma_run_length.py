"""Run lengths of EWMA charts, with limits that are fixed or open with the first readings."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.errors import OutOfRange
from server.science.statistics.signal_chain import SignalChain, each_shift, normal_steps

# Common practice: a one-sided chart is held six of its own standard deviations on the other side,
# where it comes once in a thousand million readings, so that it can be worked out on a bounded
# range; S. Knoth, Seq. Anal. 22 (2003) 241, does so too (from memory).
HELD_AT = -6.0
# Tried here: once the limits have opened to within this share, they are taken as open.
_OPEN = 1e-7


def ewma_run_length(
    weight: float,
    width: float,
    shift: ArrayLike = 0.0,
    start: float = 0.0,
    sides: int = 2,
    opening_limits: bool = False,
) -> Numbers:
    """Average run length of an EWMA chart from its start, by integral equation.

    Zero-state, for independent normal readings whose mean and standard deviation are known. Many
    published tables are for fixed limits at plus and minus `width` of the average's own settled
    standard deviation, sqrt(weight / (2 - weight)). With opening limits, exact for each reading,
    the first readings are watched more closely and a fault from the start is found sooner, at the
    cost of a shorter run without one.

    Parameters
    ----------
    weight : float
        Weight of the newest reading; above 0, at most 1.
    width : float
        Half-width of the limits, in standard deviations of the average; above zero.
    shift : array_like, any shape
        True mean of the readings less the target, in their standard deviations.
    start : float
        Average at the start, in standard deviations of a reading; within the limits.
    sides : int
        2 for limits on both sides, 1 for an upper limit only.
    opening_limits : bool
        Whether the limits follow the exact standard deviation of the average at each reading.

    Returns
    -------
    ndarray, shape of the shifts
        Average number of readings up to and with the signal. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If the weight, the width, the start or the sides are not as said.

    Source
    ------
    Fixed limits: S. V. Crowder, Technometrics 29 (1987) 401; J. M. Lucas and M. S. Saccucci,
    Technometrics 32 (1990) 1. Opening limits: S. Knoth, Sequential Analysis 22 (2003) 241.

    Example
    -------
    >>> ewma_run_length(0.25, 2.998, shift=[0.0, 1.0]).round(2).tolist()
    [499.84, 11.14]
    >>> ewma_run_length(0.25, 2.998, shift=[0.0, 1.0], opening_limits=True).round(2).tolist()
    [495.92, 10.38]
    """
    shifts = finite("shift", shift)
    _check_ewma(weight, width, start, sides)

    def averaged(one: float) -> float:
        chain = ewma_chain(weight, width, one, sides)
        if not opening_limits:
            return chain.average(start)
        before, left = _opening(weight, width, one, start, sides, chain)
        return before + float(left @ chain.averages)

    return each_shift(shifts, averaged)


def ewma_chain(weight: float, width: float, shift: float, sides: int = 2) -> SignalChain:
    """An EWMA with fixed limits as a chain of states between them.

    For what the functions of this module do not offer, such as quantiles: see its methods.

    Parameters
    ----------
    weight : float
        Weight of the newest reading; above 0, at most 1.
    width : float
        Half-width of the limits, in standard deviations of the average; above zero.
    shift : float
        True mean of the readings less the target, in their standard deviations.
    sides : int
        2 for limits on both sides, 1 for an upper limit only.

    Returns
    -------
    SignalChain
        States in standard deviations of a reading; held far below the target when one-sided.

    Raises
    ------
    OutOfRange
        If the weight, the width or the sides are not as said.

    Source
    ------
    S. W. Roberts, Technometrics 1 (1959) 239.

    Example
    -------
    Half of the charts with this weight and these limits have signalled falsely by reading

    >>> ewma_chain(0.1, 2.814, 0.0).quantile(0.0, 0.5)
    349
    """
    _check_ewma(weight, width, 0.0, sides)
    settled = np.sqrt(weight / (2.0 - weight))
    low = -width * settled if sides == 2 else min(HELD_AT, -2.0 * width) * settled
    moves = normal_steps(shift, weight, 1.0 - weight)
    return SignalChain(float(low), float(width * settled), weight, moves, is_held=sides == 1)


def ewma_settled_run_length(
    weight: float, width: float, shift: ArrayLike, sides: int = 2
) -> Numbers:
    """Average run length of an EWMA that ran well for long before the shift came.

    Steady-state: the average is where a chart without a signal settles. By then opening limits
    are open, so this holds for both kinds of limits.

    Parameters
    ----------
    weight : float
        Weight of the newest reading; above 0, at most 1.
    width : float
        Half-width of the limits, in standard deviations of the average; above zero.
    shift : array_like, any shape
        True mean of the readings after the change less the target, in standard deviations.
    sides : int
        2 for limits on both sides, 1 for an upper limit only.

    Returns
    -------
    ndarray, shape of the shifts
        Average number of readings from the first shifted one to the signal. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If the weight, the width or the sides are not as said.

    Source
    ------
    J. M. Lucas and M. S. Saccucci, Technometrics 32 (1990) 1.

    Example
    -------
    >>> ewma_settled_run_length(0.5, 3.071, [1.0, 2.0]).round(2).tolist()
    [17.32, 3.58]
    """
    shifts = finite("shift", shift)
    settled = ewma_chain(weight, width, 0.0, sides).settled
    return each_shift(
        shifts, lambda one: float(settled @ ewma_chain(weight, width, one, sides).averages)
    )


def shewhart_run_length(width: float, shift: ArrayLike = 0.0, sides: int = 2) -> Numbers:
    """Average run length of a chart of single readings against fixed limits.

    It forgets every reading at once, so it is the quickest for large shifts and the slowest for
    small ones; its run length is geometric.

    Parameters
    ----------
    width : float
        Half-width of the limits, in standard deviations; above zero.
    shift : array_like, any shape
        True mean of the readings less the target, in standard deviations.
    sides : int
        2 for limits on both sides, 1 for an upper limit only.

    Returns
    -------
    ndarray, shape of the shifts
        Average number of readings up to and with the signal. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If the width is not above zero or the sides are not 1 or 2.

    Source
    ------
    W. A. Shewhart, Economic Control of Quality of Manufactured Product (1931); normal tail areas.

    Example
    -------
    >>> shewhart_run_length(3.0, [0.0, 1.0, 3.0]).round(1).tolist()
    [370.4, 43.9, 2.0]
    """
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import special

    shifts = finite("shift", shift)
    _check_ewma(1.0, width, 0.0, sides)
    signals = special.ndtr(shifts - width)
    if sides == 2:
        signals = signals + special.ndtr(-shifts - width)
    return np.asarray(1.0 / signals)


def ewma_signal_probability(
    weight: float,
    width: float,
    readings: int,
    shift: float = 0.0,
    sides: int = 2,
    opening_limits: bool = False,
) -> Numbers:
    """Probability that an EWMA chart has signalled by each reading, started at its target.

    Parameters
    ----------
    weight : float
        Weight of the newest reading; above 0, at most 1.
    width : float
        Half-width of the limits, in standard deviations of the average; above zero.
    readings : int
        The last reading asked for; from 1 to 1,000,000.
    shift : float
        True mean of the readings less the target, in standard deviations.
    sides : int
        2 for limits on both sides, 1 for an upper limit only.
    opening_limits : bool
        Whether the limits follow the exact standard deviation of the average at each reading.

    Returns
    -------
    ndarray, shape (readings,)
        Probabilities, as shares; the first is that of a signal at the first reading.

    Raises
    ------
    OutOfRange
        If the weight, the width, the sides or the readings are not as said.

    Source
    ------
    K.-H. Waldmann, Applied Statistics 35 (1986) 151; opening limits: S. Knoth, Sequential
    Analysis 22 (2003) 241.

    Example
    -------
    >>> ewma_signal_probability(0.1, 2.814, 3, shift=1.0).round(4).tolist()
    [0.0, 0.0004, 0.0086]
    """
    _check_ewma(weight, width, 0.0, sides)
    if not 1 <= readings <= 1_000_000:
        raise OutOfRange("readings", found=readings, allowed="1 to 1,000,000")
    finite("shift", shift)
    chain = ewma_chain(weight, width, shift, sides)
    if not opening_limits:
        return 1.0 - chain.survival(0.0, readings)[1:]
    silent: list[float] = []
    _, left = _opening(weight, width, shift, 0.0, sides, chain, silent)
    while len(silent) < readings:
        silent.append(float(left.sum()))
        left = left @ chain.matrix
    return 1.0 - np.array(silent[:readings])


def _opening(
    weight: float,
    width: float,
    shift: float,
    start: float,
    sides: int,
    chain: SignalChain,
    silent: list[float] | None = None,
) -> tuple[float, Numbers]:
    """Readings spent until the limits are open, and where the charts without a signal are then.

    The first is the sum of the probabilities that a chart is still running, the second a mass on
    each state of the chain of fixed limits. Each probability after a reading, while the limits
    still open, goes to `silent`.
    """
    keep = 1.0 - weight
    readings = 1
    running = 1.0
    spent = 0.0
    # Before the first reading every chart is at the start.
    former, mass = np.array([start]), np.ones(1)
    while True:
        open_share = np.sqrt(1.0 - keep ** (2 * readings))
        spent += running
        is_open = 1.0 - open_share < _OPEN
        high = chain.high if is_open else chain.high * open_share
        low = -high if sides == 2 else chain.low
        now = SignalChain(low, high, weight, normal_steps(shift, weight, keep), sides == 1)
        mass = mass @ now.moves(former)
        former = now.states
        if is_open:
            # The states are those of the chain now, which counts on from here.
            return spent, mass
        running = float(mass.sum())
        if silent is not None:
            silent.append(running)
        readings += 1


def _check_ewma(weight: float, width: float, start: float, sides: int) -> None:
    """Refuse charts that cannot be."""
    if not 0.0 < weight <= 1.0:
        raise OutOfRange("weight", found=weight, allowed="above 0, at most 1")
    above_zero("width", width)
    if sides not in (1, 2):
        raise OutOfRange("sides", found=sides, allowed="1 or 2")
    limit = width * np.sqrt(weight / (2.0 - weight))
    if not abs(start) <= limit:
        raise OutOfRange("start", found=start, allowed=f"within {limit:g} of the target")
