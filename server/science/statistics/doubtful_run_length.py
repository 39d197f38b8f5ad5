"""Run lengths of charts on readings whose parameters are estimated or which hang together."""

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, finite
from server.science.errors import OutOfRange
from server.science.statistics.ewma_run_length import ewma_run_length
from server.science.statistics.run_length import cusum_chain, cusum_run_length
from server.science.statistics.signal_chain import each_shift

# Tried here: enough points for the mean and for the standard deviation to hold four digits.
_MEAN_POINTS = 48
_SCALE_POINTS = 16


def ewma_run_length_estimated(
    weight: float, width: float, shift: ArrayLike, readings: int, degrees_of_freedom: int
) -> Numbers:
    """Average run length of an EWMA whose centre and standard deviation were estimated before.

    The run length for known parameters, averaged over what the estimates can be: the mean of
    normal `readings`, and a standard deviation from the root of an unbiased variance. Limits that
    are right for known parameters flag too often when few readings stand behind the estimates.
    Two-sided with fixed limits, from the target.

    Parameters
    ----------
    weight : float
        Weight of the newest reading; above 0, at most 1.
    width : float
        Half-width of the limits, in estimated standard deviations of the average; above zero.
    shift : array_like, any shape
        True mean of the readings less the true mean before, in true standard deviations.
    readings : int
        Number of readings behind the estimated mean; 2 or more.
    degrees_of_freedom : int
        Degrees of freedom behind the estimated standard deviation; 1 or more.

    Returns
    -------
    ndarray, shape of the shifts
        Average run length over all that the estimates can be. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If the weight, the width, the readings or the degrees of freedom are not as said.

    Source
    ------
    L. A. Jones, C. W. Champ and S. E. Rigdon, Technometrics 43 (2001) 156.

    Example
    -------
    >>> known = ewma_run_length(0.2, 2.86)
    >>> estimated = ewma_run_length_estimated(0.2, 2.86, 0.0, readings=100, degrees_of_freedom=99)
    >>> f"{known:.0f} {estimated:.0f}"
    '371 357'
    """
    return _over_estimates(
        lambda scale, one: float(ewma_run_length(weight, width * scale, one)),
        finite("shift", shift),
        readings,
        degrees_of_freedom,
    )


def cusum_run_length_estimated(
    k: float, h: float, shift: ArrayLike, readings: int, degrees_of_freedom: int, sides: int = 1
) -> Numbers:
    """Average run length of a CUSUM whose target and standard deviation were estimated before.

    As `ewma_run_length_estimated`. Of a one-sided chart the average can be far above that for
    known parameters, because a target estimated too high makes a chart that never signals: the
    median chart flags more often than wanted, and the average hides it.

    Parameters
    ----------
    k : float
        Reference value, in estimated standard deviations.
    h : float
        Limit, in estimated standard deviations; above zero.
    shift : array_like, any shape
        True mean of the readings less the true mean before, in true standard deviations.
    readings : int
        Number of readings behind the estimated mean; 2 or more.
    degrees_of_freedom : int
        Degrees of freedom behind the estimated standard deviation; 1 or more.
    sides : int
        1 for a chart that looks upward only, 2 for one that looks both ways.

    Returns
    -------
    ndarray, shape of the shifts
        Average run length over all that the estimates can be. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If k, h, the sides, the readings or the degrees of freedom are not as said.

    Source
    ------
    L. A. Jones, C. W. Champ and S. E. Rigdon, J. Quality Technology 36 (2004) 95.

    Example
    -------
    >>> f"{cusum_run_length_estimated(0.5, 5.0, 0.0, 100, 99, sides=2):.0f}"
    '465'
    """
    return _over_estimates(
        lambda scale, one: float(cusum_run_length(k * scale, h * scale, one, sides=sides)),
        finite("shift", shift),
        readings,
        degrees_of_freedom,
    )


