"""What a section's terms and its current say at the moment of each reading."""

from dataclasses import dataclass

import numpy as np
from sqlalchemy.orm import Session

from server.intake.history import Numbers, Readings, Whole, Yes
from server.science.processes import process
from server.science.uncertainty.propagation import standard_from_limit
from server.storage.current import bypasses_of, off_times, samples_between
from server.storage.plant import SectionPlan, SectionTerms

IDLE_SHARE = 0.2
"""Below this share of the rated current a cell's voltage follows no straight line."""

_BESIDE_MS = 86_400_000


@dataclass(frozen=True, slots=True)
class Yardstick:
    """The terms at the moment of each reading, as arrays."""

    rated_amps: Numbers
    resistance_ohm: Numbers
    resistive_share: Numbers
    low_volts: Numbers
    high_volts: Numbers
    meter_u_v: Numbers
    """Standard uncertainty of the meter."""


def yardstick(plan: SectionPlan, at_ms: Whole) -> Yardstick:
    """The terms that held at each moment."""
    from_ms = np.array([terms.from_ms for terms in plan.terms])
    holding = np.maximum(np.searchsorted(from_ms, at_ms, side="right") - 1, 0)
    share = process(plan.process, plan.metal, plan.electrons).resistive_share
    resistance = [_resistance_ohm(share, terms) for terms in plan.terms]
    table = np.array(
        [
            (
                terms.rated_amps,
                ohm,
                min(ohm * terms.rated_amps * 2 / (terms.low_volts + terms.high_volts), 1.0),
                terms.low_volts,
                terms.high_volts,
                standard_from_limit(terms.meter_accuracy_v),
            )
            for terms, ohm in zip(plan.terms, resistance, strict=True)
        ]
    )
    return Yardstick(*table[holding].T)


def _resistance_ohm(share: float, terms: SectionTerms) -> float:
    """The plant's own figure, else the share of the voltage that follows the current."""
    if terms.differential_resistance_ohm is not None:
        return terms.differential_resistance_ohm
    return share * (terms.low_volts + terms.high_volts) / 2 / terms.rated_amps


class Currents:
    """The current at the moments of readings, as far as it has been recorded."""

    def __init__(self, max_hold_ms: int) -> None:
        self._max_hold_ms = max_hold_ms
        self._known: dict[int, tuple[int, int, Whole, Numbers]] = {}

    def amps(self, session: Session, plan: SectionPlan, at_ms: Whole) -> Numbers:
        """The section's current at each moment, A; NaN where no sample tells."""
        from_ms, to_ms = int(at_ms.min()) - self._max_hold_ms, int(at_ms.max()) + 1
        known = self._known.get(plan.id)
        if known is None or from_ms < known[0] or to_ms > known[1]:
            # A chunk of the same cells' neighbours starts and ends some minutes beside this one.
            from_ms, to_ms = from_ms - _BESIDE_MS, to_ms + _BESIDE_MS
            sampled_ms, amps = samples_between(session, plan.id, from_ms, to_ms)
            known = self._known[plan.id] = (from_ms, to_ms, sampled_ms, amps)
        sampled_ms, amps = known[2], known[3]
        if not len(sampled_ms):
            return np.full(len(at_ms), np.nan)
        place = np.searchsorted(sampled_ms, at_ms, side="right") - 1
        age_ms = at_ms - sampled_ms[np.maximum(place, 0)]
        is_held = (place >= 0) & (age_ms <= self._max_hold_ms)
        return np.where(is_held, amps[np.maximum(place, 0)], np.nan)


def is_working(
    session: Session, plan: SectionPlan, readings: Readings, amps: Numbers, rated_amps: Numbers
) -> Yes:
    """Whether each reading was taken of a cell that carried the section's working current."""
    from_ms, to_ms = int(readings.at_ms.min()), int(readings.at_ms.max()) + 1
    working = ~(amps < IDLE_SHARE * rated_amps)
    for start_ms, end_ms in off_times(session, plan.id, from_ms, to_ms):
        working &= (readings.at_ms < start_ms) | (readings.at_ms >= end_ms)
    for cell_id, start_ms, end_ms in bypasses_of(session, plan.cell_ids, from_ms, to_ms):
        working &= (
            (readings.number != plan.number_of(cell_id))
            | (readings.at_ms < start_ms)
            | (readings.at_ms >= end_ms)
        )
    return working
