"""A short seen from outside: its current and resistance from a voltage, and what it costs."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.constants import Metal
from server.science.errors import OutOfRange
from server.science.faraday import equivalent_kg_c
from server.science.uncertainty.propagation import combined


@dataclass(frozen=True)
class ShortEstimate:
    """A short's current or resistance, with its standard uncertainty in the same unit."""

    value: Numbers
    standard_uncertainty: Numbers


def short_from_volts(
    deviation_v: ArrayLike,
    differential_resistance_ohm: ArrayLike,
    u_deviation_v: ArrayLike = 0.0,
    u_differential_resistance_ohm: ArrayLike = 0.0,
) -> ShortEstimate:
    """Current through the shorts of a cell, from how far its voltage lies below the healthy one.

    Healthy: V = E + R_d I; with shorts that carry I_s: V = E + R_d (I - I_s), so that
    I_s = -deviation / R_d. Exact for a cell that is linear near its working point. Both signs
    are kept: noise must cancel over many readings, and clipping it would make metal vanish.

    Parameters
    ----------
    deviation_v : array_like, shape S
        Cell voltage less the healthy one at the same current, V; both signs.
    differential_resistance_ohm : array_like, broadcast with S
        Differential resistance R_d of the whole cell, ohm; above zero.
    u_deviation_v : array_like, broadcast with S
        Standard uncertainty of the deviation, V; not negative.
    u_differential_resistance_ohm : array_like, broadcast with S
        Standard uncertainty of R_d, ohm; not negative.

    Returns
    -------
    ShortEstimate
        Current, A, negative where the voltage lies above the healthy one, and its standard
        uncertainty, A. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a resistance is not above zero or an uncertainty is negative.

    Source
    ------
    Own derivation from the ladder of parallel pairs; JCGM 100:2008, 5.1.2 for the uncertainty.

    Example
    -------
    16.5 mV too low, R_d 16.67 microohm, known to 1 mV and 10 %.

    >>> found = short_from_volts(-0.01653, 16.67e-6, 1e-3, 1.667e-6)
    >>> f"{found.value:.0f} +/- {found.standard_uncertainty:.0f} A"
    '992 +/- 116 A'
    """
    deviation = finite("deviation_v", deviation_v)
    ohm = above_zero("differential_resistance_ohm", differential_resistance_ohm)
    u_deviation = not_negative("u_deviation_v", u_deviation_v)
    u_ohm = not_negative("u_differential_resistance_ohm", u_differential_resistance_ohm)
    amps = np.asarray(-deviation / ohm)
    by_volts, by_ohm, u_volts, u_ohm = np.broadcast_arrays(
        -1.0 / ohm, deviation / ohm**2, u_deviation, u_ohm
    )
    u_amps = combined(np.stack([by_volts, by_ohm]), np.stack([u_volts, u_ohm]))
    return ShortEstimate(amps, u_amps)


def short_ohm_from_volts(
    healthy_volts: ArrayLike,
    deviation_v: ArrayLike,
    differential_resistance_ohm: ArrayLike,
    u_deviation_v: ArrayLike = 0.0,
    u_differential_resistance_ohm: ArrayLike = 0.0,
) -> ShortEstimate:
    """Resistance of a short, from how far the voltage of its cell lies below the healthy one.

    R = V / I_s with I_s = -deviation / R_d. First order: where the deviation is hardly above its
    own uncertainty, the resistance is little known and its distribution one-sided.

    Parameters
    ----------
    healthy_volts : array_like, shape S
        Voltage of the healthy cell at the same current, V; above zero.
    deviation_v : array_like, broadcast with S
        Cell voltage less the healthy one, V.
    differential_resistance_ohm : array_like, broadcast with S
        Differential resistance R_d of the whole cell, ohm; above zero.
    u_deviation_v : array_like, broadcast with S
        Standard uncertainty of the deviation, V; not negative.
    u_differential_resistance_ohm : array_like, broadcast with S
        Standard uncertainty of R_d, ohm; not negative.

    Returns
    -------
    ShortEstimate
        Resistance and its standard uncertainty, ohm. NaN where an input is NaN, and where the
        voltage does not lie below the healthy one.

    Raises
    ------
    OutOfRange
        If a voltage or resistance is not above zero, or an uncertainty is negative.

    Source
    ------
    Own derivation from the ladder of parallel pairs; JCGM 100:2008, 5.1.2 for the uncertainty.

    Example
    -------
    >>> found = short_ohm_from_volts(2.0, -0.01653, 16.67e-6, 1e-3, 1.667e-6)
    >>> f"{1000 * found.value:.2f} +/- {1000 * found.standard_uncertainty:.2f} milliohm"
    '2.00 +/- 0.23 milliohm'
    """
    healthy = above_zero("healthy_volts", healthy_volts)
    deviation = finite("deviation_v", deviation_v)
    ohm = above_zero("differential_resistance_ohm", differential_resistance_ohm)
    u_deviation = not_negative("u_deviation_v", u_deviation_v)
    u_ohm = not_negative("u_differential_resistance_ohm", u_differential_resistance_ohm)
    low = np.where(deviation < 0.0, deviation, math.nan)
    short = -ohm * (healthy / low + 1.0)
    by_volts, by_ohm, u_volts, u_ohm = np.broadcast_arrays(
        ohm * healthy / low**2, short / ohm, u_deviation, u_ohm
    )
    u_short = combined(np.stack([by_volts, by_ohm]), np.stack([u_volts, u_ohm]))
    return ShortEstimate(np.asarray(short), u_short)


