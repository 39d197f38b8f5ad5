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
    for level, own in (("hour", periods.hours), ("shift", periods.shifts), ("day", periods.days)):
        rows = _summed(section, series, own)
        if level == "hour":
            rows = [row for row in rows if row.readings > row.cells_read]
        names = {p.from_ms: p.name if level == "shift" else "" for p in own}
        keep_summaries(session, section.id, level, own[0].from_ms, own[-1].to_ms, rows, names)


def _summed(section: SectionPlan, series: Series, periods: list[Period]) -> list[SummaryRow]:
    """One row for each period in which a cell was read."""
    starts = np.array([p.from_ms for p in periods])
    ends = np.array([p.to_ms for p in periods])
    place = np.searchsorted(starts, series.at_ms, side="right") - 1
    inside = (place >= 0) & (series.at_ms < ends[np.maximum(place, 0)])
    place, uv = place[inside], series.microvolts[inside]
    if not len(uv):
        return []
    cells = len(section.cell_ids)
    cell = np.searchsorted(np.array(section.cell_ids), series.cell_id[inside])
    key = place * cells + cell
    order = np.argsort(key, kind="stable")
    key, uv = key[order], uv[order]
    firsts = np.flatnonzero(np.append(True, key[1:] != key[:-1]))
    keys = key[firsts]
    packed = np.zeros(len(keys), CELL_SUMMARY)
    packed["readings"] = np.diff(np.append(firsts, len(key)))
    packed["sum_uv"] = np.add.reduceat(uv, firsts)
    packed["least_uv"] = np.minimum.reduceat(uv, firsts)
    packed["greatest_uv"] = np.maximum.reduceat(uv, firsts)
    of_period = keys // cells
    rows = []
    for period in np.unique(of_period).tolist():
        own = slice(*np.searchsorted(of_period, [period, period + 1]))
        table = np.zeros(cells, CELL_SUMMARY)
        table[keys[own] % cells] = packed[own]
        rows.append(
            SummaryRow(
                start_ms=periods[period].from_ms,
                end_ms=periods[period].to_ms,
                cells_read=int(own.stop - own.start),
                readings=int(packed["readings"][own].sum()),
                sum_uv=int(packed["sum_uv"][own].sum()),
                cells=zlib.compress(table.tobytes(), 1),
            )
        )
    return rows


def unpacked(cells: bytes) -> NDArray[np.void]:
    """The cells of a packed summary, in the order of their numbers."""
    return np.frombuffer(zlib.decompress(cells), CELL_SUMMARY)
