"""What falls from the anodes and does not dissolve."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.errors import OutOfRange

# Copper refineries, lowest and highest, 1 to 10 kg for each tonne of anode: textbooks and surveys
# (from memory).
USUAL_SLIMES_SHARES = (0.001, 0.010)


def slimes_kg(dissolved_kg: ArrayLike, insoluble_share: ArrayLike) -> Numbers:
    """Mass of slimes from the anode mass consumed.

    Parameters
    ----------
    dissolved_kg : array_like, shape S
        Anode mass consumed, scrap left out, kg; not negative.
    insoluble_share : array_like, broadcast with S
        Share of it that does not dissolve; 0 to 1.

    Returns
    -------
    ndarray, broadcast shape
        Dry slimes, kg. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the mass is negative or the share outside 0 to 1.

    Source
    ------
    Mass balance.

    Example
    -------
    >>> f"{slimes_kg(900e3, 0.0065):.0f}"
    '5850'
    """
    share = _share("insoluble_share", insoluble_share)
    return np.asarray(not_negative("dissolved_kg", dissolved_kg) * share)


def element_in_slimes_kg(
    dissolved_kg: ArrayLike, element_share: ArrayLike, to_slimes_share: ArrayLike
) -> Numbers:
    """Mass of one element that goes into the slimes.

    Silver, gold, selenium and lead go there nearly whole; arsenic, antimony and bismuth in part,
    by what else is in anode and bath; nickel hardly, unless it is oxide.

    Parameters
    ----------
    dissolved_kg : array_like, shape S
        Anode mass consumed, scrap left out, kg; not negative.
    element_share : array_like, broadcast with S
        Share of the element in the anode; 0 to 1.
    to_slimes_share : array_like, broadcast with S
        Share of the element that goes to the slimes; 0 to 1.

    Returns
    -------
    ndarray, broadcast shape
        Mass of the element in the slimes, kg. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the mass is negative or a share outside 0 to 1.

    Source
    ------
    Mass balance.

    Example
    -------
    900 t of anode with 500 g/t of silver, 99 % of it to the slimes.

    >>> f"{element_in_slimes_kg(900e3, 500e-6, 0.99):.1f}"
    '445.5'
    """
    share = _share("element_share", element_share) * _share("to_slimes_share", to_slimes_share)
    return np.asarray(not_negative("dissolved_kg", dissolved_kg) * share)


def grade_of_slimes(element_kg: ArrayLike, slimes_kg: ArrayLike) -> Numbers:
    """Share of one element in the slimes.

    Above 1 says that an assay or a weight is wrong; it is returned as it is.

    Parameters
    ----------
    element_kg : array_like, shape S
        Mass of the element in the slimes, kg; not negative.
    slimes_kg : array_like, broadcast with S
        Mass of dry slimes, kg; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Share. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a mass is negative, or there are no slimes.

    Source
    ------
    Definition.

    Example
    -------
    >>> f"{grade_of_slimes(445.5, 5850.0):.3f}"
    '0.076'
    """
    whole = above_zero("slimes_kg", slimes_kg)
    return np.asarray(not_negative("element_kg", element_kg) / whole)


def _share(quantity: str, values: ArrayLike) -> Numbers:
    """Values that must lie from 0 to 1."""
    share = not_negative(quantity, values)
    if (share > 1.0).any():
        raise OutOfRange(quantity, found=float(np.nanmax(share)), allowed="0 to 1")
    return share
