"""Electrolyte that must leave so that no impurity goes beyond its limit."""

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.errors import OutOfRange, ScienceError

# Where a refinery's arsenic goes, lowest and highest share of it: a technology supplier's note on
# arsenic in refineries (looked up). The three add up to one in each house.
USUAL_ARSENIC_SHARES: dict[str, tuple[float, float]] = {
    "slimes": (0.20, 0.30),
    "liberator product": (0.20, 0.50),
    "bleed": (0.20, 0.50),
}


@dataclass(frozen=True)
class Governing:
    """The impurity that asks for the largest bleed, and those of which nothing is known.

    `name` is None and `bleed_m3_s` NaN when no impurity's bleed is known. An unknown one might
    govern: say so.
    """

    name: str | None
    bleed_m3_s: float
    unknown: tuple[str, ...]


def impurity_to_solution_kg_s(
    dissolved_kg_s: ArrayLike, impurity_share: ArrayLike, to_solution_share: ArrayLike
) -> Numbers:
    """Impurity that the anodes bring into the solution.

    Parameters
    ----------
    dissolved_kg_s : array_like, shape S
        Anode mass consumed, scrap left out, kg/s; not negative.
    impurity_share : array_like, broadcast with S
        Share of the impurity in the anode; 0 to 1.
    to_solution_share : array_like, broadcast with S
        Share of the impurity that dissolves and stays dissolved; 0 to 1.

    Returns
    -------
    ndarray, broadcast shape
        Impurity, kg/s. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the mass is negative or a share outside 0 to 1.

    Source
    ------
    Mass balance.

    Example
    -------
    900 t of anode in a day, 0.18 % nickel, 97 % to solution: kg in a day.

    >>> f"{impurity_to_solution_kg_s(900e3 / 86_400, 0.0018, 0.97) * 86_400:.1f}"
    '1571.4'
    """
    shares = {"impurity_share": impurity_share, "to_solution_share": to_solution_share}
    product = not_negative("dissolved_kg_s", dissolved_kg_s)
    for quantity, values in shares.items():
        share = not_negative(quantity, values)
        if (share > 1.0).any():
            raise OutOfRange(quantity, found=float(np.nanmax(share)), allowed="0 to 1")
        product = product * share
    return np.asarray(product)


def bleed_m3_s(
    impurity_kg_s: ArrayLike, limit_g_l: ArrayLike, leaves_otherwise_kg_s: ArrayLike = 0.0
) -> Numbers:
    """Bleed that holds one impurity at its limit.

    Q = (what comes - what leaves otherwise) / limit, at steady state and well mixed. Negative
    where other ways take out more than comes: no bleed is needed for that impurity.

    Parameters
    ----------
    impurity_kg_s : array_like, shape S
        Impurity that comes into the solution, kg/s; not negative.
    limit_g_l : array_like, broadcast with S
        Highest concentration allowed, g/L; above zero.
    leaves_otherwise_kg_s : array_like, broadcast with S
        Impurity that leaves with cathodes, liberator product, crystals and so on, kg/s; not
        negative.

    Returns
    -------
    ndarray, broadcast shape
        Bleed, m3/s. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a flow is negative or a limit not above zero.

    Source
    ------
    Mass balance at steady state.

    Example
    -------
    >>> f"{bleed_m3_s(1571.4 / 86_400, 15.0) * 86_400:.2f}"
    '104.76'
    """
    comes = not_negative("impurity_kg_s", impurity_kg_s)
    stays = comes - not_negative("leaves_otherwise_kg_s", leaves_otherwise_kg_s)
    # 1 g/L is 1 kg/m3.
    return np.asarray(stays / above_zero("limit_g_l", limit_g_l))


def governing_impurity(bleeds_m3_s: Mapping[str, float]) -> Governing:
    """The impurity that decides the bleed: the one that asks for the most.

    Parameters
    ----------
    bleeds_m3_s : mapping of str to float
        Bleed that each impurity asks for, m3/s, by its name; NaN where unknown.

    Returns
    -------
    Governing
        Its name and bleed, and the names of those unknown.

    Raises
    ------
    ScienceError
        If no impurity is given.
    OutOfRange
        If a bleed is infinite.

    Source
    ------
    Mass balance: the largest bleed satisfies them all.

    Example
    -------
    >>> governing_impurity({"Ni": 104.76 / 86_400, "As": 73.6 / 86_400}).name
    'Ni'
    """
    if not bleeds_m3_s:
        raise ScienceError("bleeds_m3_s", found="none", allowed="at least one impurity")
    bleeds = {name: float(finite(name, bleed)) for name, bleed in bleeds_m3_s.items()}
    unknown = tuple(name for name, bleed in bleeds.items() if math.isnan(bleed))
    known = {name: bleed for name, bleed in bleeds.items() if name not in unknown}
    if not known:
        return Governing(None, math.nan, unknown)
    name = max(known, key=lambda impurity: known[impurity])
    return Governing(name, known[name], unknown)


