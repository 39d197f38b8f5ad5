"""Charge through shorts: what the watch expects of each cell, held to the cell's next round."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.charge import ChargeRecord, charge_record, charges_at
from server.accounts.doubt import root_sum
from server.accounts.periods import DAY_MS, HOUR_MS, utc_day_ms
from server.accounts.results import Shorts
from server.science.processes import process
from server.storage.current import bypasses_of
from server.storage.lots import crops_pulled
from server.storage.plant import SectionPlan
from server.storage.short_days import keep_short_days, short_days, short_hours
from server.storage.watch_rows import OF_A_CELL, rounds_between
from server.watch.learned import relative_u_learned

Numbers = NDArray[np.float64]
Whole = NDArray[np.int64]

HOLD_MS = DAY_MS
"""How long a round speaks for a cell that is not read again."""

BETWEEN_ROUNDS = 0.1
"""Relative standard uncertainty of what shorts take between rounds (common practice).

They begin, grow and are found while nobody reads; a reading says what passed at its moment.
"""

_LONGEST_ROUND_MS = DAY_MS // 2

_FAR_MS = 2**60
_OF_A_CELL_MS = 2**42
"""More than any moment: cell and moment in one number, by which stretches are looked up."""


@dataclass(frozen=True)
class _Holds:
    """What each reading says, and for how long; by cell and moment."""

    place: Whole
    from_ms: Whole
    to_ms: Whole
    share: Numbers
    """Of the cell's current that is expected to pass through shorts."""
    u_share: Numbers


