"""Current that ferric iron takes at the cathode instead of metal, as fast as it arrives there."""

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.constants import FARADAY_C_MOL, IRON
from server.science.losses.calibration import Calibration, through_origin

# Common practice in copper winning (from memory): 1 g/L of ferric iron costs 2 to 3 points of
# current efficiency.
POINTS_PER_G_L = (0.02, 0.03)
# The same rule's current densities, A/m2 (from memory).
POINTS_CURRENT_DENSITIES_A_M2 = (200.0, 300.0)
# Moles of iron in a cubic metre that holds one gram in each litre.
_MOL_M3_PER_G_L = 1.0 / IRON.molar_mass_kg_mol


def _from_rule(points: float, current_density_a_m2: float) -> float:
    """Transfer coefficient in m/s that makes the rule of the trade true."""
    return points * current_density_a_m2 / (FARADAY_C_MOL * _MOL_M3_PER_G_L)


_LOW_M_S = _from_rule(POINTS_PER_G_L[0], POINTS_CURRENT_DENSITIES_A_M2[0])
_HIGH_M_S = _from_rule(POINTS_PER_G_L[1], POINTS_CURRENT_DENSITIES_A_M2[1])
# The rule above at both its ends, read as a rectangular distribution (JCGM 100:2008, 4.3.7).
TYPICAL_TRANSFER_M_S = Calibration(
    value=(_LOW_M_S + _HIGH_M_S) / 2,
    standard_uncertainty=(_HIGH_M_S - _LOW_M_S) / math.sqrt(12.0),
    degrees_of_freedom=math.inf,
    pairs=0,
)


def ferric_transfer_m_s(diffusivity_m2_s: ArrayLike, film_m: ArrayLike) -> Numbers:
    """Mass-transfer coefficient of ferric iron: diffusivity over the thickness of the film.

    k = D / delta. A plant's own k, from `calibrated_transfer_m_s`, is better than this one: gas,
    flow and the roughness of the deposit are all in it.

    Parameters
    ----------
    diffusivity_m2_s : array_like, shape S
        Diffusion coefficient of ferric iron in the bath, m2/s; above zero.
    film_m : array_like, broadcast with S
        Thickness of the Nernst film at the cathode, m; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Coefficient, m/s. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero.

    Source
    ------
    W. Nernst, Z. phys. Chem. 47 (1904) 52.

    Example
    -------
    >>> f"{ferric_transfer_m_s(6e-10, 0.15e-3):.1e}"
    '4.0e-06'
    """
    film = above_zero("film_m", film_m)
    return np.asarray(above_zero("diffusivity_m2_s", diffusivity_m2_s) / film)


def ferric_current_at_a_m2(ferric_g_l: ArrayLike, transfer_m_s: ArrayLike) -> Numbers:
    """Current density of ferric reduction, from a mass-transfer coefficient.

    i = F k c, one electron: Fe3+ + e- gives Fe2+, which the anode turns back. Every ferric ion
    that reaches a cathode at the metal's potential is reduced, so only the arrival counts.

    Parameters
    ----------
    ferric_g_l : array_like, shape S
        Ferric iron in the bath, g/L; not total iron; not negative.
    transfer_m_s : array_like, broadcast with S
        Mass-transfer coefficient, m/s; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Current density on the cathode, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative.

    Source
    ------
    M. Faraday (1834) with W. Nernst, Z. phys. Chem. 47 (1904) 52: the limiting current.

    Example
    -------
    >>> f"{ferric_current_at_a_m2(2.0, 4e-6):.2f}"
    '13.82'
    """
    moles_m3 = not_negative("ferric_g_l", ferric_g_l) * _MOL_M3_PER_G_L
    return np.asarray(FARADAY_C_MOL * moles_m3 * not_negative("transfer_m_s", transfer_m_s))


def ferric_current_a_m2(
    ferric_g_l: ArrayLike, diffusivity_m2_s: ArrayLike, film_m: ArrayLike
) -> Numbers:
    """Current density of ferric reduction at the mass-transfer limit.

    i = F D c / delta, one electron.

    Parameters
    ----------
    ferric_g_l : array_like, shape S
        Ferric iron in the bath, g/L; not total iron; not negative.
    diffusivity_m2_s : array_like, broadcast with S
        Diffusion coefficient of ferric iron in the bath, m2/s; above zero.
    film_m : array_like, broadcast with S
        Thickness of the Nernst film at the cathode, m; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Current density on the cathode, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative, or diffusivity or film is not above zero.

    Source
    ------
    W. Nernst, Z. phys. Chem. 47 (1904) 52: the limiting current through a film.

    Example
    -------
    2 g/L of ferric iron, 6e-10 m2/s, a film of 0.15 mm.

    >>> f"{ferric_current_a_m2(2.0, 6e-10, 0.15e-3):.2f}"
    '13.82'
    """
    return ferric_current_at_a_m2(ferric_g_l, ferric_transfer_m_s(diffusivity_m2_s, film_m))


