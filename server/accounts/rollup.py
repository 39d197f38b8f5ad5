"""Brings everything derived up to date, stretch by stretch, and resumes where it stopped."""

from collections.abc import Callable

import numpy as np
from sqlalchemy.orm import Session

from server.accounts.charge import charge_record, rebuild_charge
from server.accounts.crops import recharge_crops, replay_lots
from server.accounts.energy_days import REACH_MS, energy_of_day, readings_under_load
from server.accounts.periods import DAY_MS, utc_day_ms
from server.accounts.summaries import periods_touching, rebuild_summaries
from server.storage.current import bypasses_of
from server.storage.doubts import reasons_between
from server.storage.flag_rows import end_flag, flags_touching, replace_flags
from server.storage.latest import keep_latest
from server.storage.plant import House, SectionPlan
from server.storage.readings import Series, between, cells_recorded, span_ms
from server.storage.stale import Kind, StaleStretch, mark, pending, settle
from server.storage.summaries import keep_energy_days
from server.watch.limits import Watched, replay

BLOCK_MS = 92 * DAY_MS
"""The longest stretch that is worked out in one transaction."""

_ORDER: tuple[Kind, ...] = ("charge", "readings", "flags", "lots")
"""Charge first: energy, flags and crops rest on it."""


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
        "flags": lambda: _watch_again(session, section, block.from_ms, block.to_ms),
        "lots": lambda: replay_lots(session, section, block.from_ms),
    }
    work[block.kind]()
    if block.kind == "lots":
        # A replay runs to the newest lot.
        settle(session, section.id, "lots", block.from_ms, 2**60)
    settle(session, section.id, block.kind, block.from_ms, block.to_ms)


def _after_charge(
    session: Session, section: SectionPlan, block: StaleStretch, max_hold_ms: int
) -> None:
    """The current, or what lets it pass, changed."""
    days = rebuild_charge(session, section.id, block.from_ms, block.to_ms, max_hold_ms)
    if days is None:
        return
    series = between(session, section.cell_ids, days[0] - REACH_MS, days[1] + REACH_MS)
    _energy(session, section, *days, series)
    recharge_crops(session, section, *days)
    _watch(session, section, *days, series)


def _after_readings(
    session: Session, house: House, section: SectionPlan, block: StaleStretch
) -> None:
    """Voltages changed."""
    periods = periods_touching(house, block.from_ms, block.to_ms)
    near = REACH_MS + DAY_MS
    series = between(
        session,
        section.cell_ids,
        min(periods.from_ms, block.from_ms - REACH_MS - near),
        max(periods.to_ms, block.to_ms + REACH_MS + near),
    )
    rebuild_summaries(session, section, periods, series)
    keep_latest(session, section.cell_ids)
    _energy(session, section, *_bent_days(session, section, block, series), series)
    _watch(session, section, block.from_ms, block.to_ms, series)


def _bent_days(
    session: Session, section: SectionPlan, block: StaleStretch, series: Series
) -> tuple[int, int]:
    """The UTC days whose voltages new readings bend: up to their cells' readings beside them."""
    reach_from, reach_to = block.from_ms - REACH_MS, block.to_ms + REACH_MS
    from_ms, to_ms = block.from_ms, block.to_ms
    for cell_id in cells_recorded(session, section.cell_ids, block.from_ms, block.to_ms):
        own_ms = series.at_ms[slice(*np.searchsorted(series.cell_id, [cell_id, cell_id + 1]))]
        first, last = np.searchsorted(own_ms, [block.from_ms, block.to_ms])
        before_ms = int(own_ms[first - 1]) if first > 0 else reach_from
        after_ms = int(own_ms[last]) if last < len(own_ms) else reach_to
        from_ms = min(from_ms, max(before_ms, reach_from))
        to_ms = max(to_ms, min(after_ms, reach_to))
    return utc_day_ms(from_ms), utc_day_ms(to_ms) + DAY_MS


def _energy(
    session: Session, section: SectionPlan, day_from: int, day_to: int, series: Series
) -> None:
    """Work out the energy of whole UTC days for which there is a current."""
    record = charge_record(session, section.id, day_from - REACH_MS, day_to + REACH_MS)
    if not len(record.at_ms):
        keep_energy_days(session, section.id, day_from, day_to, [])
        return
    first = max(day_from, utc_day_ms(int(record.at_ms[0])))
    last = min(day_to, utc_day_ms(int(record.at_ms[-1])) + DAY_MS)
    bypasses = bypasses_of(session, section.cell_ids, first - REACH_MS, last + REACH_MS)
    near = series.within(first - REACH_MS, last + REACH_MS)
    loaded, referred_v = readings_under_load(section, near, record, bypasses)
    rows = []
    for day_ms in range(first, last, DAY_MS):
        inside = [b for b in bypasses if b[1] < day_ms + DAY_MS and b[2] > day_ms]
        day = energy_of_day(section, day_ms, record, loaded, referred_v, inside)
        charge_c, cell_c, measured_c, energy_j = day.hours.sum(axis=0).tolist()
        rows.append(
            (
                day_ms,
                charge_c,
                cell_c,
                measured_c,
                None if np.isnan(energy_j) else energy_j,
                day.hours.tobytes(),
                day.cells.tobytes(),
            )
        )
    keep_energy_days(session, section.id, day_from, day_to, rows)


def _watch_again(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> None:
    """Replay the watch where only what was open before has changed."""
    series = between(session, section.cell_ids, from_ms - REACH_MS, to_ms)
    _watch(session, section, from_ms, to_ms, series)


def _watch(
    session: Session, section: SectionPlan, from_ms: int, to_ms: int, series: Series
) -> None:
    """Replay the watch over a stretch; go on later only where its outcome has changed."""
    series = series.within(from_ms - REACH_MS, to_ms)
    record = charge_record(session, section.id, from_ms - REACH_MS, to_ms)
    bypasses = bypasses_of(session, section.cell_ids, from_ms - REACH_MS, to_ms)
    loaded, referred_v = readings_under_load(section, series, record, bypasses)
    doubted = series.where((series.suspect != 0) & (series.at_ms >= from_ms))
    touching = flags_touching(session, from_ms, to_ms, section.id)
    open_before = [f for f in touching if f.raised_ms < from_ms]
    open_after = {
        (f.cell_id, f.kind, f.raised_ms): f.ended_ms
        for f in touching
        if f.ended_ms is None or f.ended_ms >= to_ms
    }
    for flag in touching:
        session.expunge(flag)
    raised, ended = replay(
        section,
        Watched(loaded, referred_v, record.amps_at(loaded.at_ms)),
        doubted,
        reasons_between(session, section.id, from_ms, to_ms) if len(doubted) else {},
        open_before,
        from_ms,
        to_ms,
    )
    still_open: set[tuple[int, str, int]] = set()
    for flag in raised:
        if flag.ended_ms is None:
            key = (flag.cell_id, flag.kind, flag.raised_ms)
            still_open.add(key)
            flag.ended_ms = open_after.get(key)
    replace_flags(session, section.id, from_ms, to_ms, raised)
    for flag in open_before:
        key = (flag.cell_id, flag.kind, flag.raised_ms)
        if key not in ended:
            still_open.add(key)
        new_end = ended.get(key, open_after.get(key))
        if new_end != flag.ended_ms:
            end_flag(session, *key, new_end)
    span = span_ms(session, section.cell_ids)
    if still_open != set(open_after) and span is not None and span[1] >= to_ms:
        mark(session, section.id, "flags", to_ms, min(to_ms + BLOCK_MS, span[1] + 1))
