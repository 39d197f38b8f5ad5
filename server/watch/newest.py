"""What the watch said last of each cell, and what its flag is worth by that."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.science.faraday import deposited_kg
from server.science.processes import process
from server.storage.plant import House, SectionPlan
from server.storage.watch_rows import OF_A_CELL, rounds_between
from server.watch.flags import FlagResult

_DAY_MS = 86_400_000

_LONGEST_ROUND_MS = _DAY_MS // 2

_REACH_MS = 30 * _DAY_MS
"""How far back the last round of a flagged cell is looked for."""


@dataclass(frozen=True)
class Newest:
    """The numbers of a flagged cell by its newest reading; those of the flag until there is one."""

    updated_ms: int
    """Moment of that reading."""
    deviation_v: float | None
    probability: float | None
    """Of a short."""
    short_amps: float | None
    """What a short would take if there is one; None for what is no short."""
    u_short_amps: float | None
    lost_kg_per_day: float | None
    """What is to be expected: less in so far as there may be no short."""
    lost_value_per_day: float | None


def last_said(session: Session, section: SectionPlan, from_ms: int, at_ms: int) -> NDArray[np.void]:
    """By cell, what the last round that read it said, of rounds in a stretch of time.

    Rounds that ended by `at_ms` and began after `from_ms`; `at_ms` of a cell is 0 where no round
    read it.
    """
    cells = np.zeros(len(section.cell_ids), OF_A_CELL)
    for _, ended_ms, _, said in rounds_between(session, section.id, from_ms, at_ms + 1):
        if ended_ms <= at_ms:
            is_read = said["at_ms"] > 0
            cells[: len(said)][is_read] = said[is_read]
    return cells


def newest_numbers(
    session: Session, house: House, flags: Sequence[FlagResult], at_ms: int
) -> list[Newest]:
    """The newest numbers of each of these flags' cells, as they stood at a moment."""
    said = {
        name: _said_of(
            session, house.section(name), [flag for flag in flags if flag.section == name], at_ms
        )
        for name in sorted({flag.section for flag in flags})
    }
    return [_newest(house, flag, said[flag.section][flag.cell - 1]) for flag in flags]


def _said_of(
    session: Session, section: SectionPlan, flags: Sequence[FlagResult], at_ms: int
) -> NDArray[np.void]:
    """What was said last; further back than a day only where a cell was not read since."""
    near_ms = at_ms - _DAY_MS - _LONGEST_ROUND_MS
    said = last_said(session, section, near_ms, at_ms)
    unread = [flag for flag in flags if said["at_ms"][flag.cell - 1] == 0]
    first_ms = min((flag.raised_ms for flag in unread), default=at_ms)
    far_ms = max(first_ms - _LONGEST_ROUND_MS, at_ms - _REACH_MS)
    if far_ms < near_ms:
        said = last_said(session, section, far_ms, at_ms)
    return said


def _newest(house: House, flag: FlagResult, said: np.void) -> Newest:
    if said["at_ms"] <= flag.raised_ms:
        return Newest(
            flag.raised_by_ms,
            flag.deviation_v,
            flag.probability,
            flag.short_amps,
            flag.u_short_amps,
            flag.lost_kg_per_day,
            flag.lost_value_per_day,
        )
    probability = float(said["probability"])
    amps = u_amps = lost_kg = lost_value = None
    if flag.kind == "short":
        section = house.section(flag.section)
        terms = section.terms_at(int(said["at_ms"]))
        metal = process(section.process, section.metal, section.electrons).metal
        expected = float(said["short_amps"])
        amps = expected / max(probability, 1e-6) if expected > 0 else 0.0
        u_amps = float(said["u_short_amps"])
        lost_kg = float(deposited_kg(expected * 86_400, metal)) * terms.target_current_efficiency
        lost_value = lost_kg * terms.metal_value_per_kg
    return Newest(
        int(said["at_ms"]),
        float(said["deviation_v"]),
        probability,
        amps,
        u_amps,
        lost_kg,
        lost_value,
    )
