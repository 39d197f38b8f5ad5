"""Wark's rule: how the acid of a zinc bath takes current for hydrogen."""

import math

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.errors import OutOfRange, WrongShape
from server.science.losses.calibration import Calibration

# Zinc houses with clean baths, as ratio of masses: common practice (from memory). The constant
# belongs to one house: its purity, temperature, current density and additives are all in it.
TYPICAL_CONSTANTS = (25.0, 35.0)


def wark_efficiency(metal_g_l: ArrayLike, acid_g_l: ArrayLike, constant: ArrayLike) -> Numbers:
    """Current efficiency of zinc winning from zinc and acid in the cell.

    CE / (1 - CE) = K [Zn] / [H2SO4], so CE = K r / (1 + K r) with r the ratio of masses. For the
    bath in the cell, not for the feed; loss to hydrogen only. Good near the compositions at
    which the constant was found.

    Parameters
    ----------
    metal_g_l : array_like, shape S
        Zinc in the cell, g/L; above zero.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid in the cell, g/L; above zero.
    constant : array_like, broadcast with S
        The house's constant K, for the ratio of masses; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Current efficiency, as a share. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero.

    Source
    ------
    I. W. Wark, Proc. 1st Australian Conf. on Electrochemistry (Pergamon, 1964); citation and form
    from memory.

    Example
    -------
    >>> f"{wark_efficiency(60.0, 170.0, 28.6481):.4f}"
    '0.9100'
    """
    odds = above_zero("constant", constant) * _ratio(metal_g_l, acid_g_l)
    return np.asarray(odds / (1.0 + odds))


def wark_constant(efficiency: ArrayLike, metal_g_l: ArrayLike, acid_g_l: ArrayLike) -> Numbers:
    """Constant of Wark's rule that a current efficiency and its bath imply.

    K = CE / (1 - CE) over [Zn] / [H2SO4]. Steep near 1: at 90 %, half a point of efficiency
    moves the constant by 6 %.

    Parameters
    ----------
    efficiency : array_like, shape S
        Current efficiency, as a share; above 0 and below 1.
    metal_g_l : array_like, broadcast with S
        Zinc in the cell, g/L; above zero.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid in the cell, g/L; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Constant for the ratio of masses. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the efficiency is not above 0 and below 1, or a concentration is not above zero.

    Source
    ------
    `wark_efficiency`, solved for the constant.

    Example
    -------
    >>> f"{wark_constant(0.91, 60.0, 170.0):.3f}"
    '28.648'
    """
    share = above_zero("efficiency", efficiency)
    if (share >= 1.0).any():
        raise OutOfRange("efficiency", found=float(np.nanmax(share)), allowed="below 1")
    return np.asarray(share / (1.0 - share) / _ratio(metal_g_l, acid_g_l))


def fitted_wark_constant(
    efficiency: ArrayLike,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    u_efficiency: ArrayLike = 1.0,
) -> Calibration:
    """Constant of Wark's rule from several days of one house, and how sure it is.

    A weighted mean of ln K over the observations. An error u of the efficiency is an error
    u / (CE (1 - CE)) of ln K, so each is weighted by the inverse square of that; only the ratios
    of the given uncertainties count. The standard uncertainty comes from the scatter. An
    observation with a missing number is left out and not counted.

    Parameters
    ----------
    efficiency : array_like, shape (N,)
        Current efficiencies, as shares; above 0 and below 1.
    metal_g_l : array_like, shape (N,)
        Zinc in the cell, g/L; above zero.
    acid_g_l : array_like, shape (N,)
        Free sulfuric acid in the cell, g/L; above zero.
    u_efficiency : array_like, shape (N,) or a single number
        Standard uncertainties of the efficiencies, as shares; above zero; alike when not given.

    Returns
    -------
    Calibration
        Constant and its standard uncertainty, for the ratio of masses; NaN without observations.

    Raises
    ------
    OutOfRange
        If a number lies outside what it can be.
    WrongShape
        If the inputs are not sequences of equal length.

    Source
    ------
    JCGM 100:2008, 4.2.3 for the mean and 5.1.2 for the propagation, with `wark_constant`.

    Example
    -------
    >>> found = fitted_wark_constant([0.91, 0.90, 0.92], [60, 55, 62], [170, 172, 165])
    >>> f"{found.value:.1f} +/- {found.standard_uncertainty:.1f}"
    '29.0 +/- 0.7'
    """
    share = np.atleast_1d(finite("efficiency", efficiency))
    errors = above_zero("u_efficiency", u_efficiency)
    given = {"efficiency": share, "metal_g_l": metal_g_l, "acid_g_l": acid_g_l}
    for quantity, numbers in {**given, "u_efficiency": errors}.items():
        if share.ndim != 1 or np.shape(numbers) not in ((), share.shape):
            allowed = f"one sequence as long as the efficiencies, {share.shape}"
            raise WrongShape(quantity, found=np.shape(numbers), allowed=allowed)
    constants = wark_constant(share, metal_g_l, acid_g_l)
    weights = (share * (1.0 - share) / errors) ** 2
    known = ~(np.isnan(constants) | np.isnan(weights))
    logs, weights, count = np.log(constants[known]), weights[known], int(known.sum())
    if count == 0:
        return Calibration(math.nan, math.nan, 0.0, 0)
    mean = float(weights @ logs / weights.sum())
    if count == 1:
        return Calibration(math.exp(mean), math.nan, 0.0, 1)
    scatter = float(weights @ (logs - mean) ** 2) / (count - 1)
    u_log = math.sqrt(scatter / float(weights.sum()))
    return Calibration(math.exp(mean), math.exp(mean) * u_log, float(count - 1), count)


def _ratio(metal_g_l: ArrayLike, acid_g_l: ArrayLike) -> Numbers:
    """Mass of zinc for each mass of acid."""
    acid = above_zero("acid_g_l", acid_g_l)
    return np.asarray(above_zero("metal_g_l", metal_g_l) / acid)
