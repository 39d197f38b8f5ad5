"""How far each cell of a section stands from the others, by its newest reading."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.science.charge import UNRECORDED
from server.science.energy import referred_volts
from server.science.statistics.spread import median, robust_sd
from server.storage.current import bypasses_of, knots_between
from server.storage.latest import latest
from server.storage.plant import House, SectionPlan
from server.watch.newest import last_said
from server.watch.resistance import resistance_ohm

RECENT_MS = 24 * 3_600_000
"""How old a reading may be and still say how the cell is now."""

_ROUND_MS = 12 * 3_600_000
"""The longest that a round may take."""

_ENOUGH_CELLS = 4
"""With fewer there is no saying which of them is the odd one."""

_LEAST_LOAD = 0.2
"""Share of rated current below which a voltage says nothing about a cell under load."""


@dataclass(frozen=True)
class Deviation:
    """One cell against its section; the voltages are referred to rated current."""

    cell: int
    read_ms: int
    referred_v: float
    deviation_v: float
    """Above the section's median, V."""
    noise_v: float
    """What is usual among the section's cells: a robust standard deviation, V."""

    @property
    def times_noise(self) -> float:
        """How many times the usual the deviation is, with its sign."""
        return self.deviation_v / self.noise_v


@dataclass(frozen=True)
class Lean:
    """How far a cell is from what a healthy one would read."""

    deviation_v: float
    times_noise: float
    """The deviation in multiples of what is usual."""


def leans_now(session: Session, house: House, section_name: str, now_ms: int) -> dict[int, Lean]:
    """How far each cell read within a day is off, by number.

    By what the watch made of its newest round, over the band of what it expected; while it has
    seen no round of the section within a day, against the median of the section's cells.
    """
    said = last_said(session, house.section(section_name), now_ms - RECENT_MS - _ROUND_MS, now_ms)
    recent = np.flatnonzero(said["at_ms"] > now_ms - RECENT_MS)
    if not len(recent):
        found = deviations_now(session, house, section_name, now_ms)
        return {one.cell: Lean(one.deviation_v, one.times_noise) for one in found}
    deviation_v = said["deviation_v"][recent].astype(np.float64)
    band_v = np.maximum(said["band_v"][recent].astype(np.float64), 1e-6)
    return {
        cell: Lean(off_v, times)
        for cell, off_v, times in zip(
            (recent + 1).tolist(),
            deviation_v.tolist(),
            (deviation_v / band_v).tolist(),
            strict=True,
        )
    }


def deviations_now(
    session: Session, house: House, section_name: str, now_ms: int
) -> list[Deviation]:
    """Every cell read within a day against the median of them all, by number.

    The usual spread is the cells' own, robust against the odd ones, and never less than the
    accuracy of the meter. Left out are cells that are bypassed, were read without load, or whose
    newest reading is not believed; with fewer than four cells nobody is compared.
    """
    section = house.section(section_name)
    terms = section.terms_at(now_ms)
    cell_ids = section.cell_ids[: terms.cells]
    bypassed = {row[0] for row in bypasses_of(session, cell_ids, now_ms, now_ms + 1)}
    numbers, read_ms, volts = [], [], []
    newest = latest(session, cell_ids)
    for number, cell_id in enumerate(cell_ids, start=1):
        if cell_id in newest and cell_id not in bypassed:
            at_ms, read_v = newest[cell_id]
            if now_ms - RECENT_MS < at_ms <= now_ms:
                numbers.append(number)
                read_ms.append(at_ms)
                volts.append(read_v)
    moments = np.array(read_ms, np.int64)
    amps = _amps_at(session, section, moments, terms.rated_amps)
    loaded = amps >= _LEAST_LOAD * terms.rated_amps
    if loaded.sum() < _ENOUGH_CELLS:
        return []
    referred_v = referred_volts(volts, amps, terms.rated_amps, resistance_ohm(section, terms))
    centre_v = float(median(referred_v[loaded]))
    noise_v = float(robust_sd(referred_v[loaded], floor=terms.meter_accuracy_v)) or 1e-6
    return [
        Deviation(
            cell=numbers[place],
            read_ms=read_ms[place],
            referred_v=float(referred_v[place]),
            deviation_v=float(referred_v[place]) - centre_v,
            noise_v=noise_v,
        )
        for place in np.flatnonzero(loaded).tolist()
    ]


def _amps_at(
    session: Session, section: SectionPlan, at_ms: NDArray[np.int64], rated_amps: float
) -> NDArray[np.float64]:
    """The section's current at moments; rated current where none is recorded."""
    if not len(at_ms):
        return np.zeros(0)
    steps, _ = knots_between(session, section.id, int(at_ms.min()), int(at_ms.max()) + 1)
    place = np.searchsorted(steps["at_ms"], at_ms, side="right") - 1
    if not len(steps):
        return np.full(at_ms.shape, rated_amps)
    held = steps[np.maximum(place, 0)]
    is_recorded = (place >= 0) & (held["basis"] != UNRECORDED)
    return np.where(is_recorded, held["amps"], rated_amps)