def share_of_many_shorts(shorted_share: ArrayLike, current_ratio: ArrayLike) -> Numbers:
    """Share of the current lost when a share of all cathodes is shorted.

    s = n x / (1 + n x): the cell current is constant, so the shorts take from all plates alike.

    Parameters
    ----------
    shorted_share : array_like, shape S
        Shorts for each cathode, n; not negative.
    current_ratio : array_like, broadcast with S
        Current of a short over that which a healthy plate still carries, x; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Share of the current, 0 to 1. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative.

    Source
    ------
    Own derivation: N i + n N x i = I.

    Example
    -------
    2 % of the cathodes, each short with 1.5 times a plate's current.

    >>> f"{share_of_many_shorts(0.02, 1.5):.4f}"
    '0.0291'
    """
    taken = not_negative("shorted_share", shorted_share) * not_negative(
        "current_ratio", current_ratio
    )
    return np.asarray(taken / (1.0 + taken))


def lost_metal_kg(
    short_a: ArrayLike, duration_s: ArrayLike, metal: Metal, plating_efficiency: ArrayLike = 1.0
) -> Numbers:
    """Metal that a short's current would have made.

    K I_s t, times the efficiency of the current that does plate: without the short, that share
    of its current would have become metal.

    Parameters
    ----------
    short_a : array_like, shape S
        Current through the short, A; both signs, so that noise cancels in sums.
    duration_s : array_like, broadcast with S
        How long it lasted, s; not negative.
    metal : Metal
        The metal deposited.
    plating_efficiency : array_like, broadcast with S
        Efficiency of the current that is not in the short, as a share; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Metal, kg. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a duration or efficiency is negative.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77.

    Example
    -------
    >>> from server.science.constants import COPPER
    >>> f"{lost_metal_kg(1000.0, 86_400, COPPER):.2f}"
    '28.45'
    """
    charge_c = finite("short_a", short_a) * not_negative("duration_s", duration_s)
    efficiency = not_negative("plating_efficiency", plating_efficiency)
    return np.asarray(equivalent_kg_c(metal) * charge_c * efficiency)


def lost_value(lost_kg: ArrayLike, metal_value_per_kg: ArrayLike) -> Numbers:
    """Worth of metal that was not made, in the plant's currency.

    Metal alone. Energy is not added: a short in refining costs metal and hardly any energy for
    each tonne, and the two would be counted twice.

    Parameters
    ----------
    lost_kg : array_like, shape S
        Metal not made, kg; both signs.
    metal_value_per_kg : array_like, broadcast with S
        What a kilogram is worth to the plant, currency per kg; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Value, currency. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the value of a kilogram is negative.

    Source
    ------
    Definition: mass times value.

    Example
    -------
    >>> f"{lost_value(28.45, 8.0):.2f}"
    '227.60'
    """
    worth = not_negative("metal_value_per_kg", metal_value_per_kg)
    return np.asarray(finite("lost_kg", lost_kg) * worth)


def short_energy_ratio(loss_share: ArrayLike, resistive_share: ArrayLike) -> Numbers:
    """Energy for each kilogram of metal with shorts, over that without.

    1 + (1 - p) s / (1 - s), with p = R_d I / V the share of the healthy voltage that follows the
    current. Refining (p near 1): the voltage falls as the metal does and the ratio stays near 1.
    Winning (p about 0.2): the reversible part is paid for current that makes nothing.

    Parameters
    ----------
    loss_share : array_like, shape S
        Share s of the current in shorts; not negative, below 1.
    resistive_share : array_like, broadcast with S
        Share p of the healthy cell voltage that follows the current; 0 to 1.

    Returns
    -------
    ndarray, broadcast shape
        Ratio of specific energies, 1 or more. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a share lies outside its range.

    Source
    ------
    Own derivation from the ladder of parallel pairs.

    Example
    -------
    The same 3.3 % of the current, lost in winning and in refining.

    >>> f"{short_energy_ratio(0.0331, 0.25):.4f} {short_energy_ratio(0.0331, 1.0):.4f}"
    '1.0257 1.0000'
    """
    lost = not_negative("loss_share", loss_share)
    if (lost >= 1.0).any():
        raise OutOfRange("loss_share", found=float(np.nanmax(lost)), allowed="below 1")
    resistive = not_negative("resistive_share", resistive_share)
    if (resistive > 1.0).any():
        raise OutOfRange("resistive_share", found=float(np.nanmax(resistive)), allowed="0 to 1")
    return np.asarray(1.0 + (1.0 - resistive) * lost / (1.0 - lost))
