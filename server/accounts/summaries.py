"""Readings summed up by hour, shift and day, cell by cell."""

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

_WHOLE, _SINGLE = b"w", b"s"
_UNREAD = -(2**31)


@dataclass(frozen=True)
class Summed:
    """The hours, shifts and days that touch a stretch of time, and the time they cover."""

    hours: tuple[int, int]
    """Start of the first hour and end of the last."""
    shifts: list[Period]
    days: list[Period]

    @property
    def from_ms(self) -> int:
        """Start of the earliest of them."""
        return min(self.hours[0], self.shifts[0].from_ms, self.days[0].from_ms)

    @property
    def to_ms(self) -> int:
        """End of the latest of them."""
        return max(self.hours[1], self.shifts[-1].to_ms, self.days[-1].to_ms)


def periods_touching(house: House, from_ms: int, to_ms: int) -> Summed:
    """The hours of UTC and the plant's own shifts and days that touch [from_ms, to_ms)."""
    return Summed(
        hours=(utc_hour_ms(from_ms), utc_hour_ms(to_ms - 1) + HOUR_MS),
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
    hour_ms = np.arange(*periods.hours, HOUR_MS)
    levels = (
        ("hour", hour_ms, hour_ms + HOUR_MS, [""] * len(hour_ms), 2),
        ("shift", *_edges(periods.shifts), [p.name for p in periods.shifts], 1),
        ("day", *_edges(periods.days), [""] * len(periods.days), 1),
    )
    for level, starts, ends, names, least_readings in levels:
        rows = _summed(len(section.cell_ids), cell, series, starts, ends, names, least_readings)
        keep_summaries(session, section.id, level, int(starts[0]), int(ends[-1]), rows)


def _edges(periods: list[Period]) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    return np.array([p.from_ms for p in periods]), np.array([p.to_ms for p in periods])


def _summed(
    cells: int,
    cell: NDArray[np.int64],
    series: Series,
    starts: NDArray[np.int64],
    ends: NDArray[np.int64],
    names: list[str],
    least_readings: int,
) -> list[SummaryRow]:
    """One row for each period in which some cell was read as often as that.

    The readings come by cell and time, so that those of one cell and period lie together.
    """
    place = np.searchsorted(starts, series.at_ms, side="right") - 1
    inside = (place >= 0) & (series.at_ms < ends[-1])
    place, cell, uv = place[inside], cell[inside], series.microvolts[inside]
    key = cell * len(starts) + place
    firsts = np.flatnonzero(np.append(True, key[1:] != key[:-1])[: len(key)])
    counts = np.diff(np.append(firsts, len(key)))
    kept = np.zeros(len(starts), bool)
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
    is_single = np.all(table["readings"] <= 1, axis=1).tolist()
    return [
        SummaryRow(
            start_ms=int(starts[period]),
            end_ms=int(ends[period]),
            name=names[period],
            cells_read=cells_read[row],
            readings=readings[row],
            sum_uv=sums[row],
            cells=_packed(table[row], is_single[row]),
        )
        for row, period in enumerate(np.flatnonzero(kept).tolist())
    ]


def _packed(table: NDArray[np.void], is_single: bool) -> bytes:
    """The cells of a summary as bytes, up to the last that was read.

    The readings alone where no cell was read twice.
    """
    table = table[: int(np.flatnonzero(table["readings"])[-1]) + 1]
    if not is_single:
        return _WHOLE + table.tobytes()
    return (
        _SINGLE + np.where(table["readings"] > 0, table["sum_uv"], _UNREAD).astype("<i4").tobytes()
    )


def unpacked(cells: bytes) -> NDArray[np.void]:
    """The cells of a packed summary by number, up to the last that was read."""
    if cells[:1] == _WHOLE:
        return np.frombuffer(cells, CELL_SUMMARY, offset=1)
    read_uv = np.frombuffer(cells, "<i4", offset=1)
    table = np.zeros(len(read_uv), CELL_SUMMARY)
    for name in ("least_uv", "greatest_uv", "sum_uv"):
        table[name] = np.where(read_uv == _UNREAD, 0, read_uv)
    table["readings"] = read_uv != _UNREAD
    return table
