"""Differential resistances of cells, fitted to their own readings at different currents."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.errors import OutOfRange, WrongShape
from server.science.statistics.spread import NORMAL_CONSISTENCY, median
from server.science.voltage.resistance import Resistance

# P. J. Huber, Robust Statistics (1981): 95 % efficient on normal data (from memory).
HUBER_BEND = 1.345
# A. E. Beaton and J. W. Tukey, Technometrics 16 (1974) 147: 95 % efficient too (from memory).
BISQUARE_END = 4.685
# Ours: the reason that is given for a missing result.
TOO_FEW_ROUNDS = "too few rounds"
# Ours: the other reason.
TOO_STEADY_A_CURRENT = "the current hardly varied"
# Ours: steps of the fit, far more than it needs; and how small the last may be beside the noise.
MOST_STEPS, SMALL_STEP = 100, 1e-8


@dataclass(frozen=True)
class FittedResistance(Resistance):
    """Differential resistances from rounds, with what they rest on, one element for each cell.

    `noise_v` is the standard deviation of a reading about the line, `rounds` the readings used,
    `spread_share` how widely the current varied. `reason` is empty where there is a result, and
    says why where it is NaN.
    """

    noise_v: Numbers
    rounds: NDArray[np.int64]
    spread_share: Numbers
    reason: NDArray[np.str_]


def resistance_from_rounds(
    amps: ArrayLike,
    volts: ArrayLike,
    floor_v: float = 0.001,
    least_spread: float = 0.01,
    least_rounds: int = 6,
) -> FittedResistance:
    """Differential resistance of each cell, from rounds at different currents.

    The slope of voltage over current, by Tukey's bisquare started from Huber's fit: readings far
    from the line, such as those of a short, end up without weight. All cells are fitted at once.
    SciPy's own robust fits (`least_squares`, `theilslopes`) take one cell at a time; medians of
    pairs would need half the square of the rounds in memory, and say nothing where the current
    stood at two or three set points, so that most pairs are no pairs. A handful of
    weighted passes over the whole matrix does 1,500 cells in well under a second.

    The current is taken as exact, the same shunt serving all rounds, and anything else that
    moved the voltage as unrelated to it: refer readings to one temperature and age of deposit
    first, or take rounds close together. A negative slope is returned as it is.

    Parameters
    ----------
    amps : array_like, shape (rounds,) or (rounds, cells)
        Current of the cell at each reading, A; not negative, NaN where unknown.
    volts : array_like, shape (rounds,) or (rounds, cells)
        Cell voltage, V; NaN where not read.
    floor_v : float
        Least noise to believe in, V, such as the last digit of the meter; above zero.
    least_spread : float
        Least root mean square of the current about its mean, as a share of the mean, with the
        round furthest from it set aside, for a slope to be given.
    least_rounds : int
        Least number of readings for a slope to be given; at least 4.

    Returns
    -------
    FittedResistance
        Arrays of shape (cells,), or of no dimension for one cell. NaN with a reason where there
        are too few readings or the current hardly varied.

    Raises
    ------
    OutOfRange
        If a current is negative, a number infinite, the floor not above zero, or fewer than 4
        rounds are to do.
    WrongShape
        If currents and voltages do not belong together.

    Source
    ------
    P. J. Huber, Robust Statistics (1981), section 7.6, for the standard uncertainty; P. W. Holland
    and R. E. Welsch, Commun. Stat. A 6 (1977) 813, for the repeated weighting (from memory).

    Example
    -------
    Seven rounds of a copper cell of 15 microohm, the fifth with a short.

    >>> amps = [30e3, 28e3, 31e3, 27e3, 29e3, 30.5e3, 26e3]
    >>> volts = [2.050, 2.019, 2.066, 2.004, 1.985, 2.058, 1.991]
    >>> found = resistance_from_rounds(amps, volts)
    >>> f"{found.ohm * 1e6:.1f}"
    '15.2'
    """
    if least_rounds < 4:
        raise OutOfRange("least_rounds", found=least_rounds, allowed="4 or more")
    above_zero("floor_v", floor_v)
    current, reading = _paired(not_negative("amps", amps), finite("volts", volts))
    there = ~np.isnan(current + reading)
    count = there.sum(axis=0)
    counted = np.maximum(count, 1)
    mean_a = np.where(there, current, 0.0).sum(axis=0) / counted
    off_a = np.where(there, current - mean_a, 0.0)
    squares = (off_a**2).sum(axis=0)
    furthest = (off_a**2).max(axis=0, initial=0.0)
    # Without the furthest round the mean moves too, which takes n / (n - 1) of its square.
    others = np.maximum(count - 1, 1)
    steady = np.sqrt(np.maximum(squares - furthest * count / others, 0.0) / others)
    spread = np.divide(steady, mean_a, out=np.zeros_like(steady), where=mean_a > 0.0)
    reason = np.where(spread < least_spread, TOO_STEADY_A_CURRENT, "")
    reason = np.where(count < least_rounds, TOO_FEW_ROUNDS, reason)
    usable = reason == ""
    slope, noise = np.full(count.shape, np.nan), np.full(count.shape, np.nan)
    if usable.any():
        slope[usable], noise[usable] = _fitted(
            off_a[:, usable], reading[:, usable], there[:, usable], floor_v
        )
    width = np.sqrt(np.where(usable, squares, np.nan))
    found = FittedResistance(slope, noise / width, noise, count, spread, reason)
    return found if np.ndim(volts) > 1 or np.ndim(amps) > 1 else _only(found)


def _paired(amps: Numbers, volts: Numbers) -> tuple[Numbers, Numbers]:
    """Currents and voltages as two matrices of rounds by cells."""
    if amps.ndim not in (1, 2) or volts.ndim not in (1, 2):
        raise WrongShape("volts", found=volts.shape, allowed="rounds, or rounds by cells")
    by_cell = [matrix[:, None] if matrix.ndim == 1 else matrix for matrix in (amps, volts)]
    if by_cell[0].shape[0] != by_cell[1].shape[0]:
        raise WrongShape("volts", found=volts.shape, allowed=f"{amps.shape[0]} rounds")
    if amps.ndim == volts.ndim == 2 and amps.shape != volts.shape:
        raise WrongShape("volts", found=volts.shape, allowed=f"{amps.shape}")
    current, reading = np.broadcast_arrays(*by_cell)
    return current, reading


def _fitted(
    off_a: Numbers, volts: Numbers, there: NDArray[np.bool_], floor_v: float
) -> tuple[Numbers, Numbers]:
    """Slopes of voltage over current less its mean, and the noise that their doubt comes from."""
    known_v = np.where(there, volts, 0.0)
    furthest_a = np.abs(off_a).max(axis=0)
    level, slope = _weighted_line(off_a, known_v, there.astype(np.float64))
    for weigh in (_huber_weight, _bisquare_weight):
        for _ in range(MOST_STEPS):
            residual, scale = _scaled(known_v - level - slope * off_a, there, floor_v)
            weight = np.where(there, weigh(residual / scale), 0.0)
            was = level, slope
            level, slope = _weighted_line(off_a, known_v, weight)
            moved_v = np.abs(level - was[0]) + np.abs(slope - was[1]) * furthest_a
            if (moved_v < SMALL_STEP * scale).all():
                break
    residual, scale = _scaled(known_v - level - slope * off_a, there, floor_v)
    return slope, np.maximum(_noise(residual / scale, there) * scale, floor_v)


def _scaled(residual: Numbers, there: NDArray[np.bool_], floor_v: float) -> tuple[Numbers, Numbers]:
    """Residuals, with a robust standard deviation of those that are there."""
    distance = np.where(there, np.abs(residual), np.nan)
    return residual, np.maximum(NORMAL_CONSISTENCY * median(distance, axis=0), floor_v)


def _weighted_line(off_a: Numbers, volts: Numbers, weight: Numbers) -> tuple[Numbers, Numbers]:
    """Levels and slopes of the weighted least squares lines of all cells."""
    total = weight.sum(axis=0)
    mean_a = (weight * off_a).sum(axis=0) / total
    mean_v = (weight * volts).sum(axis=0) / total
    apart = off_a - mean_a
    slope = (weight * apart * (volts - mean_v)).sum(axis=0) / (weight * apart**2).sum(axis=0)
    return mean_v - slope * mean_a, slope


def _huber_weight(score: Numbers) -> Numbers:
    """Full weight up to the bend, and beyond it as much as keeps the pull constant."""
    return np.asarray(HUBER_BEND / np.maximum(np.abs(score), HUBER_BEND))


def _bisquare_weight(score: Numbers) -> Numbers:
    """Weight that falls to nothing at the end, and stays there."""
    return np.asarray(np.maximum(1.0 - (score / BISQUARE_END) ** 2, 0.0) ** 2)


def _noise(score: Numbers, there: NDArray[np.bool_]) -> Numbers:
    """Standard deviation of a reading that the fit amounts to, in units of the scale.

    Huber's formula for the slope's variance, with his correction for few readings, less the sum
    of squares of the current.
    """
    count = there.sum(axis=0)
    pull = np.where(there, score * _bisquare_weight(score), 0.0)
    inside = np.minimum((score / BISQUARE_END) ** 2, 1.0)
    rise = np.where(there, (1.0 - inside) * (1.0 - 5.0 * inside), 0.0)
    mean_rise = rise.sum(axis=0) / count
    unevenness = np.where(there, (rise - mean_rise) ** 2, 0.0).sum(axis=0) / count
    correction = 1.0 + 2.0 / count * unevenness / mean_rise**2
    return np.asarray(correction * np.sqrt((pull**2).sum(axis=0) / (count - 2)) / mean_rise)


def _only(found: FittedResistance) -> FittedResistance:
    """The one cell there is, without the dimension of cells."""
    return FittedResistance(
        found.ohm[0:1].reshape(()),
        found.standard_uncertainty_ohm[0:1].reshape(()),
        found.noise_v[0:1].reshape(()),
        found.rounds[0:1].reshape(()),
        found.spread_share[0:1].reshape(()),
        found.reason[0:1].reshape(()),
    )
