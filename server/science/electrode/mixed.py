"""A reaction held back both by its own rate and by the supply of its ion."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.constants import FARADAY_C_MOL, GAS_CONSTANT_J_MOL_K
from server.science.electrode.film import share_of_limit as share_in_use
from server.science.electrode.rates import butler_volmer_overpotential_v
from server.science.errors import OutOfRange


def mixed_current_a_m2(kinetic_a_m2: ArrayLike, limiting_a_m2: ArrayLike) -> Numbers:
    """Current density of a reaction that its rate and its supply hold back together.

    1/i = 1/i_k + 1/i_L: the two resistances to the current stand in series. For one reaction of
    first order, driven far enough that its reverse does not count.

    Parameters
    ----------
    kinetic_a_m2 : array_like, shape S
        Current density were the supply unlimited, A/m2; not negative.
    limiting_a_m2 : array_like, broadcast with S
        Limiting current density, A/m2; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Current density, A/m2, below both. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a kinetic current is negative or a limit not above zero.

    Source
    ------
    J. Koutecky and V. G. Levich, Zh. Fiz. Khim. 32 (1958) 1565 (from memory); Bard and Faulkner,
    2nd ed. (2001), section 9.3.4 (from memory).

    Example
    -------
    >>> mixed_current_a_m2(1200.0, 400.0)
    array(300.)
    """
    kinetic = not_negative("kinetic_a_m2", kinetic_a_m2)
    limiting = above_zero("limiting_a_m2", limiting_a_m2)
    # The smaller over one plus a share: no product here can exceed the largest float.
    least, most = np.minimum(kinetic, limiting), np.maximum(kinetic, limiting)
    return np.asarray(least / (1.0 + least / most))


def kinetic_current_a_m2(current_a_m2: ArrayLike, limiting_a_m2: ArrayLike) -> Numbers:
    """Current density a reaction would have were its supply unlimited; undoes the mixing.

    i_k = i / (1 - i/i_L). Close to the limit little of the measured current is about kinetics,
    and a small error of either makes a large one here.

    Parameters
    ----------
    current_a_m2 : array_like, shape S
        Current density under both, A/m2; not negative and below the limit.
    limiting_a_m2 : array_like, broadcast with S
        Limiting current density, A/m2; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Kinetic current density, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a current is negative, or reaches the limit.

    Source
    ------
    As `mixed_current_a_m2`.

    Example
    -------
    >>> kinetic_current_a_m2(300.0, 400.0)
    array(1200.)
    """
    share = _below_limit(share_in_use(current_a_m2, limiting_a_m2))
    return np.asarray(not_negative("current_a_m2", current_a_m2) / (1.0 - share))


def concentration_overpotential_v(
    share_of_limit: ArrayLike, electrons: ArrayLike, temperature_k: ArrayLike
) -> Numbers:
    """Volts lost because a cathode's surface is poorer in its ion than the bulk.

    -(R T / z F) ln(1 - i/i_L), Nernst's equation between bulk and surface. At the limit the
    surface is empty, and no overpotential gives a steady current above it. That is refused: an
    infinite voltage would run on into sums, and NaN would pass for a reading that is missing.

    Parameters
    ----------
    share_of_limit : array_like, shape S
        Current density over the limiting one; from 0 to below 1.
    electrons : array_like, broadcast with S
        Electrons that each ion takes; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Overpotential as a cost, V; zero or more. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a share is negative, or is 1 or more.

    Source
    ------
    Bard and Faulkner, 2nd ed. (2001), section 1.4.2 (from memory).

    Example
    -------
    A third of the limit costs little, nine tenths still not much.

    >>> shares = [1 / 3, 0.9]
    >>> [f"{volts:.4f}" for volts in concentration_overpotential_v(shares, 2, 318.15)]
    ['0.0056', '0.0316']
    """
    share = _below_limit(not_negative("share_of_limit", share_of_limit))
    return np.asarray(-np.log1p(-share) * _nernst_v(electrons, temperature_k))


def dissolution_overpotential_v(
    share_of_limit: ArrayLike, electrons: ArrayLike, temperature_k: ArrayLike
) -> Numbers:
    """Volts lost because a dissolving anode's surface is richer in its ion than the bulk.

    (R T / z F) ln(1 + i/i_L), with the film's limit as a scale only: no limit is reached until the
    salt crystallises on the anode and passivates it, which this does not foresee.

    Parameters
    ----------
    share_of_limit : array_like, shape S
        Current density over the z F D c / delta of the anode's film; not negative.
    electrons : array_like, broadcast with S
        Electrons that each ion leaves behind; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Overpotential as a cost, V; zero or more. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a share is negative or another input not above zero.

    Source
    ------
    Nernst's equation between bulk and surface, as `concentration_overpotential_v`.

    Example
    -------
    >>> f"{dissolution_overpotential_v(1 / 3, 2, 333.15):.4f}"
    '0.0041'
    """
    share = not_negative("share_of_limit", share_of_limit)
    return np.asarray(np.log1p(share) * _nernst_v(electrons, temperature_k))


def cathode_current_a_m2(
    overpotential_v: ArrayLike,
    exchange_a_m2: ArrayLike,
    anodic_transfer: ArrayLike,
    cathodic_transfer: ArrayLike,
    temperature_k: ArrayLike,
    limiting_a_m2: ArrayLike,
) -> Numbers:
    """Current density of a cathode under an overpotential, with its ion's supply limited.

    Butler-Volmer with the cathodic term in proportion to the surface concentration:
    i = i0 ((1 - i/i_L) exp(a_c F eta / R T) - exp(-a_a F eta / R T)), solved for i. The exchange
    current is that at the bulk's concentration; the reverse reaction is the metal's, which is
    always there. Far below equilibrium the current approaches the limit and stays there.

    Parameters
    ----------
    overpotential_v : array_like, shape S
        How far the cathode lies below its equilibrium with the bulk, V; not negative.
    exchange_a_m2 : array_like, broadcast with S
        Exchange current density i0, A/m2; above zero.
    anodic_transfer : array_like, broadcast with S
        Apparent anodic transfer coefficient; above zero.
    cathodic_transfer : array_like, broadcast with S
        Apparent cathodic transfer coefficient; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    limiting_a_m2 : array_like, broadcast with S
        Limiting current density, A/m2; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Cathodic current density as a positive number, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an overpotential is negative or another input not above zero.

    Source
    ------
    Bard and Faulkner, 2nd ed. (2001), eq. (3.4.10), with no limit on the anodic side (from
    memory).

    Example
    -------
    >>> f"{cathode_current_a_m2(0.1240, 50.0, 1.5, 0.5, 318.15, 800.0):.0f}"
    '300'
    """
    below = not_negative("overpotential_v", overpotential_v)
    reduced = below / _nernst_v(1, temperature_k)
    exchange = above_zero("exchange_a_m2", exchange_a_m2)
    anodic = above_zero("anodic_transfer", anodic_transfer)
    cathodic = above_zero("cathodic_transfer", cathodic_transfer)
    limiting = above_zero("limiting_a_m2", limiting_a_m2)
    # Both parts are divided by the driven exponential, which alone could exceed the largest float.
    net = -np.expm1(-(anodic + cathodic) * reduced)
    return np.asarray(net / (np.exp(-cathodic * reduced) / exchange + 1.0 / limiting))


def cathode_overpotential_v(
    current_a_m2: ArrayLike,
    exchange_a_m2: ArrayLike,
    anodic_transfer: ArrayLike,
    cathodic_transfer: ArrayLike,
    temperature_k: ArrayLike,
    limiting_a_m2: ArrayLike,
) -> Numbers:
    """Overpotential that a cathode needs for a current density, with its ion's supply limited.

    Undoes `cathode_current_a_m2`. It falls into two parts exactly: Butler-Volmer with the exchange
    current of the impoverished surface, i0 (1 - i/i_L)^(a_a / (a_a + a_c)), and the concentration
    overpotential -(R T / (a_a + a_c) F) ln(1 - i/i_L). The latter is Nernst's when the two
    coefficients add up to the ion's electrons, as they should for one rate-determining step.

    Parameters
    ----------
    current_a_m2 : array_like, shape S
        Cathodic current density as a positive number, A/m2; not negative and below the limit.
    exchange_a_m2 : array_like, broadcast with S
        Exchange current density i0, A/m2; above zero.
    anodic_transfer : array_like, broadcast with S
        Apparent anodic transfer coefficient; above zero.
    cathodic_transfer : array_like, broadcast with S
        Apparent cathodic transfer coefficient; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    limiting_a_m2 : array_like, broadcast with S
        Limiting current density, A/m2; above zero.

    Returns
    -------
    ndarray, broadcast shape
        How far below equilibrium with the bulk, V; zero or more. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a current is negative or reaches the limit, where no steady overpotential exists, or
        another input is not above zero.

    Source
    ------
    As `cathode_current_a_m2`; the two parts: J. Newman and K. E. Thomas-Alyea, Electrochemical
    Systems, 3rd ed. (2004), chapter 8 on exchange current densities (from memory).

    Example
    -------
    Without the film the same current costs 98 mV.

    >>> f"{cathode_overpotential_v(300.0, 50.0, 1.5, 0.5, 318.15, 800.0):.4f}"
    '0.1240'
    """
    share = _below_limit(share_in_use(current_a_m2, limiting_a_m2))
    anodic = above_zero("anodic_transfer", anodic_transfer)
    cathodic = above_zero("cathodic_transfer", cathodic_transfer)
    both = anodic + cathodic
    surface_a_m2 = above_zero("exchange_a_m2", exchange_a_m2) * (1.0 - share) ** (anodic / both)
    rate_v = butler_volmer_overpotential_v(
        current_a_m2, surface_a_m2, cathodic, anodic, temperature_k
    )
    return np.asarray(rate_v + concentration_overpotential_v(share, both, temperature_k))


def _below_limit(share: Numbers) -> Numbers:
    """The shares, once it is certain that none reaches the limit."""
    if (share >= 1.0).any():
        highest = float(np.nanmax(share))
        raise OutOfRange("share_of_limit", found=highest, allowed="below 1, the limiting current")
    return share


def _nernst_v(electrons: ArrayLike, temperature_k: ArrayLike) -> Numbers:
    """R T / z F, V."""
    kelvin = above_zero("temperature_k", temperature_k)
    return np.asarray(
        GAS_CONSTANT_J_MOL_K * kelvin / (above_zero("electrons", electrons) * FARADAY_C_MOL)
    )
