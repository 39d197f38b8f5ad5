"""Current that leaves the string and reaches the cells no more: stray current to earth."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.errors import OutOfRange


def string_volts(cell_volts: ArrayLike, cells: ArrayLike) -> Numbers:
    """Voltage between the ends of a string of cells in series.

    V = n v. It can exceed what is safe to touch at both ends, wherever the string is earthed:
    never bridge two cells, or a cell and the building, with a metal tool. Site procedure and
    local codes govern.

    Parameters
    ----------
    cell_volts : array_like, shape S
        Mean voltage of a cell, V.
    cells : array_like, broadcast with S
        Cells in series; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Voltage, V. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the number of cells is negative or a number infinite.

    Source
    ------
    G. Kirchhoff, Ann. Phys. 64 (1845) 497: voltages in series add up.

    Example
    -------
    >>> f"{string_volts(2.05, 100):.0f}"
    '205'
    """
    return np.asarray(finite("cell_volts", cell_volts) * not_negative("cells", cells))


def leakage_from_share_a(current_a: ArrayLike, share: ArrayLike) -> Numbers:
    """Leakage of a string where the plant has set it as a share of the current.

    Parameters
    ----------
    current_a : array_like, shape S
        Current that the rectifier delivers, A; not negative.
    share : array_like, broadcast with S
        Share of it that reaches no cell; 0 to 1.

    Returns
    -------
    ndarray, broadcast shape
        Leakage, A. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the current is negative or the share outside 0 to 1.

    Source
    ------
    Definition of a share.

    Example
    -------
    >>> f"{leakage_from_share_a(30e3, 0.005):.0f}"
    '150'
    """
    part = not_negative("share", share)
    if (part > 1.0).any():
        raise OutOfRange("share", found=float(np.nanmax(part)), allowed="0 to 1")
    return np.asarray(not_negative("current_a", current_a) * part)


def leakage_a(volts_to_earth: ArrayLike, path_ohm: ArrayLike) -> Numbers:
    """Current through one ohmic path to earth: a wet cell wall, a pipe, a spilled crust.

    I = V / R, in the direction of the voltage.

    Parameters
    ----------
    volts_to_earth : array_like, shape S
        Voltage between that place of the string and earth, V; both signs.
    path_ohm : array_like, broadcast with S
        Resistance of the path, ohm; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Current, A, of the sign of the voltage. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a resistance is not above zero.

    Source
    ------
    G. S. Ohm, Die galvanische Kette (1827).

    Example
    -------
    >>> f"{leakage_a(102.5, 50.0):.2f}"
    '2.05'
    """
    path = above_zero("path_ohm", path_ohm)
    return np.asarray(finite("volts_to_earth", volts_to_earth) / path)


def string_leakage_a(
    string_volts: ArrayLike, cells: ArrayLike, path_ohm: ArrayLike
) -> tuple[Numbers, Numbers]:
    """Mean and greatest current missing from the cells of a string that leaks evenly.

    Each cell has the same path to earth, and the string floats, so that earth lies in its
    middle: what leaves in the positive half comes back in the negative half. The current missing
    grows to V n / (8 R) in the middle of the string and is V n / (12 R) in the mean. For leakage
    that is small beside the current; a string earthed at one end leaks up to four times as much.

    Parameters
    ----------
    string_volts : array_like, shape S
        Voltage between the ends of the string, V; not negative.
    cells : array_like, broadcast with S
        Cells in series; not negative.
    path_ohm : array_like, broadcast with S
        Resistance of one cell's path to earth, ohm; above zero.

    Returns
    -------
    tuple of ndarray, each of the broadcast shape
        Mean over the cells and greatest, A. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative, or a resistance not above zero.

    Source
    ------
    Own derivation: Ohm's law along a string whose voltage to earth falls evenly.

    Example
    -------
    >>> mean, greatest = string_leakage_a(205.0, 100, 10e3)
    >>> f"{mean:.2f} {greatest:.2f}"
    '0.17 0.26'
    """
    volts = not_negative("string_volts", string_volts)
    whole = volts * not_negative("cells", cells) / above_zero("path_ohm", path_ohm)
    return np.asarray(whole / 12.0), np.asarray(whole / 8.0)