def ferric_loss_share(
    ferric_g_l: ArrayLike, current_density_a_m2: ArrayLike, transfer_m_s: ArrayLike
) -> Numbers:
    """Share of the current density that ferric iron takes.

    Not capped: a share above 1 says that a number is wrong or that the cathode would make no
    metal at all, and `takes_all_current` finds it.

    Parameters
    ----------
    ferric_g_l : array_like, shape S
        Ferric iron in the bath, g/L; not negative.
    current_density_a_m2 : array_like, broadcast with S
        Current density on the cathode, A/m2; above zero.
    transfer_m_s : array_like, broadcast with S
        Mass-transfer coefficient, m/s, from `ferric_transfer_m_s` or calibrated; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Share of the current; may be above 1. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative, or the current density is not above zero.

    Source
    ------
    Definition of a share, with `ferric_current_at_a_m2`.

    Example
    -------
    >>> f"{ferric_loss_share(2.0, 300.0, 4e-6):.4f}"
    '0.0461'
    """
    lost = ferric_current_at_a_m2(ferric_g_l, transfer_m_s)
    return np.asarray(lost / above_zero("current_density_a_m2", current_density_a_m2))


def takes_all_current(loss_share: ArrayLike) -> NDArray[np.bool_]:
    """Tell where a loss is as large as the current or larger, which cannot last.

    Parameters
    ----------
    loss_share : array_like, any shape
        Share of the current lost.

    Returns
    -------
    ndarray of bool, same shape
        True where the share is 1 or more; False where it is NaN.

    Raises
    ------
    OutOfRange
        If any share is infinite.

    Source
    ------
    House rule: a result that cannot be right is shown and flagged, not hidden.

    Example
    -------
    >>> takes_all_current([0.05, 1.2])
    array([False,  True])
    """
    return np.asarray(finite("loss_share", loss_share) >= 1.0)


def calibrated_transfer_m_s(ferric_g_l: ArrayLike, lost_a_m2: ArrayLike) -> Calibration:
    """Mass-transfer coefficient of one house, from its own iron and its own lost current.

    Least squares of i = F k c through zero. Each lost current density should be what is left
    when shorts, leakage and the other known losses are taken off; a loss that does not follow
    the iron ends up in k, so look at the scatter. Below zero it is returned as it is: the
    pairs then say that iron does not explain the loss.

    Parameters
    ----------
    ferric_g_l : array_like, shape (N,)
        Ferric iron, g/L; not negative.
    lost_a_m2 : array_like, shape (N,)
        Current density lost to iron, A/m2; both signs, since it is a difference.

    Returns
    -------
    Calibration
        Coefficient and its standard uncertainty, m/s; pairs with a missing number left out.

    Raises
    ------
    OutOfRange
        If iron is negative or a number is infinite.
    WrongShape
        If the two are not sequences of equal length.

    Source
    ------
    `through_origin`, with the limiting current of W. Nernst, Z. phys. Chem. 47 (1904) 52.

    Example
    -------
    >>> k = calibrated_transfer_m_s([1.0, 2.0, 3.0], [7.1, 13.5, 20.9])
    >>> f"{k.value:.2e} +/- {k.standard_uncertainty:.0e}"
    '4.00e-06 +/- 4e-08'
    """
    moles_m3 = not_negative("ferric_g_l", ferric_g_l) * _MOL_M3_PER_G_L
    return through_origin(FARADAY_C_MOL * moles_m3, lost_a_m2)


def ferric_rule_share(ferric_g_l: ArrayLike) -> tuple[Numbers, Numbers]:
    """Least and most that the rule of the trade gives for copper winning's loss to iron.

    2 to 3 points for each g/L of ferric iron near 200 to 300 A/m2. From memory; for a first look
    where nothing of the house is known.

    Parameters
    ----------
    ferric_g_l : array_like, any shape
        Ferric iron in the bath, g/L; not negative.

    Returns
    -------
    tuple of ndarray, each of the same shape
        Lower and upper share of the current. NaN where the input is NaN.

    Raises
    ------
    OutOfRange
        If iron is negative.

    Source
    ------
    Common practice (from memory); no single source.

    Example
    -------
    >>> low, high = ferric_rule_share(2.0)
    >>> f"{low:.2f} to {high:.2f}"
    '0.04 to 0.06'
    """
    iron = not_negative("ferric_g_l", ferric_g_l)
    return np.asarray(POINTS_PER_G_L[0] * iron), np.asarray(POINTS_PER_G_L[1] * iron)
