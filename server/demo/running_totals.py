"""Running totals of what goes with the current, exact for any moment."""

import numpy as np

from server.demo.recipe import MINUTE_MS, STEP_MINUTES, STEP_MS
from server.science.arrays import Numbers

MINUTE_S = 60.0


class CurrentTotals:
    """Integrals over time of a current that is constant within each minute, and of its square."""

    def __init__(self, amps: Numbers, start_ms: int) -> None:
        self.amps = amps
        self.start_ms = start_ms
        self._charge_c = np.concatenate(([0.0], np.cumsum(amps))) * MINUTE_S
        self._square_a2s = np.concatenate(([0.0], np.cumsum(amps * amps))) * MINUTE_S
        self.step_charge_c = np.diff(self._charge_c[::STEP_MINUTES])
        self.step_square_a2s = np.diff(self._square_a2s[::STEP_MINUTES])

    def until(self, at_ms: int) -> tuple[float, float]:
        """Charge in C and integral of the squared current in A²s since the start."""
        minute, rest_ms = divmod(at_ms - self.start_ms, MINUTE_MS)
        if rest_ms == 0:
            return float(self._charge_c[minute]), float(self._square_a2s[minute])
        rest_s, amps = rest_ms / 1000, float(self.amps[minute])
        return (
            float(self._charge_c[minute]) + amps * rest_s,
            float(self._square_a2s[minute]) + amps * amps * rest_s,
        )


class CellTotals:
    """Running totals per cell of something made in proportion to charge and squared current.

    Both factors are constant within a quarter of an hour; first axis quarters, second axis cells.
    """

    def __init__(
        self, current: CurrentTotals, per_c: Numbers, per_a2s: Numbers | None = None
    ) -> None:
        self._current = current
        self._per_c = per_c
        self._per_a2s = per_a2s
        made = per_c * current.step_charge_c[:, np.newaxis]
        if per_a2s is not None:
            made += per_a2s * current.step_square_a2s[:, np.newaxis]
        self._totals = np.zeros((per_c.shape[0] + 1, per_c.shape[1]))
        np.cumsum(made, axis=0, out=self._totals[1:])

    def at_steps(self, steps: np.ndarray[tuple[int], np.dtype[np.int64]]) -> Numbers:
        """The total of cell i at the beginning of quarter `steps[i]`."""
        totals: Numbers = self._totals[steps, np.arange(self._totals.shape[1])]
        return totals

    def until(self, at_ms: int) -> Numbers:
        """Totals of all cells since the start."""
        step, rest_ms = divmod(at_ms - self._current.start_ms, STEP_MS)
        total: Numbers = self._totals[step].copy()
        if rest_ms:
            charge_c, square_a2s = self._current.until(at_ms)
            begun_c, begun_a2s = self._current.until(at_ms - rest_ms)
            total += self._per_c[step] * (charge_c - begun_c)
            if self._per_a2s is not None:
                total += self._per_a2s[step] * (square_a2s - begun_a2s)
        return total