def steady_g_l(impurity_kg_s: ArrayLike, bleed_m3_s: ArrayLike) -> Numbers:
    """Concentration that an impurity tends to under a constant bleed.

    c = m / Q, well mixed.

    Parameters
    ----------
    impurity_kg_s : array_like, shape S
        Impurity that stays in the solution, kg/s; not negative.
    bleed_m3_s : array_like, broadcast with S
        Bleed, m3/s; above zero: without one there is no steady level.

    Returns
    -------
    ndarray, broadcast shape
        Concentration, g/L. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the impurity is negative or the bleed not above zero.

    Source
    ------
    Mass balance at steady state.

    Example
    -------
    >>> f"{steady_g_l(1571.4 / 86_400, 104.76 / 86_400):.1f}"
    '15.0'
    """
    bleed = above_zero("bleed_m3_s", bleed_m3_s)
    return np.asarray(not_negative("impurity_kg_s", impurity_kg_s) / bleed)


def concentration_after_g_l(
    start_g_l: ArrayLike,
    impurity_kg_s: ArrayLike,
    bleed_m3_s: ArrayLike,
    volume_m3: ArrayLike,
    duration_s: ArrayLike,
) -> Numbers:
    """Concentration of an impurity after some time, well mixed.

    V dc/dt = m - Q c, so c = c0 exp(-Qt/V) + (m/Q) (1 - exp(-Qt/V)); without bleed c0 + m t / V.
    The bleed is replaced by solution that holds none of the impurity, and the volume stays.

    Parameters
    ----------
    start_g_l : array_like, shape S
        Concentration at the beginning, g/L; not negative.
    impurity_kg_s : array_like, broadcast with S
        Impurity that stays in the solution, kg/s; not negative.
    bleed_m3_s : array_like, broadcast with S
        Bleed, m3/s; not negative.
    volume_m3 : array_like, broadcast with S
        Electrolyte in circulation, m3; above zero.
    duration_s : array_like, broadcast with S
        Time, s; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Concentration, g/L. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative, or the volume not above zero.

    Source
    ------
    Mass balance of a stirred tank, integrated.

    Example
    -------
    Nickel from 12 g/L, 1571.4 kg a day into 5000 m3, 30 days, without and with a bleed.

    >>> day = 86_400
    >>> f"{concentration_after_g_l(12.0, 1571.4 / day, 0.0, 5000.0, 30 * day):.2f}"
    '21.43'
    >>> f"{concentration_after_g_l(12.0, 1571.4 / day, 104.76 / day, 5000.0, 30 * day):.2f}"
    '13.40'
    """
    start = not_negative("start_g_l", start_g_l)
    duration = not_negative("duration_s", duration_s)
    volume = above_zero("volume_m3", volume_m3)
    changes = np.asarray(not_negative("bleed_m3_s", bleed_m3_s) * duration / volume)
    # (1 - exp(-x)) / x, which is 1 at no bleed.
    kept = np.where(changes == 0.0, 1.0, -np.expm1(-changes) / np.where(changes == 0, 1, changes))
    added = not_negative("impurity_kg_s", impurity_kg_s) * duration / volume
    return np.asarray(start * np.exp(-changes) + added * kept)


def time_to_limit_s(
    start_g_l: ArrayLike,
    limit_g_l: ArrayLike,
    impurity_kg_s: ArrayLike,
    bleed_m3_s: ArrayLike,
    volume_m3: ArrayLike,
) -> Numbers:
    """Time until an impurity reaches its limit, well mixed.

    t = (V/Q) ln((m/Q - c0) / (m/Q - limit)); without bleed (limit - c0) V / m.

    Parameters
    ----------
    start_g_l : array_like, shape S
        Concentration now, g/L; not negative.
    limit_g_l : array_like, broadcast with S
        Highest concentration allowed, g/L; not negative.
    impurity_kg_s : array_like, broadcast with S
        Impurity that stays in the solution, kg/s; not negative.
    bleed_m3_s : array_like, broadcast with S
        Bleed, m3/s; not negative.
    volume_m3 : array_like, broadcast with S
        Electrolyte in circulation, m3; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Time, s: 0 where the limit is reached already, infinity where it never will be. NaN
        where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative, or the volume not above zero.

    Source
    ------
    `concentration_after_g_l`, solved for the time.

    Example
    -------
    >>> day = 86_400
    >>> f"{time_to_limit_s(12.0, 15.0, 1571.4 / day, 0.0, 5000.0) / day:.2f}"
    '9.55'
    >>> f"{time_to_limit_s(12.0, 15.0, 1571.4 / day, 110.0 / day, 5000.0)}"
    'inf'
    """
    start, limit = not_negative("start_g_l", start_g_l), not_negative("limit_g_l", limit_g_l)
    impurity = not_negative("impurity_kg_s", impurity_kg_s)
    bleed = not_negative("bleed_m3_s", bleed_m3_s)
    volume = above_zero("volume_m3", volume_m3)
    rises_kg_s = np.asarray(impurity - bleed * limit)
    to_go = np.asarray(limit - start)
    with np.errstate(divide="ignore", invalid="ignore"):
        straight_s = to_go * volume / rises_kg_s
        per_s = bleed / volume
        bent_s = np.log1p(per_s * straight_s) / per_s
    seconds = np.where(bleed == 0.0, straight_s, bent_s)
    seconds = np.where(rises_kg_s <= 0.0, math.inf, seconds)
    seconds = np.where(to_go <= 0.0, 0.0, seconds)
    missing = np.isnan(rises_kg_s) | np.isnan(to_go) | np.isnan(volume)
    return np.asarray(np.where(missing, math.nan, seconds))
