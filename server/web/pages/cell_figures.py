"""The figures of one cell: its voltage within its limits, and the efficiency of its crops."""

from collections.abc import Sequence
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from server.accounts.cell import CellSeries
from server.accounts.periods import DAY_MS
from server.accounts.results import CropResult
from server.figures.layout import Axis, Band, Figure, Outage, Target, Window
from server.figures.trends import Line, Marks, Numbers, trend
from server.science.units import percent_from_share
from server.storage.plant import SectionTerms
from server.watch.expected import Expected
from server.watch.flags import FlagResult
from server.web.filters import flag_direction, flag_words, number
from server.web.i18n import gettext as _

_GAP_MS = 2 * DAY_MS
_MARKED: dict[str, Literal["low", "high"]] = {"low": "low", "high": "high"}
"""Directions of flags that are marked on the line; what is doubted has marks of its own."""


def voltage_figure(
    window: Window,
    series: CellSeries,
    referred_v: Numbers,
    terms: SectionTerms,
    flags: Sequence[FlagResult],
    outages: Sequence[Outage],
    expected: Expected | None = None,
) -> Figure | None:
    """Voltage at rated current as a line, as read as points, with flags and doubts marked.

    Beside it what a healthy cell would have read, with its standard uncertainty.
    """
    if not len(series.at_ms):
        return None
    # A voltage without load says nothing of the cell at work, and would flatten all the others.
    believed = (series.suspect == 0) & np.isfinite(referred_v)
    at_ms, read_v, lined_v = series.at_ms[believed], series.volts[believed], referred_v[believed]
    lines = [
        Line(_("as read"), at_ms, read_v, shape="points", quiet=True),
        Line(_("this cell"), at_ms, lined_v, gap_ms=_GAP_MS),
    ]
    if expected is not None and np.isfinite(expected.expected_v[believed]).any():
        lines.insert(1, _healthy(expected, believed, at_ms, lined_v - read_v))
    return trend(
        window,
        Axis(_("Cell voltage"), "V", 3),
        lines,
        band=Band(terms.low_volts, terms.high_volts),
        marks=[*_raised(flags, at_ms, lined_v), *_doubted(series, terms, read_v)],
        outages=outages,
        height=280,
    )


def _healthy(
    expected: Expected,
    believed: NDArray[np.bool_],
    at_ms: NDArray[np.int64],
    to_rated_v: Numbers,
) -> Line:
    """What a healthy cell would have read, at rated current like the line beside it."""
    known = np.isfinite(expected.expected_v[believed])
    return Line(
        _("if healthy"),
        at_ms[known],
        (expected.expected_v[believed] + to_rated_v)[known],
        u_values=expected.band_v[believed][known],
        gap_ms=_GAP_MS,
        quiet=True,
    )


def _raised(
    flags: Sequence[FlagResult], at_ms: np.ndarray[tuple[int], np.dtype[np.int64]], volts: Numbers
) -> list[Marks]:
    """A mark at the reading that raised each flag."""
    marks = []
    for flag in flags:
        place = np.flatnonzero(at_ms == flag.raised_by_ms)
        kind = _MARKED.get(flag_direction(flag.kind))
        if len(place) and kind:
            words = [f"{flag_words(flag.kind)}: {number(float(volts[place[0]]), 3, 'V')}"]
            marks.append(Marks(kind, at_ms[place], volts[place], words))
    return marks


def _doubted(series: CellSeries, terms: SectionTerms, believed_v: Numbers) -> list[Marks]:
    """Readings that are not believed, moved to the edge where they would leave the figure."""
    doubted = series.suspect != 0
    if not doubted.any():
        return []
    in_view = np.concatenate(([terms.low_volts, terms.high_volts], believed_v))
    volts = series.volts[doubted]
    words = [
        _("%(volts)s, not believed") % {"volts": number(value, 3, "V")} for value in volts.tolist()
    ]
    held = np.clip(volts, float(np.nanmin(in_view)), float(np.nanmax(in_view)))
    return [Marks("look", series.at_ms[doubted], held, words)]


def crops_figure(window: Window, crops: Sequence[CropResult], target: float) -> Figure | None:
    """The efficiency of each crop over the time it grew, against the target."""
    known = [crop for crop in reversed(crops) if crop.current_efficiency is not None]
    if not known:
        return None
    at_ms: list[int] = []
    values: list[float] = []
    for place, crop in enumerate(known):
        follows = known[place + 1].started_ms if place + 1 < len(known) else None
        at_ms.append(max(crop.started_ms, window.from_ms, *at_ms[-1:]))
        values.append(float(percent_from_share(crop.current_efficiency or 0.0)))
        if follows is None or follows > crop.pulled_ms:
            at_ms.append(crop.pulled_ms)
            values.append(float("nan") if follows is not None else values[-1])
    target_pct = float(percent_from_share(target))
    axis = Axis(_("Current efficiency of each crop"), "%", 1)
    line = Line(axis.quantity, np.array(at_ms, np.int64), np.array(values), shape="steps")
    words = _("target %(value)s") % {"value": number(target_pct, 1)}
    return trend(window, axis, [line], targets=[Target(target_pct, words)])