def rebuild_short_days(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> None:
    """Work the days anew on which what the rounds of [from_ms, to_ms) said bears.

    Each day comes out the same to the last bit whatever stretch is worked out together.
    """
    day_from = utc_day_ms(from_ms - DAY_MS)
    day_to = utc_day_ms(to_ms + HOLD_MS + _LONGEST_ROUND_MS) + DAY_MS
    holds = _holds(session, section, day_from, day_to)
    record = charge_record(session, section.id, day_from - HOLD_MS, day_to)
    keep_short_days(session, section.id, day_from, day_to, _days(holds, record, day_from, day_to))


def _holds(session: Session, section: SectionPlan, day_from: int, day_to: int) -> _Holds:
    """Every reading that reaches into some days, cell by cell."""
    before_ms = HOLD_MS + _LONGEST_ROUND_MS
    rounds = rounds_between(session, section.id, day_from - before_ms, day_to)
    cells = len(section.cell_ids)
    table = np.zeros((len(rounds), cells), OF_A_CELL)
    for row, (_, _, _, said) in zip(table, rounds, strict=True):
        row[: len(said)] = said[:cells]
    amps = np.array([one[2] for one in rounds])
    place, nth = np.nonzero(table["at_ms"].T > 0)
    said = table[nth, place]
    at_ms = said["at_ms"]
    to_ms = np.minimum(at_ms + HOLD_MS, _next_of_each(place, at_ms))
    ends = _ends(session, section, day_from - before_ms, day_to)
    keys = place * _OF_A_CELL_MS + at_ms
    following = np.searchsorted(ends, keys, side="right")
    if len(ends):
        found = ends[np.minimum(following, len(ends) - 1)]
        is_own = (following < len(ends)) & (found // _OF_A_CELL_MS == place)
        to_ms = np.where(is_own, np.minimum(to_ms, found % _OF_A_CELL_MS), to_ms)
    mean = said["short_amps"].astype(np.float64)
    likely = np.clip(said["probability"].astype(np.float64), 1e-6, 1.0)
    given = mean / likely
    square = likely * (said["u_short_amps"].astype(np.float64) ** 2 + given**2)
    most = np.maximum(amps[nth], 1.0)
    return _Holds(
        place,
        at_ms,
        to_ms,
        np.clip(mean / most, 0.0, 1.0),
        np.clip(np.sqrt(np.maximum(square - mean**2, 0.0)) / most, 0.0, 1.0),
    )


def _next_of_each(place: Whole, at_ms: Whole) -> Whole:
    """When each cell was read next; far away where it was not."""
    following = np.full(at_ms.shape, _FAR_MS)
    is_same = place[1:] == place[:-1]
    following[:-1][is_same] = at_ms[1:][is_same]
    return following


def _ends(session: Session, section: SectionPlan, from_ms: int, to_ms: int) -> Whole:
    """Moments after which an older reading says nothing: pulls, bypasses, a new make of cells."""
    ids = np.array(section.cell_ids, np.int64)
    crops = crops_pulled(session, section.id, from_ms, to_ms)
    bypasses = bypasses_of(session, section.cell_ids, from_ms, to_ms)
    made = [terms.from_ms for terms in section.terms if from_ms < terms.from_ms < to_ms]
    places = [
        np.searchsorted(ids, crops["cell_id"]),
        np.searchsorted(ids, [cell_id for cell_id, _, _ in bypasses]),
        np.tile(np.arange(len(ids)), len(made)),
    ]
    moments = [
        crops["pulled_ms"],
        np.array([start for _, start, _ in bypasses], np.int64),
        np.repeat(np.array(made, np.int64), len(ids)),
    ]
    return np.sort(np.concatenate(places) * _OF_A_CELL_MS + np.concatenate(moments))


def _days(
    holds: _Holds, record: ChargeRecord, day_from: int, day_to: int
) -> list[tuple[int, float, float, float, bytes]]:
    """Each day for which some reading speaks, with its hours."""
    count = (day_to - day_from) // DAY_MS
    edges_ms = day_from + np.arange(count * 24 + 1) * HOUR_MS
    edge_c = record.charge_at(edges_ms)[0]
    hours = np.zeros((count * 24, 2))
    variance = np.zeros(count)
    cells = int(holds.place.max(initial=-1)) + 1
    by_cell = np.zeros(count * cells)
    # A hold is shorter than a day and some hours: it touches at most so many hours of the clock.
    live = np.arange(len(holds.place))
    for part in range(HOLD_MS // HOUR_MS + 1):
        hour = (holds.from_ms[live] - day_from) // HOUR_MS + part
        lasts = (hour < count * 24) & (day_from + hour * HOUR_MS < holds.to_ms[live])
        live, hour = live[lasts], hour[lasts]
        use, at = live[hour >= 0], hour[hour >= 0]
        if not len(use):
            continue
        starts_c, ends_c = edge_c[at], edge_c[at + 1]
        if part == 0:
            starts_c = record.charge_at(holds.from_ms[use])[0]
        to_ms = holds.to_ms[use]
        is_last = to_ms < edges_ms[at + 1]
        ends_c[is_last] = record.charge_at(to_ms[is_last])[0]
        passed_c = ends_c - starts_c
        hours[:, 0] += np.bincount(at, holds.share[use] * passed_c, minlength=len(hours))
        hours[:, 1] += np.bincount(at, passed_c, minlength=len(hours))
        by_cell += np.bincount(
            (at // 24) * cells + holds.place[use],
            holds.u_share[use] * passed_c,
            minlength=len(by_cell),
        )
    variance = (by_cell.reshape(count, cells) ** 2).sum(axis=1) if cells else variance
    rows = []
    for nth, own in enumerate(hours.reshape(count, 24, 2)):
        short_c, watched_c = own.sum(axis=0).tolist()
        if watched_c > 0.0:
            day_ms = day_from + nth * DAY_MS
            rows.append((day_ms, short_c, watched_c, float(variance[nth]), own.tobytes()))
    return rows


def shorts_account(
    session: Session, section: SectionPlan, from_ms: int, to_ms: int
) -> Shorts | None:
    """Charge through all shorts of a period, flagged or not; None where no reading speaks.

    What is uncertain of one cell is independent of the others, and lasts for a crop: the level
    that its readings are held against is taken anew at each pull. Common to all are the
    resistance by which a voltage becomes a current, and what is missed between rounds.
    """
    whole_from, whole_to = utc_day_ms(from_ms + DAY_MS - 1), utc_day_ms(to_ms)
    short_c = watched_c = variance = 0.0
    edges = [(from_ms, to_ms)]
    if whole_from < whole_to:
        days = short_days(session, section.id, whole_from, whole_to)
        short_c, watched_c, variance = (
            float(days[name].sum()) for name in ("short_c", "watched_c", "variance_c2")
        )
        edges = [(from_ms, whole_from), (whole_to, to_ms)]
    for start_ms, end_ms in edges:
        for day_ms in range(utc_day_ms(start_ms), end_ms, DAY_MS):
            part = _part_of_day(session, section, day_ms, start_ms, end_ms)
            short_c, watched_c = short_c + part[0], watched_c + part[1]
            variance += part[2]
    if watched_c <= 0.0:
        return None
    relative = relative_u_learned(session, section, to_ms)
    kind = process(section.process, section.metal, section.electrons)
    lasting = max(min(kind.crop_days, (to_ms - from_ms) / DAY_MS), 1.0)
    u_short_c = root_sum(
        float(np.sqrt(lasting * variance)), relative * short_c, BETWEEN_ROUNDS * short_c
    )
    return Shorts(short_c, u_short_c, watched_c, relative)


def _part_of_day(
    session: Session, section: SectionPlan, day_ms: int, from_ms: int, to_ms: int
) -> tuple[float, float, float]:
    """Of a day that a period cuts: charge through shorts, watched charge, variance.

    Of an hour that is cut, the part that its charge has of the hour's.
    """
    found = short_hours(session, section.id, day_ms)
    if found is None:
        return 0.0, 0.0, 0.0
    variance, hours = found
    edges_ms = day_ms + np.arange(25) * HOUR_MS
    inner = np.clip(edges_ms, from_ms, to_ms)
    part = np.diff(inner) / HOUR_MS
    for hour in np.flatnonzero((part > 0) & (part < 1)).tolist():
        moments = [int(edges_ms[hour]), *inner[hour : hour + 2].tolist(), int(edges_ms[hour + 1])]
        passed = [charge for charge, _ in charges_at(session, section.id, moments)]
        whole = passed[3] - passed[0]
        part[hour] = (passed[2] - passed[1]) / whole if whole > 0 else 0.0
    short_c, watched_c = (part @ hours).tolist()
    whole_c = float(hours[:, 1].sum())
    share = watched_c / whole_c if whole_c > 0 else 0.0
    return short_c, watched_c, variance * share**2