def _over_estimates(
    run_length: Callable[[float, float], float],
    shifts: Numbers,
    readings: int,
    degrees_of_freedom: int,
) -> Numbers:
    """A run length averaged over the estimates of the mean and of the standard deviation.

    The chart is worked out in true standard deviations: there its constants are stretched by the
    estimated over the true one, and the shift is less the error of the mean.
    """
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import stats

    if readings < 2:
        raise OutOfRange("readings", found=readings, allowed="2 or more")
    if degrees_of_freedom < 1:
        raise OutOfRange("degrees_of_freedom", found=degrees_of_freedom, allowed="1 or more")
    points, weights = np.polynomial.hermite_e.hermegauss(_MEAN_POINTS)
    # The far points weigh less than a rounding error and would cost the longest runs.
    heavy = weights > 1e-9 * weights.sum()
    points, weights = points[heavy], weights[heavy] / weights[heavy].sum()
    shares, share_weights = np.polynomial.legendre.leggauss(_SCALE_POINTS)
    chi = stats.chi(degrees_of_freedom)
    low, high = chi.ppf(1e-7), chi.isf(1e-7)
    scales = low + (high - low) * (shares + 1.0) / 2.0
    densities = share_weights * chi.pdf(scales)
    densities /= densities.sum()
    scales /= np.sqrt(degrees_of_freedom)

    def averaged(one: float) -> float:
        return float(
            sum(
                at_scale * at_mean * run_length(float(scale), one - float(point / readings**0.5))
                for scale, at_scale in zip(scales, densities, strict=True)
                for point, at_mean in zip(points, weights, strict=True)
            )
        )

    return each_shift(shifts, averaged)


def autocorrelation_inflation(autocorrelation: ArrayLike) -> Numbers:
    """Factor by which readings that hang together widen a long sum.

    Readings of a first-order autoregressive process have a mean whose standard deviation is this
    many times that of independent ones, for long stretches. A CUSUM whose k and h are divided by
    it bounds the run length without a fault from below: by simulation, with a correlation of 0.25,
    k 0.5 and h 5, a false signal comes after 237 readings; this bound says 148, and independence
    would say 931. For stronger correlation the bound is wider. Chart the residuals of a model
    instead, see `residual_cusum_run_length`, or find the limit by simulation.

    Parameters
    ----------
    autocorrelation : array_like, any shape
        Correlation of a reading with the one before; above -1 and below 1.

    Returns
    -------
    ndarray, same shape
        Factor, without unit: sqrt((1 + r) / (1 - r)). NaN where the correlation is.

    Raises
    ------
    OutOfRange
        If a correlation is not between -1 and 1.

    Source
    ------
    R. A. Johnson and M. Bagshaw, Technometrics 16 (1974) 103 (from memory). ISO 7870-9:2020
    (scope: stationary processes) treats the same charts.

    Example
    -------
    >>> autocorrelation_inflation([0.0, 0.5]).round(3).tolist()
    [1.0, 1.732]
    """
    shares = finite("autocorrelation", autocorrelation)
    if (np.abs(shares) >= 1.0).any():
        worst = float(shares[np.nanargmax(np.abs(shares))] if shares.ndim else shares)
        raise OutOfRange("autocorrelation", found=worst, allowed="between -1 and 1")
    return np.asarray(np.sqrt((1.0 + shares) / (1.0 - shares)))


def residual_cusum_run_length(
    k: float, h: float, shift: ArrayLike, autocorrelation: float
) -> Numbers:
    """Average run length of a one-sided CUSUM on the residuals of a first-order autoregression.

    With the process known, residuals are independent and the run without a fault is that of any
    CUSUM. A lasting shift of the mean shows in full only in the first residual; from then on the
    model expects most of it, and only the share 1 - r is left. So positive correlation makes
    lasting shifts hard to see: that is the price, and it is stated rather than hidden.

    Parameters
    ----------
    k : float
        Reference value, in standard deviations of the residuals.
    h : float
        Limit, in standard deviations of the residuals; above zero.
    shift : array_like, any shape
        Lasting shift of the mean, in standard deviations of the readings.
    autocorrelation : float
        Correlation of a reading with the one before; above -1 and below 1.

    Returns
    -------
    ndarray, shape of the shifts
        Average number of readings from the first shifted one to the signal, the sum being zero
        before. NaN where the shift is.

    Raises
    ------
    OutOfRange
        If h is not above zero or the correlation not between -1 and 1.

    Source
    ------
    G. C. Runger, T. R. Willemain and S. Prabhu, Communications in Statistics: Theory and Methods
    24 (1995) 273 (from memory).

    Example
    -------
    >>> residual_cusum_run_length(0.5, 5.0, [0.0, 1.0], autocorrelation=0.5).round(1).tolist()
    [930.9, 27.3]
    """
    shifts = finite("shift", shift)
    autocorrelation_inflation(autocorrelation)
    residual_share = (1.0 - autocorrelation**2) ** 0.5

    def averaged(one: float) -> float:
        first = cusum_chain(k, h, one / residual_share)
        then = cusum_chain(k, h, one * (1.0 - autocorrelation) / residual_share)
        return 1.0 + float(first.moves(np.zeros(1))[0] @ then.averages)

    return each_shift(shifts, averaged)
