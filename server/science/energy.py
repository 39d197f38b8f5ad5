"""Energy of a cell from voltages that are read a few times a day and a current that steps."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.errors import OutOfRange

Numbers = NDArray[np.float64]


def referred_volts(
    volts: ArrayLike, amps: ArrayLike, reference_amps: ArrayLike, resistance_ohm: ArrayLike
) -> Numbers:
    """A cell voltage as it would have been at the reference current.

    Linear in the current over the range in which a section is run; near zero current the
    relation does not hold, and the caller leaves such readings out.

    Parameters
    ----------
    volts : array_like, shape S
        Cell voltage as read, V.
    amps : array_like, broadcast with S
        Section current at that moment, A.
    reference_amps : array_like, broadcast with S
        The current to refer to, A.
    resistance_ohm : array_like, broadcast with S
        Differential resistance of the cell, ohm; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Voltage at the reference current, V; NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a resistance is negative.

    Source
    ------
    First-order expansion of the cell voltage about the operating current; common practice.

    Example
    -------
    A copper cell reads 1.980 V at 33 kA; at 36 kA, with 11 microohm, it would read 2.013 V.

    >>> f"{referred_volts(1.980, 33e3, 36e3, 11e-6):.3f}"
    '2.013'
    """
    resistance_ohm = np.asarray(resistance_ohm, float)
    if np.any(resistance_ohm < 0):
        raise OutOfRange(
            "resistance_ohm", found=float(np.nanmin(resistance_ohm)), allowed="zero or more"
        )
    lift_a = np.asarray(reference_amps, float) - np.asarray(amps, float)
    return np.asarray(np.asarray(volts, float) + resistance_ohm * lift_a)


def joined_volts(
    read_cell: ArrayLike,
    read_s: ArrayLike,
    volts: ArrayLike,
    at_cell: ArrayLike,
    at_s: ArrayLike,
    max_reach_s: float,
) -> Numbers:
    """Voltage of cells at moments between their readings, joined by straight lines.

    Between two readings of a cell the line that joins them; before the first and after the
    last, and where the next reading is out of reach, the nearest one is held. A moment that no
    reading of its cell reaches has no voltage.

    Parameters
    ----------
    read_cell : array_like of int, shape (n,)
        The cell of each reading, ascending.
    read_s : array_like, shape (n,)
        Moments of the readings, s, ascending within a cell.
    volts : array_like, shape (n,)
        Voltage then, V, referred to a common current.
    at_cell : array_like of int, broadcast with at_s
        The cell that is asked for.
    at_s : array_like, shape S
        Moments wanted, s.
    max_reach_s : float
        How far a reading reaches, s; positive.

    Returns
    -------
    ndarray, shape S
        Voltage, V; NaN where no reading of the cell lies within reach.

    Raises
    ------
    OutOfRange
        If `max_reach_s` is not positive.

    Source
    ------
    Trapezoidal rule; common practice.

    Example
    -------
    >>> joined_volts([1, 1], [0, 10], [2.0, 2.1], 1, [5, 12, 40], 20).tolist()
    [2.05, 2.1, nan]
    """
    if max_reach_s <= 0:
        raise OutOfRange("max_reach_s", found=max_reach_s, allowed="more than zero")
    read_cell, read_s = np.asarray(read_cell, np.int64), np.asarray(read_s, float)
    volts, at_s = np.asarray(volts, float), np.asarray(at_s, float)
    at_cell = np.broadcast_to(np.asarray(at_cell, np.int64), at_s.shape)
    answer = np.full(at_s.shape, np.nan)
    if read_s.size == 0 or at_s.size == 0:
        return answer
    earliest = min(read_s.min(), at_s.min())
    width_s = max(read_s.max(), at_s.max()) - earliest + 1.0
    right = np.searchsorted(
        read_cell * width_s + (read_s - earliest),
        at_cell * width_s + (at_s - earliest),
        side="right",
    )
    left = np.maximum(right - 1, 0)
    right = np.minimum(right, read_s.size - 1)
    ahead_s, behind_s = read_s[right] - at_s, at_s - read_s[left]
    left_ok = (read_cell[left] == at_cell) & (behind_s >= 0) & (behind_s <= max_reach_s)
    right_ok = (read_cell[right] == at_cell) & (ahead_s > 0) & (ahead_s <= max_reach_s)
    with np.errstate(divide="ignore", invalid="ignore"):
        slope = (volts[right] - volts[left]) / (read_s[right] - read_s[left])
        line = volts[left] + slope * behind_s
    answer = np.where(left_ok & right_ok, line, answer)
    answer = np.where(left_ok & ~right_ok, volts[left], answer)
    return np.asarray(np.where(right_ok & ~left_ok, volts[right], answer))


def moments_of_current(
    edge_s: ArrayLike, amps: ArrayLike, at_s: ArrayLike
) -> tuple[Numbers, Numbers, Numbers]:
    """Running integrals of a staircase of current, of its square, and of time times current.

    With these, the energy of a voltage that runs straight between two moments follows in closed
    form, however often the current stepped between them.

    Parameters
    ----------
    edge_s : array_like, shape (n,)
        Moments at which the current steps, s, ascending; at least one.
    amps : array_like, shape (n,)
        Current from each to the next, A.
    at_s : array_like, shape S
        Moments wanted, s, none before the first step.

    Returns
    -------
    tuple of ndarray, shape S
        Integrals from the first step to each moment of I dt, C; of I^2 dt, A^2 s; and of
        (t - first step) I dt, C s.

    Raises
    ------
    OutOfRange
        If a moment lies before the first step.

    Source
    ------
    Definition of the integrals of a step function.

    Example
    -------
    >>> charge, square, first = moments_of_current([0, 10], [2.0, 4.0], [15])
    >>> charge.tolist(), square.tolist(), first.tolist()
    ([40.0], [120.0], [350.0])
    """
    edge_s, amps = np.asarray(edge_s, float), np.asarray(amps, float)
    at_s = np.asarray(at_s, float)
    if at_s.size and np.min(at_s) < edge_s[0]:
        raise OutOfRange("at_s", found=float(np.min(at_s)), allowed=f"{edge_s[0]} or later")
    t0 = edge_s - edge_s[0]
    lasts = np.diff(t0)
    charge = np.concatenate(([0.0], np.cumsum(amps[:-1] * lasts)))
    square = np.concatenate(([0.0], np.cumsum(amps[:-1] ** 2 * lasts)))
    first = np.concatenate(([0.0], np.cumsum(amps[:-1] * (t0[1:] ** 2 - t0[:-1] ** 2) / 2)))
    k = np.searchsorted(edge_s, at_s, side="right") - 1
    t = at_s - edge_s[0]
    lead = t - t0[k]
    step = amps[k]
    return (
        charge[k] + step * lead,
        square[k] + step**2 * lead,
        first[k] + step * (t**2 - t0[k] ** 2) / 2,
    )


def straight_energy_j(
    start_v: ArrayLike,
    end_v: ArrayLike,
    lasts_s: ArrayLike,
    charge_c: ArrayLike,
    square_a2s: ArrayLike,
    first_cs: ArrayLike,
    reference_amps: ArrayLike,
    resistance_ohm: ArrayLike,
) -> Numbers:
    """Energy of a cell over stretches in which its referred voltage runs straight.

    The referred voltage is turned back to the current of each moment,
    V(t) = V_ref(t) + R_d (I(t) - I_ref), and V(t) I(t) is integrated exactly.

    Parameters
    ----------
    start_v : array_like, shape S
        Referred voltage at the start of each stretch, V.
    end_v : array_like, shape S
        Referred voltage at its end, V.
    lasts_s : array_like, shape S
        Its length, s.
    charge_c : array_like, shape S
        Integral of I dt over it, C.
    square_a2s : array_like, shape S
        Integral of I^2 dt over it, A^2 s.
    first_cs : array_like, shape S
        Integral of (t - start) I dt over it, C s.
    reference_amps : array_like, broadcast with S
        The current that the voltage is referred to, A.
    resistance_ohm : array_like, broadcast with S
        Differential resistance, ohm.

    Returns
    -------
    ndarray, shape S
        Energy, J; 0 for a stretch of no length; NaN where a voltage is NaN.

    Raises
    ------
    OutOfRange
        If a length is negative.

    Source
    ------
    Definition of electrical energy, W = integral of V I dt.

    Example
    -------
    An hour at 36 kA while the voltage rises from 2.00 V to 2.02 V takes 72.36 kWh.

    >>> joules = straight_energy_j(2.0, 2.02, 3600, 36e3 * 3600, 36e3**2 * 3600,
    ...                            36e3 * 3600**2 / 2, 36e3, 1e-5)
    >>> f"{joules / 3.6e6:.2f}"
    '72.36'
    """
    lasts_s = np.asarray(lasts_s, float)
    if np.any(lasts_s < 0):
        raise OutOfRange("lasts_s", found=float(np.min(lasts_s)), allowed="zero or more")
    start_v, charge_c = np.asarray(start_v, float), np.asarray(charge_c, float)
    with np.errstate(divide="ignore", invalid="ignore"):
        slope = (np.asarray(end_v, float) - start_v) / lasts_s
    resistive = np.asarray(resistance_ohm, float) * (
        np.asarray(square_a2s, float) - np.asarray(reference_amps, float) * charge_c
    )
    joules = start_v * charge_c + slope * np.asarray(first_cs, float) + resistive
    return np.asarray(np.where(lasts_s > 0, joules, 0.0))
