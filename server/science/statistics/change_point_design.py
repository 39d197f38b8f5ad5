"""Run lengths and thresholds of the Shiryaev-Roberts evidence, by integral equation."""

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.errors import OutOfRange
from server.science.statistics.signal_chain import SignalChain, each_shift

# Tried here: below this logarithm R adds less than 4e-7 to the 1 beside it, so that all such states
# are one.
_AS_GOOD_AS_ZERO = -15.0


def shiryaev_roberts_run_length(
    threshold: float, size: float, shift: ArrayLike = 0.0, start: float = 0.0
) -> Numbers:
    """Average run length of the Shiryaev-Roberts evidence, by integral equation.

    Zero-state, for independent normal readings with known mean and standard deviation. Without a
    change it is at least the threshold less the start (R less the number of readings is a
    martingale), and nearly proportional to it.

    Parameters
    ----------
    threshold : float
        R at which it signals; above zero.
    size : float
        Shift that the evidence is made for, in standard deviations; above zero.
    shift : array_like, any shape
        True shift in the sense looked for, in standard deviations.
    start : float
        R before the first reading; zero or more, below the threshold.

    Returns
    -------
    ndarray, shape of the shifts
        Average number of readings up to and with the signal. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If the threshold, the size or the start is not as said.

    Source
    ------
    G. V. Moustakides, A. S. Polunchenko and A. G. Tartakovsky, Communications in Statistics:
    Theory and Methods 38 (2009) 3225.

    Example
    -------
    >>> shiryaev_roberts_run_length(560.37, 1.0, [0.0, 1.0]).round(2).tolist()
    [1000.79, 11.14]
    """
    shifts = finite("shift", shift)
    limit = float(above_zero("threshold", threshold))
    if not 0.0 <= start < limit:
        raise OutOfRange("start", found=start, allowed=f"zero or more, below {limit:g}")
    begun = _AS_GOOD_AS_ZERO if start == 0.0 else float(np.log(start))
    return each_shift(shifts, lambda one: shiryaev_roberts_chain(limit, size, one).average(begun))


def shiryaev_roberts_settled_run_length(threshold: float, size: float, shift: ArrayLike) -> Numbers:
    """Average run length of the Shiryaev-Roberts evidence that ran well for long before.

    Steady-state: from where the evidence settles when it does not signal.

    Parameters
    ----------
    threshold : float
        R at which it signals; above zero.
    size : float
        Shift that the evidence is made for, in standard deviations; above zero.
    shift : array_like, any shape
        True shift after the change in the sense looked for, in standard deviations.

    Returns
    -------
    ndarray, shape of the shifts
        Average number of readings from the first shifted one to the signal. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If the threshold or the size is not above zero.

    Source
    ------
    G. V. Moustakides, A. S. Polunchenko and A. G. Tartakovsky, Communications in Statistics:
    Theory and Methods 38 (2009) 3225.

    Example
    -------
    >>> f"{shiryaev_roberts_settled_run_length(560.37, 1.0, 1.0):.2f}"
    '9.64'
    """
    shifts = finite("shift", shift)
    limit = float(above_zero("threshold", threshold))
    settled = shiryaev_roberts_chain(limit, size, 0.0).settled
    return each_shift(
        shifts, lambda one: float(settled @ shiryaev_roberts_chain(limit, size, one).averages)
    )


def shiryaev_roberts_threshold(run_length: float, size: float) -> float:
    """Threshold of the Shiryaev-Roberts evidence for a wanted average run length without a change.

    By root finding on the integral equation, to a relative error of 1e-6 of the run length.

    Parameters
    ----------
    run_length : float
        Wanted average number of readings until a false signal; 2 to 1e8.
    size : float
        Shift that the evidence is made for, in standard deviations; above zero.

    Returns
    -------
    float
        R at which to signal.

    Raises
    ------
    OutOfRange
        If the run length lies outside its range or cannot be reached, or the size is not above
        zero.

    Source
    ------
    M. Pollak, Annals of Statistics 15 (1987) 749: the run length over the threshold tends to a
    constant of the size (from memory).

    Example
    -------
    >>> f"{shiryaev_roberts_threshold(1000.0, 1.0):.1f}"
    '559.9'
    """
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import optimize

    if not 2.0 <= run_length <= 1e8:
        raise OutOfRange("run_length", found=run_length, allowed="2 to 1e8")
    above_zero("size", size)

    def missed(log_threshold: float) -> float:
        found = shiryaev_roberts_run_length(float(np.exp(log_threshold)), size)
        return float(np.log(found / run_length))

    # The run length is at least the threshold, so that the root lies below the wanted one.
    high = float(np.log(run_length))
    low = high - 1.0
    while missed(low) > 0.0:
        low -= 2.0
        if low < _AS_GOOD_AS_ZERO / 2.0:
            raise OutOfRange(
                "run_length", found=run_length, allowed=f"more, for a size of {size:g}"
            )
    return float(np.exp(optimize.brentq(missed, low, high, xtol=1e-9, rtol=1e-9)))


def shiryaev_roberts_chain(threshold: float, size: float, shift: float) -> SignalChain:
    """The logarithm of the Shiryaev-Roberts evidence as a chain of states.

    For what the functions of this module do not offer, such as quantiles: see its methods.

    Parameters
    ----------
    threshold : float
        R at which it signals; above zero.
    size : float
        Shift that the evidence is made for, in standard deviations; above zero.
    shift : float
        True shift in the sense looked for, in standard deviations.

    Returns
    -------
    SignalChain
        States are ln R; all below -15 are one.

    Raises
    ------
    OutOfRange
        If the threshold or the size is not above zero.

    Source
    ------
    S. W. Roberts, Technometrics 8 (1966) 411, as a logarithm.

    Example
    -------
    >>> shiryaev_roberts_chain(100.0, 1.0, 0.0).is_held
    True
    """
    high = float(np.log(above_zero("threshold", threshold)))
    each = float(above_zero("size", size))
    drift = each * shift - each**2 / 2.0
    return SignalChain(_AS_GOOD_AS_ZERO, high, each, _added_one(drift), is_held=True)


def _added_one(drift: float) -> Callable[[Numbers], Numbers]:
    """Mean of the next ln R: ln(1 + R) and what a reading adds on the average."""
    return lambda logs: np.asarray(np.logaddexp(0.0, logs) + drift)
