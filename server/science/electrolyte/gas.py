"""How bubbles between the plates lower the electrolyte's conductivity."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, not_negative
from server.science.errors import OutOfRange


def _gas_share(quantity: str, values: ArrayLike) -> Numbers:
    """Shares of gas, each from zero to below one."""
    share = not_negative(quantity, values)
    if (share >= 1.0).any():
        raise OutOfRange(quantity, found=float(np.nanmax(share)), allowed="0 to below 1")
    return share


def bruggeman_s_m(conductivity_s_m: ArrayLike, gas_share: ArrayLike) -> Numbers:
    """Conductivity of an electrolyte with bubbles in it.

    kappa (1 - gas)^1.5: bubbles of many sizes, spread evenly, that conduct nothing. A tankhouse
    holds a few per cent of gas between its plates. A layer of bubbles that clings to the anode is
    not of this kind and costs more than its volume says; where the hold-up rises along the plate
    see `bruggeman_risen_s_m`.

    Parameters
    ----------
    conductivity_s_m : array_like, shape S
        Conductivity without gas, S/m; not negative.
    gas_share : array_like, broadcast with S
        Volume of gas over volume of gas and liquid; 0 to below 1.

    Returns
    -------
    ndarray, broadcast shape
        Conductivity with gas, S/m. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a conductivity is negative or a share does not lie from 0 to below 1.

    Source
    ------
    D. A. G. Bruggeman, Ann. Phys. 416 (1935) 636 (from memory).

    Example
    -------
    >>> f"{bruggeman_s_m(60.0, 0.05):.2f}"
    '55.56'
    """
    free = 1.0 - _gas_share("gas_share", gas_share)
    return np.asarray(not_negative("conductivity_s_m", conductivity_s_m) * free**1.5)


def bruggeman_risen_s_m(conductivity_s_m: ArrayLike, top_gas_share: ArrayLike) -> Numbers:
    """Mean conductivity between plates where the gas share rises evenly from bottom to top.

    The plates hold one voltage, so the slices of electrolyte between them, one above the other,
    conduct side by side and their conductivities are averaged: the mean of kappa (1 - gas)^1.5
    over a gas share from zero to that at the surface. The mean gas share, half that at the top,
    put into `bruggeman_s_m` comes within 0.2 % of it up to a fifth of gas at the top.

    Parameters
    ----------
    conductivity_s_m : array_like, shape S
        Conductivity without gas, S/m; not negative.
    top_gas_share : array_like, broadcast with S
        Gas share at the surface, 0 to below 1.

    Returns
    -------
    ndarray, broadcast shape
        Mean conductivity, S/m. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a conductivity is negative or a share does not lie from 0 to below 1.

    Source
    ------
    Integral of `bruggeman_s_m`: (1 - (1 - top)^2.5) / (2.5 top).

    Example
    -------
    >>> f"{bruggeman_risen_s_m(60.0, 0.10):.2f}"
    '55.58'
    """
    top = _gas_share("top_gas_share", top_gas_share)
    # expm1 and log1p keep the digits of a small share; at zero the mean is the whole.
    risen = np.where(top > 0.0, top, 1.0)
    lost = -np.expm1(2.5 * np.log1p(-np.where(top > 0.0, top, 0.5)))
    mean = np.where(top == 0.0, 1.0, lost / (2.5 * risen))
    mean = np.where(np.isnan(top), np.nan, mean)
    return np.asarray(not_negative("conductivity_s_m", conductivity_s_m) * mean)
