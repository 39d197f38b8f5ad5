"""Readings summed up by hour, shift and day, cell by cell."""

import zlib
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.periods import HOUR_MS, Period, days_between, shifts_between, utc_hour_ms
from server.storage.plant import House, SectionPlan
from server.storage.readings import Series
from server.storage.summaries import SummaryRow, keep_summaries

CELL_SUMMARY = np.dtype(
    [("readings", "<u4"), ("least_uv", "<i4"), ("greatest_uv", "<i4"), ("sum_uv", "<i8")]
)
"""How one cell lies in a packed summary; least and greatest are 0 where nothing was read."""


@dataclass(frozen=True)
class Summed:
    """The hours, shifts and days that touch a stretch of time, and the time they cover."""

    hours: list[Period]
    shifts: list[Period]
    days: list[Period]

    @property
    def from_ms(self) -> int:
        """Start of the earliest of them."""
        return min(p[0].from_ms for p in (self.hours, self.shifts, self.days))

    @property
    def to_ms(self) -> int:
        """End of the latest of them."""
        return max(p[-1].to_ms for p in (self.hours, self.shifts, self.days))


def periods_touching(house: House, from_ms: int, to_ms: int) -> Summed:
    """The hours of UTC and the plant's own shifts and days that touch [from_ms, to_ms)."""
    hours = range(utc_hour_ms(from_ms), utc_hour_ms(to_ms - 1) + 1, HOUR_MS)
    return Summed(
        hours=[Period(start, start + HOUR_MS) for start in hours],
        shifts=shifts_between(from_ms, to_ms, house),
        days=days_between(from_ms, to_ms, house.time_zone),
    )


def rebuild_summaries(
    session: Session, section: SectionPlan, periods: Summed, series: Series
) -> None:
    """Sum up anew these hours, shifts and days, from effective readings that cover them.

    An hour in which no cell was read twice is not kept: its readings are their own summary.
    """
    series = series.believed()
    cell = np.searchsorted(np.array(section.cell_ids), series.cell_id)
    for level, own in (("hour", periods.hours), ("shift", periods.shifts), ("day", periods.days)):
        rows = _summed(
            len(section.cell_ids), cell, series, own, least_readings=1 + (level == "hour")
        )
        names = {p.from_ms: p.name if level == "shift" else "" for p in own}
        keep_summaries(session, section.id, level, own[0].from_ms, own[-1].to_ms, rows, names)


def _summed(
    cells: int,
    cell: NDArray[np.int64],
    series: Series,
    periods: list[Period],
    least_readings: int,
) -> list[SummaryRow]:
    """One row for each period in which some cell was read as often as that.

    The readings come by cell and time, so that those of one cell and period lie together.
    """
    starts = np.array([p.from_ms for p in periods])
    place = np.searchsorted(starts, series.at_ms, side="right") - 1
    inside = (place >= 0) & (series.at_ms < periods[-1].to_ms)
    place, cell, uv = place[inside], cell[inside], series.microvolts[inside]
    key = cell * len(periods) + place
    firsts = np.flatnonzero(np.append(True, key[1:] != key[:-1])[: len(key)])
    counts = np.diff(np.append(firsts, len(key)))
    kept = np.zeros(len(periods), bool)
    kept[place[firsts[counts >= least_readings]]] = True
    if not kept.any():
        return []
    rank = np.cumsum(kept) - 1
    table = np.zeros((int(kept.sum()), cells), CELL_SUMMARY)
    packed = np.zeros(len(firsts), CELL_SUMMARY)
    packed["readings"] = counts
    packed["sum_uv"] = np.add.reduceat(uv, firsts)
    packed["least_uv"] = np.minimum.reduceat(uv, firsts)
    packed["greatest_uv"] = np.maximum.reduceat(uv, firsts)
    shown = kept[place[firsts]]
    table[rank[place[firsts[shown]]], cell[firsts[shown]]] = packed[shown]
    cells_read = (table["readings"] > 0).sum(axis=1).tolist()
    readings, sums = table["readings"].sum(axis=1).tolist(), table["sum_uv"].sum(axis=1).tolist()
    return [
        SummaryRow(
            start_ms=periods[period].from_ms,
            end_ms=periods[period].to_ms,
            cells_read=cells_read[row],
            readings=readings[row],
            sum_uv=sums[row],
            cells=zlib.compress(table[row].tobytes(), 1),
        )
        for row, period in enumerate(np.flatnonzero(kept).tolist())
    ]


def unpacked(cells: bytes) -> NDArray[np.void]:
    """The cells of a packed summary, in the order of their numbers."""
    return np.frombuffer(zlib.decompress(cells), CELL_SUMMARY)
