"""The rate of an electrode reaction under a given overpotential, and the way back."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.constants import FARADAY_C_MOL, GAS_CONSTANT_J_MOL_K


def butler_volmer_a_m2(
    overpotential_v: ArrayLike,
    exchange_a_m2: ArrayLike,
    anodic_transfer: ArrayLike,
    cathodic_transfer: ArrayLike,
    temperature_k: ArrayLike,
) -> Numbers:
    """Net current density of one reaction under an overpotential, anodic positive.

    i = i0 (exp(a_a F eta / R T) - exp(-a_c F eta / R T)). The rate-determining step alone limits:
    the surface is as concentrated as the bulk. Where the solution cannot keep up, see the
    functions of mixed control. A transfer coefficient here is the whole factor before F eta /
    R T; for copper(II) over two steps the two add up to 2, not to 1.

    Parameters
    ----------
    overpotential_v : array_like, shape S
        Potential less the equilibrium potential, V; negative at a cathode.
    exchange_a_m2 : array_like, broadcast with S
        Exchange current density i0, A/m2; above zero.
    anodic_transfer : array_like, broadcast with S
        Apparent anodic transfer coefficient; above zero.
    cathodic_transfer : array_like, broadcast with S
        Apparent cathodic transfer coefficient; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Current density, A/m2, of the sign of the overpotential. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is infinite or not above zero, or the current exceeds the largest float.

    Source
    ------
    J. A. V. Butler, Trans. Faraday Soc. 19 (1924) 729; T. Erdey-Gruz and M. Volmer, Z. Phys. Chem.
    150A (1930) 203 (from memory); transfer coefficients as in Guidelli and others, Pure Appl. Chem.
    86 (2014) 245.

    Example
    -------
    A copper cathode 65 mV below its equilibrium.

    >>> f"{butler_volmer_a_m2(-0.065, 50.0, 1.5, 0.5, 318.15):.1f}"
    '-162.2'
    """
    reduced = finite("overpotential_v", overpotential_v) / _thermal_v(temperature_k)
    anodic = above_zero("anodic_transfer", anodic_transfer)
    cathodic = above_zero("cathodic_transfer", cathodic_transfer)
    exchange = above_zero("exchange_a_m2", exchange_a_m2)
    # A current beyond the largest float is refused below, by name, instead of warned of here.
    with np.errstate(over="ignore"):
        # expm1 keeps the digits of a small overpotential, where the two exponentials nearly cancel.
        current = exchange * (np.expm1(anodic * reduced) - np.expm1(-cathodic * reduced))
    return finite("current_a_m2", current)


def butler_volmer_overpotential_v(
    current_a_m2: ArrayLike,
    exchange_a_m2: ArrayLike,
    anodic_transfer: ArrayLike,
    cathodic_transfer: ArrayLike,
    temperature_k: ArrayLike,
) -> Numbers:
    """Overpotential that one reaction needs for a net current density; undoes Butler-Volmer.

    Equal transfer coefficients have a closed form, (R T / a F) asinh(i / 2 i0). All others are
    solved between two bounds that always enclose the answer, ln(1 + i/i0) over the sum of the
    coefficients and over the anodic one; a cathodic current is the anodic one with the
    coefficients exchanged. Accurate to about 1 part in 10^13 for currents from 10^-12 to 10^12
    times the exchange current.

    Parameters
    ----------
    current_a_m2 : array_like, shape S
        Net current density, A/m2; anodic positive.
    exchange_a_m2 : array_like, broadcast with S
        Exchange current density i0, A/m2; above zero.
    anodic_transfer : array_like, broadcast with S
        Apparent anodic transfer coefficient; above zero.
    cathodic_transfer : array_like, broadcast with S
        Apparent cathodic transfer coefficient; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Overpotential, V, of the sign of the current. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is infinite or not above zero.

    Source
    ------
    As `butler_volmer_a_m2`; root by the bracketing method of T. R. Chandrupatla, Adv. Eng. Softw.
    28 (1997) 145, as SciPy carries it.

    Example
    -------
    >>> f"{butler_volmer_overpotential_v(-300.0, 50.0, 1.5, 0.5, 318.15):.4f}"
    '-0.0983'
    """
    current = finite("current_a_m2", current_a_m2)
    anodic = above_zero("anodic_transfer", anodic_transfer)
    cathodic = above_zero("cathodic_transfer", cathodic_transfer)
    with np.errstate(over="ignore"):
        ratio = np.abs(current) / above_zero("exchange_a_m2", exchange_a_m2)
    forward = np.where(current < 0.0, cathodic, anodic)
    backward = np.where(current < 0.0, anodic, cathodic)
    reduced = _reduced_overpotential(finite("current over exchange", ratio), forward, backward)
    return np.asarray(np.sign(current) * reduced * _thermal_v(temperature_k))


def back_reaction_share(
    overpotential_v: ArrayLike,
    anodic_transfer: ArrayLike,
    cathodic_transfer: ArrayLike,
    temperature_k: ArrayLike,
) -> Numbers:
    """Share of the driven direction's current that the reverse reaction takes back.

    exp(-(a_a + a_c) F |eta| / R T). Tafel's law leaves it out, so this is by how much Tafel's
    current is too high: 1 at equilibrium, 1 % from 118 mV on for one electron at 25 degC.

    Parameters
    ----------
    overpotential_v : array_like, shape S
        Potential less the equilibrium potential, V; either sign.
    anodic_transfer : array_like, broadcast with S
        Apparent anodic transfer coefficient; above zero.
    cathodic_transfer : array_like, broadcast with S
        Apparent cathodic transfer coefficient; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Share from 0 to 1. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is infinite or not above zero.

    Source
    ------
    Ratio of the two terms of `butler_volmer_a_m2`; the 118 mV: A. J. Bard and L. R. Faulkner,
    Electrochemical Methods, 2nd ed. (2001), section 3.4.3 (from memory).

    Example
    -------
    >>> f"{back_reaction_share(0.118, 0.5, 0.5, 298.15):.3f}"
    '0.010'
    """
    reduced = np.abs(finite("overpotential_v", overpotential_v)) / _thermal_v(temperature_k)
    both = above_zero("anodic_transfer", anodic_transfer) + above_zero(
        "cathodic_transfer", cathodic_transfer
    )
    return np.asarray(np.exp(-both * reduced))


def charge_transfer_ohm_m2(
    overpotential_v: ArrayLike,
    exchange_a_m2: ArrayLike,
    anodic_transfer: ArrayLike,
    cathodic_transfer: ArrayLike,
    temperature_k: ArrayLike,
) -> Numbers:
    """Differential resistance of one reaction at an overpotential, for a square metre.

    The change of overpotential with current density: R T / ((a_a + a_c) F i0) at equilibrium, and
    less and less the further the reaction is driven.

    Parameters
    ----------
    overpotential_v : array_like, shape S
        Potential less the equilibrium potential, V; either sign.
    exchange_a_m2 : array_like, broadcast with S
        Exchange current density i0, A/m2; above zero.
    anodic_transfer : array_like, broadcast with S
        Apparent anodic transfer coefficient; above zero.
    cathodic_transfer : array_like, broadcast with S
        Apparent cathodic transfer coefficient; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Resistance times area, ohm m2; above zero. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is infinite or not above zero, or the current exceeds the largest float.

    Source
    ------
    Derivative of `butler_volmer_a_m2`; at equilibrium Bard and Faulkner, 2nd ed. (2001), section
    3.4.3 (from memory).

    Example
    -------
    >>> f"{charge_transfer_ohm_m2(0.0, 50.0, 1.5, 0.5, 318.15) * 1e6:.1f}"
    '274.2'
    """
    thermal = _thermal_v(temperature_k)
    reduced = finite("overpotential_v", overpotential_v) / thermal
    anodic = above_zero("anodic_transfer", anodic_transfer)
    cathodic = above_zero("cathodic_transfer", cathodic_transfer)
    with np.errstate(over="ignore"):
        rise = anodic * np.exp(anodic * reduced) + cathodic * np.exp(-cathodic * reduced)
        slope = above_zero("exchange_a_m2", exchange_a_m2) * rise / thermal
    return np.asarray(1.0 / finite("slope_s_m2", slope))


def _thermal_v(temperature_k: ArrayLike) -> Numbers:
    """R T / F, the volts in which a transfer coefficient counts."""
    return np.asarray(
        GAS_CONSTANT_J_MOL_K * above_zero("temperature_k", temperature_k) / FARADAY_C_MOL
    )


def _reduced_overpotential(ratio: Numbers, forward: Numbers, backward: Numbers) -> Numbers:
    """The x, zero or more, with exp(forward x) - exp(-backward x) = ratio, element by element."""
    ratio, forward, backward = np.broadcast_arrays(ratio, forward, backward)
    reduced: Numbers = np.asarray(np.arcsinh(ratio / 2.0) / forward)
    unequal = (forward != backward) & ~np.isnan(ratio + forward + backward)
    if unequal.any():
        # Loaded here: it takes a good part of the time in which a command starts.
        from scipy.optimize import elementwise

        to_find = ratio[unequal], forward[unequal], backward[unequal]
        least = np.log1p(to_find[0])
        bounds = least / (to_find[1] + to_find[2]), least / to_find[1]
        reduced[unequal] = elementwise.find_root(_excess, bounds, args=to_find).x
    return np.where(np.isnan(ratio + forward + backward), np.nan, reduced)


def _excess(reduced: Numbers, ratio: Numbers, forward: Numbers, backward: Numbers) -> Numbers:
    """By how much the current at a trial overpotential exceeds the one wanted, over i0."""
    return np.asarray(np.expm1(forward * reduced) - np.expm1(-backward * reduced) - ratio)
