"""Readings of a section under load, as the accounts prepare them for the watch."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from server.storage.readings import Series


@dataclass(frozen=True)
class Loaded:
    """Believed readings under load: as read, and referred to rated current."""

    series: Series
    referred_v: NDArray[np.float64]
    amps: NDArray[np.float64]
    """The section's current then; rated current where none is recorded."""

    def within(self, from_ms: int, to_ms: int) -> "Loaded":
        """The readings with from_ms <= at < to_ms."""
        keep = (self.series.at_ms >= from_ms) & (self.series.at_ms < to_ms)
        return Loaded(self.series.where(keep), self.referred_v[keep], self.amps[keep])


@dataclass(frozen=True)
class Heard:
    """All that the watch needs of a time of a section."""

    loaded: Loaded
    doubted: Series
    """Readings that are not believed."""
    bypasses: list[tuple[int, int, int]]
    """(cell_id, from_ms, to_ms)."""
