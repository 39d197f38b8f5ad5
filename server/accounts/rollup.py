"""Brings everything derived up to date, stretch by stretch, and resumes where it stopped."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.charge import ChargeRecord, charge_record, rebuild_charge
from server.accounts.crops import recharge_crops, replay_lots
from server.accounts.energy_days import REACH_MS, energy_of_day, readings_under_load
from server.accounts.periods import DAY_MS, utc_day_ms
from server.accounts.short_charge import HOLD_MS, rebuild_short_days
from server.accounts.summaries import periods_touching, rebuild_summaries
from server.storage.current import bypasses_of
from server.storage.latest import keep_latest
from server.storage.plant import House, SectionPlan
from server.storage.readings import Series, between, cells_recorded, span_ms
from server.storage.stale import Kind, StaleStretch, mark, pending, settle
from server.storage.summaries import keep_energy_days
from server.watch.loaded import Heard, Loaded
from server.watch.watching import rewatch

_FAR_MS = 2**60

_AROUND_MS = 2 * REACH_MS + DAY_MS
"""A changed reading bends days as far as it reaches, and these need what reaches into them."""

BLOCK_MS = 366 * DAY_MS
"""The longest stretch that is worked out in one transaction."""

_ORDER: tuple[Kind, ...] = ("charge", "readings", "energy", "lots", "flags")
"""Charge first: energy and crops rest on it, and the watch on all of them."""


def next_block(session: Session) -> StaleStretch | None:
    """The first stretch that is yet to be brought up to date, cut to one block."""
    stretches = pending(session)
    if not stretches:
        return None
    first = min(stretches, key=lambda s: (s.section_id, _ORDER.index(s.kind), s.from_ms))
    # Blocks end at the same days whatever stretch they are cut from.
    end_ms = (first.from_ms // BLOCK_MS + 1) * BLOCK_MS
    return StaleStretch(
        first.id, first.section_id, first.kind, first.from_ms, min(first.to_ms, end_ms)
    )


def bring_up_to_date(session: Session, house: House, block: StaleStretch, max_hold_ms: int) -> None:
    """Work out everything that rests on the records of a block, and settle it."""
    section = house.section_of_id(block.section_id)
    work: dict[Kind, Callable[[], None]] = {
        "charge": lambda: _after_charge(session, section, block, max_hold_ms),
        "readings": lambda: _after_readings(session, house, section, block),
        "energy": lambda: _after_both(session, section, block.from_ms, block.to_ms),
        "lots": lambda: _after_lots(session, section, block.from_ms),
        "flags": lambda: _watch(session, section, block.from_ms, block.to_ms),
    }
    work[block.kind]()
    if block.kind == "lots":
        # A replay runs to the newest lot.
        settle(session, section.id, "lots", block.from_ms, _FAR_MS)
    settle(session, section.id, block.kind, block.from_ms, block.to_ms)


@dataclass(frozen=True)
class _AtHand:
    """A section's readings and current around a stretch of time."""

    series: Series
    loaded: Loaded
    record: ChargeRecord
    bypasses: list[tuple[int, int, int]]


