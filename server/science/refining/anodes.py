"""How long an anode lasts, what is left of it, and how many crops it feeds."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.constants import COPPER, Metal
from server.science.errors import OutOfRange
from server.science.faraday import deposited_kg, equivalent_kg_c

# Copper refineries, lowest and highest share of the anode: textbooks and surveys (from memory).
USUAL_SCRAP_SHARES = (0.12, 0.20)


def dissolved_kg(anode_kg: ArrayLike, scrap_share: ArrayLike) -> Numbers:
    """Mass that an anode gives up before what is left of it is pulled as scrap.

    Parameters
    ----------
    anode_kg : array_like, shape S
        Mass of the fresh anode, kg; not negative.
    scrap_share : array_like, broadcast with S
        Share of that mass left as scrap; 0 to 1.

    Returns
    -------
    ndarray, broadcast shape
        Mass dissolved or fallen as slimes, kg. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the mass is negative or the share outside 0 to 1.

    Source
    ------
    Mass balance.

    Example
    -------
    >>> f"{dissolved_kg(370.0, 0.15):.1f}"
    '314.5'
    """
    scrap = not_negative("scrap_share", scrap_share)
    if (scrap > 1.0).any():
        raise OutOfRange("scrap_share", found=float(np.nanmax(scrap)), allowed="0 to 1")
    return np.asarray(not_negative("anode_kg", anode_kg) * (1.0 - scrap))


def anode_life_s(
    anode_kg: ArrayLike,
    scrap_share: ArrayLike,
    amps: ArrayLike,
    anodic_efficiency: ArrayLike,
    metal: Metal = COPPER,
) -> Numbers:
    """Time in which an anode is worn down to its scrap.

    t = m (1 - s) / (K I eta). All that dissolves is treated as the metal itself, which for anode
    copper is true within a per cent or two. A stop does not count: it is time under current.

    Parameters
    ----------
    anode_kg : array_like, shape S
        Mass of the fresh anode, kg; not negative.
    scrap_share : array_like, broadcast with S
        Share of that mass left as scrap; 0 to 1.
    amps : array_like, broadcast with S
        Current of that anode, both faces, A; above zero.
    anodic_efficiency : array_like, broadcast with S
        Metal dissolved over what Faraday's law gives, as a share; above zero.
    metal : Metal
        The metal refined.

    Returns
    -------
    ndarray, broadcast shape
        Time under current, s. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the mass is negative, the scrap outside 0 to 1, or current or efficiency not above zero.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77.

    Example
    -------
    370 kg, 15 % scrap, 620 A, 99 %: in days.

    >>> f"{anode_life_s(370.0, 0.15, 620.0, 0.99) / 86_400:.2f}"
    '18.01'
    """
    lost_kg_s = (
        equivalent_kg_c(metal)
        * above_zero("amps", amps)
        * above_zero("anodic_efficiency", anodic_efficiency)
    )
    return np.asarray(dissolved_kg(anode_kg, scrap_share) / lost_kg_s)


def scrap_share(
    anode_kg: ArrayLike,
    amps: ArrayLike,
    anodic_efficiency: ArrayLike,
    duration_s: ArrayLike,
    metal: Metal = COPPER,
) -> Numbers:
    """Share of an anode that is left after some time under current.

    s = 1 - K I eta t / m. Below zero says that the anode would have been eaten through: it is
    shown, not clipped.

    Parameters
    ----------
    anode_kg : array_like, shape S
        Mass of the fresh anode, kg; above zero.
    amps : array_like, broadcast with S
        Mean current of that anode, both faces, A; not negative.
    anodic_efficiency : array_like, broadcast with S
        Metal dissolved over what Faraday's law gives, as a share; not negative.
    duration_s : array_like, broadcast with S
        Time under that current, s; not negative.
    metal : Metal
        The metal refined.

    Returns
    -------
    ndarray, broadcast shape
        Share of the fresh mass. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the mass is not above zero, or another input is negative.

    Source
    ------
    `anode_life_s`, solved for the scrap.

    Example
    -------
    >>> f"{scrap_share(370.0, 620.0, 0.99, 17 * 86_400):.4f}"
    '0.1976'
    """
    charge_c = not_negative("amps", amps) * not_negative("duration_s", duration_s)
    gone_kg = deposited_kg(charge_c, metal) * not_negative("anodic_efficiency", anodic_efficiency)
    return np.asarray(1.0 - gone_kg / above_zero("anode_kg", anode_kg))


def crops_per_anode(anode_life_s: ArrayLike, crop_s: ArrayLike) -> Numbers:
    """Cathode crops that fit into the life of an anode.

    Not rounded: what is behind the point is anode that goes back to the furnace, or the last
    crop's shorter time.

    Parameters
    ----------
    anode_life_s : array_like, shape S
        Life of the anode, time under current, s; not negative.
    crop_s : array_like, broadcast with S
        Growth time of a crop, s; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Crops. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a life is negative or a crop's time not above zero.

    Source
    ------
    Definition.

    Example
    -------
    >>> f"{crops_per_anode(18.0 * 86_400, 10.0 * 86_400):.1f}"
    '1.8'
    """
    return np.asarray(not_negative("anode_life_s", anode_life_s) / above_zero("crop_s", crop_s))


def crop_cathode_kg(
    amps: ArrayLike, crop_s: ArrayLike, current_efficiency: ArrayLike, metal: Metal = COPPER
) -> Numbers:
    """Mass that grows on one cathode in a crop.

    Parameters
    ----------
    amps : array_like, shape S
        Current of that cathode, both faces, A; not negative.
    crop_s : array_like, broadcast with S
        Growth time, s; not negative.
    current_efficiency : array_like, broadcast with S
        Cathodic efficiency, as a share; not negative.
    metal : Metal
        The metal refined.

    Returns
    -------
    ndarray, broadcast shape
        Mass without the starter sheet, kg. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77.

    Example
    -------
    >>> f"{crop_cathode_kg(620.0, 10 * 86_400, 0.96):.1f}"
    '169.3'
    """
    charge_c = not_negative("amps", amps) * not_negative("crop_s", crop_s)
    share = not_negative("current_efficiency", current_efficiency)
    return np.asarray(deposited_kg(charge_c, metal) * share)


def anodic_efficiency(
    fresh_kg: ArrayLike, scrap_kg: ArrayLike, charge_c: ArrayLike, metal: Metal = COPPER
) -> Numbers:
    """Anodic efficiency, from anodes weighed in and scrap weighed out.

    Mass gone over what Faraday's law gives. Slimes and chemical dissolution are in the mass, so
    it can stand a little above 1; it is returned as it is.

    Parameters
    ----------
    fresh_kg : array_like, shape S
        Mass of the fresh anodes, kg; not negative.
    scrap_kg : array_like, broadcast with S
        Mass of their scrap, washed, kg; not negative.
    charge_c : array_like, broadcast with S
        Charge through them, C; not negative.
    metal : Metal
        The metal refined.

    Returns
    -------
    ndarray, broadcast shape
        Share. NaN where an input is NaN or no charge passed.

    Raises
    ------
    OutOfRange
        If an input is negative.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77.

    Example
    -------
    >>> f"{anodic_efficiency(370.0, 73.1, 620.0 * 17 * 86_400):.3f}"
    '0.990'
    """
    gone_kg = finite(
        "gone_kg", not_negative("fresh_kg", fresh_kg) - not_negative("scrap_kg", scrap_kg)
    )
    ideal_kg = deposited_kg(charge_c, metal)
    return np.asarray(gone_kg / np.where(ideal_kg > 0.0, ideal_kg, np.nan))
