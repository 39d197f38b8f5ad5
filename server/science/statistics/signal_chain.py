"""A chart that moves by normal steps until it signals, as a linear system on quadrature points."""

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np
from numpy.typing import NDArray

from server.science.arrays import Numbers
from server.science.errors import OutOfRange

# Common practice, tried here: eight points for each standard deviation of a step give run lengths
# to ten digits, because the kernel is smooth and Gauss-Legendre converges faster than any power.
POINTS_PER_SPREAD = 8.0
# Common practice: fewer points than this are never worth saving.
LEAST_POINTS = 48
# The largest system that is solved at once: 32 MB, about a second.
MOST_POINTS = 2000


@lru_cache(maxsize=64)
def _gauss_legendre(count: int) -> tuple[Numbers, Numbers]:
    """Points and weights on (-1, 1), kept because finding them costs more than using them."""
    points, weights = np.polynomial.legendre.leggauss(count)
    return points, weights


@dataclass(frozen=True)
class SignalChain:
    """A chart's state between two bounds, moved by one normal step for each reading.

    From state s the next state is normal with the mean `centre_of(s)` and the standard deviation
    `spread`. Above `high` the chart signals. Below `low` it is held at `low` (a sum that never
    falls below zero, which makes an atom of probability there) or, when not `is_held`, signals
    too. The Fredholm equation of the run length is replaced by its Nystrom system on
    Gauss-Legendre points, with one more unknown for the atom.
    """

    low: float
    high: float
    spread: float
    centre_of: Callable[[Numbers], Numbers]
    is_held: bool

    @cached_property
    def _rule(self) -> tuple[Numbers, Numbers]:
        """Points between the bounds and their weights."""
        width = self.high - self.low
        wanted = max(LEAST_POINTS, int(np.ceil(POINTS_PER_SPREAD * width / self.spread)))
        if wanted > MOST_POINTS:
            allowed = f"a range of at most {MOST_POINTS / POINTS_PER_SPREAD:g} steps' spread"
            raise OutOfRange("limit", found=width / self.spread, allowed=allowed)
        points, weights = _gauss_legendre(wanted)
        return np.asarray(self.low + width * (points + 1.0) / 2.0), np.asarray(
            weights * width / 2.0
        )

    @cached_property
    def states(self) -> Numbers:
        """The states that stand for all others: the atom first where there is one."""
        points, _ = self._rule
        return np.concatenate(([self.low], points)) if self.is_held else points

    def moves(self, states: Numbers) -> Numbers:
        """Probability of moving from each given state to each state of the chain."""
        # Loaded here: it takes a good part of the time in which a command starts.
        from scipy import special

        points, weights = self._rule
        centres = np.asarray(self.centre_of(states))[:, np.newaxis]
        away = (points - centres) / self.spread
        inside = weights * np.exp(-(away**2) / 2.0) / (self.spread * np.sqrt(2.0 * np.pi))
        if not self.is_held:
            return np.asarray(inside)
        held = special.ndtr((self.low - centres) / self.spread)
        return np.concatenate((held, inside), axis=1)

    @cached_property
    def matrix(self) -> Numbers:
        """Moves among the states of the chain; what is missing from a row's sum has signalled."""
        return self.moves(self.states)

    @cached_property
    def averages(self) -> Numbers:
        """Average run length from each state of the chain."""
        ones = np.ones(len(self.states))
        return np.asarray(np.linalg.solve(np.diag(ones) - self.matrix, ones), dtype=np.float64)

    def average(self, start: float) -> float:
        """Average run length from a state that need not be one of the chain's."""
        return 1.0 + float(self.moves(np.array([start]))[0] @ self.averages)

    def deviation(self, start: float) -> float:
        """Standard deviation of the run length from a state."""
        second = np.linalg.solve(np.eye(len(self.states)) - self.matrix, 2.0 * self.averages - 1.0)
        row = self.moves(np.array([start]))[0]
        mean = self.average(start)
        return float(np.sqrt(1.0 + 2.0 * (row @ self.averages) + row @ second - mean**2))

    def survival(self, start: float, readings: int) -> Numbers:
        """Probability of no signal by the reading 0, 1, 2 ... `readings`, from a state."""
        row = self.moves(np.array([start]))[0]
        silent = np.ones(readings + 1)
        left = np.ones(len(self.states))
        for reading in range(1, readings + 1):
            silent[reading] = row @ left
            left = self.matrix @ left
        return silent

    def quantile(self, start: float, share: float) -> int:
        """Reading by which this share of the charts has signalled."""
        row = self.moves(np.array([start]))[0]
        left = np.ones(len(self.states))
        reading, silent = 1, float(row @ left)
        while silent > 1.0 - share:
            moved = self.matrix @ left
            after = float(row @ moved)
            ratios = moved / left
            if ratios.max() - ratios.min() < 1e-12 * ratios.max():
                # All states lose the same share by now, so the rest of the way is geometric.
                steps = np.log((1.0 - share) / silent) / np.log(after / silent)
                return reading + int(np.ceil(steps - 1e-9))
            reading, silent, left = reading + 1, after, moved
        return reading

    @cached_property
    def settled(self) -> Numbers:
        """Where a chart is that has run for long without a signal, as shares of the states."""
        values, vectors = np.linalg.eig(self.matrix.T)
        slowest = vectors[:, np.argmax(values.real)].real
        return np.asarray(slowest / slowest.sum())


def normal_steps(shift: float, gain: float, keep: float) -> Callable[[Numbers], Numbers]:
    """Mean of the next state of a chart that is linear in its state and in the reading.

    The next state is keep x state + gain x reading (+ a constant within the shift), with readings
    of standard deviation 1 and mean `shift`.

    Parameters
    ----------
    shift : float
        Mean of the readings less what the chart takes off each, in standard deviations.
    gain : float
        Weight of the newest reading.
    keep : float
        Weight of the former state.

    Returns
    -------
    callable
        Takes an array of states, gives the means of the next.

    Raises
    ------
    OutOfRange
        If a number is not finite.

    Source
    ------
    Definition; E. S. Page, Biometrika 41 (1954) 100; S. W. Roberts, Technometrics 1 (1959) 239.

    Example
    -------
    >>> normal_steps(shift=1.0, gain=0.2, keep=0.8)(np.array([0.0, 1.0]))
    array([0.2, 1. ])
    """
    for quantity, value in (("shift", shift), ("gain", gain), ("keep", keep)):
        if not np.isfinite(value):
            raise OutOfRange(quantity, found=value, allowed="a finite number")
    return lambda states: keep * states + gain * shift


def each_shift(shift: NDArray[np.float64], run_length: Callable[[float], float]) -> Numbers:
    """A run length worked out for every shift of an array.

    Parameters
    ----------
    shift : ndarray, any shape
        Shifts, in standard deviations; NaN where missing.
    run_length : callable
        Takes one shift, gives one number.

    Returns
    -------
    ndarray, same shape
        The numbers; NaN where the shift is missing.

    Source
    ------
    House rule: NaN in, NaN out, at that element only.

    Example
    -------
    >>> each_shift(np.array([1.0, np.nan]), lambda shift: 2.0 * shift)
    array([ 2., nan])
    """
    found = [np.nan if np.isnan(one) else run_length(float(one)) for one in shift.flat]
    return np.array(found, dtype=np.float64).reshape(shift.shape)