def _at_hand(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> _AtHand:
    """What is needed to work out the energy and the watch of a time between these moments."""
    series = between(session, section.cell_ids, from_ms, to_ms)
    record = charge_record(session, section.id, from_ms, to_ms)
    bypasses = bypasses_of(session, section.cell_ids, from_ms, to_ms)
    return _AtHand(series, readings_under_load(section, series, record, bypasses), record, bypasses)


def _after_charge(
    session: Session, section: SectionPlan, block: StaleStretch, max_hold_ms: int
) -> None:
    """The current, or what lets it pass, changed."""
    days = rebuild_charge(session, section.id, block.from_ms, block.to_ms, max_hold_ms)
    recharge_crops(session, section, *days)
    mark(session, section.id, "energy", *days)


def _after_readings(
    session: Session, house: House, section: SectionPlan, block: StaleStretch
) -> None:
    """Voltages changed."""
    periods = periods_touching(house, block.from_ms, block.to_ms)
    hand = _at_hand(
        session,
        section,
        min(periods.from_ms, block.from_ms - _AROUND_MS),
        max(periods.to_ms, block.to_ms + _AROUND_MS),
    )
    rebuild_summaries(session, section, periods, hand.series)
    keep_latest(session, section.cell_ids)
    _after_both(session, section, block.from_ms, block.to_ms, hand)
    settle(session, section.id, "energy", block.from_ms, block.to_ms)


def _after_both(
    session: Session,
    section: SectionPlan,
    from_ms: int,
    to_ms: int,
    hand: _AtHand | None = None,
) -> None:
    """What current and voltages give together: energy, and anew what the watch says."""
    if hand is None:
        hand = _at_hand(session, section, from_ms - _AROUND_MS, to_ms + _AROUND_MS)
    _energy(session, section, *_bent_days(session, section, from_ms, to_ms, hand), hand)
    _mark_watch(session, section, from_ms, to_ms)


def _after_lots(session: Session, section: SectionPlan, from_ms: int) -> None:
    """What was pulled changed: crops, and what the watch holds against what."""
    replay_lots(session, section, from_ms)
    _mark_watch(session, section, from_ms, _FAR_MS)


def _mark_watch(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> None:
    """The watch goes on from what it remembers, so that it is replayed to its end.

    What happens after the last reading changes only for how much charge it speaks.
    """
    span = span_ms(session, section.cell_ids)
    if span is None or from_ms > span[1] + HOLD_MS:
        return
    if from_ms <= span[1]:
        mark(session, section.id, "flags", from_ms, span[1] + 1)
    else:
        rebuild_short_days(session, section, from_ms, min(to_ms, span[1] + HOLD_MS))


def _bent_days(
    session: Session, section: SectionPlan, from_ms: int, to_ms: int, hand: _AtHand
) -> tuple[int, int]:
    """The UTC days whose voltages the readings of a stretch bend.

    A reading bends the lines to its cell's readings on either side; one that has no neighbour
    within reach is held as far as it reaches.
    """
    loaded = hand.loaded.series
    bent_from, bent_to = from_ms, to_ms
    for cell_id in cells_recorded(session, section.cell_ids, from_ms, to_ms):
        own_ms = loaded.at_ms[slice(*np.searchsorted(loaded.cell_id, [cell_id, cell_id + 1]))]
        first, last = np.searchsorted(own_ms, [from_ms, to_ms])
        before_ms = int(own_ms[first - 1]) if first > 0 else 0
        after_ms = int(own_ms[last]) if last < len(own_ms) else _FAR_MS
        bent_from = min(bent_from, max(before_ms, from_ms - REACH_MS))
        bent_to = max(bent_to, min(after_ms, to_ms + REACH_MS))
    return utc_day_ms(bent_from), utc_day_ms(bent_to) + DAY_MS


def _energy(
    session: Session, section: SectionPlan, day_from: int, day_to: int, hand: _AtHand
) -> None:
    """Work out the energy of whole UTC days for which there is a current."""
    record = hand.record
    if not len(record.at_ms):
        keep_energy_days(session, section.id, day_from, day_to, [])
        return
    first = max(day_from, utc_day_ms(int(record.at_ms[0])))
    last = min(day_to, utc_day_ms(int(record.at_ms[-1])) + DAY_MS)
    rows = []
    for day_ms in range(first, last, DAY_MS):
        inside = [b for b in hand.bypasses if b[1] < day_ms + DAY_MS and b[2] > day_ms]
        day = energy_of_day(
            section, day_ms, record, hand.loaded.series, hand.loaded.referred_v, inside
        )
        charge_c, cell_c, measured_c, energy_j = day.hours.sum(axis=0).tolist()
        rows.append(
            (
                day_ms,
                charge_c,
                cell_c,
                measured_c,
                None if np.isnan(energy_j) else energy_j,
                day.hours.tobytes(),
                _filled(day.cells).tobytes(),
            )
        )
    keep_energy_days(session, section.id, day_from, day_to, rows)


def _filled(cells: NDArray[np.float64]) -> NDArray[np.float64]:
    """The cells up to the last that received any charge.

    So that a day is packed alike before and after cells are added to the section.
    """
    return cells[: int(np.max(np.flatnonzero(cells[:, 0]), initial=-1)) + 1]


def _watch(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> None:
    """Replay the watch over the rounds of a stretch."""
    span = span_ms(session, section.cell_ids)

    def hear(start_ms: int, end_ms: int) -> Heard:
        hand = _at_hand(session, section, start_ms, end_ms)
        return Heard(hand.loaded, hand.series.where(hand.series.suspect != 0), hand.bypasses)

    rewatch(session, section, from_ms, to_ms, span[1] if span else to_ms, hear)
    rebuild_short_days(session, section, from_ms, to_ms)
