"""Trends of one quantity over time: lines, steps, points and bars with their targets."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any, Literal

import numpy as np
from numpy.typing import NDArray

from server.figures.encode import float32, float64, offsets_ms, wall_clock
from server.figures.layout import (
    BAR,
    HIGH,
    INK,
    LOW,
    SECOND,
    SHEET,
    TRACE,
    Axis,
    Band,
    Figure,
    Outage,
    Target,
    Window,
    layout,
    outage_trace,
    side_label,
    y_range,
)
from server.figures.thinning import points_kept, with_gaps

Moments = NDArray[np.int64]
Numbers = NDArray[np.float64]

BUCKETS = 360
"""Stretches of time into which a line is thinned: two pixels each on a wide screen."""

_MARKS = {
    "low": ("triangle-down", LOW),
    "high": ("triangle-up", HIGH),
    "look": ("circle", INK),
}


@dataclass(frozen=True)
class Line:
    """One series that is drawn as a line, as steps that hold until the next, or as points.

    `u_values` are standard uncertainties, drawn as a pale band; `gap_ms` is the longest time over
    which a line may be drawn; a `quiet` line stands behind the others.
    """

    name: str
    at_ms: Moments
    values: Numbers
    shape: Literal["line", "steps", "points"] = "line"
    u_values: Numbers | None = None
    gap_ms: int | None = None
    quiet: bool = False


@dataclass(frozen=True)
class Bars:
    """One value for each stretch of time, such as the metal of a day; ends are half-open."""

    name: str
    from_ms: Moments
    to_ms: Moments
    values: Numbers


@dataclass(frozen=True)
class Marks:
    """Points at which something is to be seen: below, above, or to be looked at."""

    kind: Literal["low", "high", "look"]
    at_ms: Moments
    values: Numbers
    words: Sequence[str] = field(default=())


def trend(
    window: Window,
    axis: Axis,
    series: Sequence[Line | Bars],
    *,
    targets: Sequence[Target] = (),
    band: Band | None = None,
    marks: Sequence[Marks] = (),
    outages: Sequence[Outage] = (),
    marks_outside: bool = False,
    height: int = 220,
) -> Figure:
    """One quantity over the window's time, as a dictionary that Plotly draws.

    Values are in the axis' unit. A line is thinned to what can be seen, extremes and gaps kept.
    Where there are two lines or more, each carries its name at its end. With `marks_outside`,
    each stretch of a line outside the band carries a mark where it is furthest out.
    """
    drawn = [_thinned(one) if isinstance(one, Line) else one for one in series]
    shown = [*marks, *(_outside(drawn, band) if marks_outside and band else ())]
    reach = [target.value for target in targets]
    if band is not None:
        reach += [end for end in (band.low, band.high) if end is not None]
    ends = y_range(axis, _extremes(drawn, shown), reach)
    hatched = outage_trace(outages, window, ends)
    data = [] if hatched is None else [hatched]
    for one in drawn:
        data += _bars(one, axis, window) if isinstance(one, Bars) else _line(one, axis, window)
    data += [_marks(one, axis, window) for one in shown if one.at_ms.size]
    lines = [one for one in drawn if isinstance(one, Line) and one.shape != "points"]
    labels = [label for line in lines for label in _end_label(line)] if len(lines) > 1 else []
    return {
        "data": data,
        "layout": layout(
            window, axis, ends, targets=targets, band=band, labels=labels, height=height
        ),
    }


def _thinned(line: Line) -> Line:
    moments = np.asarray(line.at_ms, np.int64)
    values = np.asarray(line.values, np.float64)
    spread = None if line.u_values is None else np.asarray(line.u_values, np.float64)
    if line.gap_ms is not None:
        if spread is not None:
            spread = with_gaps(moments, spread, line.gap_ms)[1]
        moments, values = with_gaps(moments, values, line.gap_ms)
    kept = points_kept(moments, values, BUCKETS)
    return Line(
        name=line.name,
        at_ms=moments[kept],
        values=values[kept],
        shape=line.shape,
        u_values=None if spread is None else spread[kept],
        quiet=line.quiet,
    )


def _extremes(series: Sequence[Line | Bars], marks: Sequence[Marks]) -> list[float]:
    ends: list[float] = []
    for one in (*series, *marks):
        values = np.asarray(one.values, np.float64)
        spread = one.u_values if isinstance(one, Line) and one.u_values is not None else 0.0
        for edge in (values, values - spread, values + spread):
            finite = edge[np.isfinite(edge)]
            if finite.size:
                ends += [float(finite.min()), float(finite.max())]
    return ends


def _outside(series: Sequence[Line | Bars], band: Band) -> list[Marks]:
    """Where each stretch of the lines under or over the band is furthest from it."""
    found: list[Marks] = []
    for line in (one for one in series if isinstance(one, Line)):
        if band.low is not None:
            lowest = _furthest(band.low - line.values)
            found.append(Marks("low", line.at_ms[lowest], line.values[lowest]))
        if band.high is not None:
            highest = _furthest(line.values - band.high)
            found.append(Marks("high", line.at_ms[highest], line.values[highest]))
    return found


def _furthest(beyond: Numbers) -> list[int]:
    """Index of the largest value in each run of values above zero."""
    is_beyond = np.concatenate(([False], beyond > 0, [False]))
    edges = np.flatnonzero(np.diff(is_beyond)).tolist()
    runs = zip(edges[::2], edges[1::2], strict=True)
    return [start + int(np.argmax(beyond[start:end])) for start, end in runs]


def _line(line: Line, axis: Axis, window: Window) -> list[dict[str, Any]]:
    colour = SECOND if line.quiet else TRACE
    trace: dict[str, Any] = {
        "type": "scatter",
        "name": line.name,
        "x": wall_clock(line.at_ms, window.zone),
        "y": float32(line.values),
        "connectgaps": False,
        "hovertemplate": _hover(axis),
    }
    if line.shape == "points":
        trace |= {"mode": "markers", "marker": {"color": colour, "size": 5}}
    else:
        trace |= {
            "mode": "lines",
            "line": {
                "color": colour,
                "width": 1.4 if line.quiet else 1.7,
                "shape": "hv" if line.shape == "steps" else "linear",
            },
        }
        if _has_lone_points(line.values):
            trace |= {"mode": "lines+markers", "marker": {"color": colour, "size": 3.5}}
    spread = [] if line.u_values is None else _spread(line, window)
    return [*spread, trace]


def _has_lone_points(values: Numbers) -> bool:
    """Whether any value has a gap on both sides, so that a line alone would not show it."""
    missing = np.concatenate(([True], np.isnan(values), [True]))
    return bool(np.any(missing[:-2] & ~missing[1:-1] & missing[2:]))


def _spread(line: Line, window: Window) -> list[dict[str, Any]]:
    """One standard uncertainty to each side, as a pale polygon for each unbroken stretch."""
    assert line.u_values is not None
    x: list[float | None] = []
    y: list[float | None] = []
    wall = line.at_ms + offsets_ms(line.at_ms, window.zone)
    known = np.isfinite(line.values) & np.isfinite(line.u_values)
    edges = np.flatnonzero(np.diff(np.concatenate(([False], known, [False]))))
    for start, end in zip(edges[::2].tolist(), edges[1::2].tolist(), strict=True):
        along = wall[start:end].tolist()
        over = (line.values + line.u_values)[start:end].tolist()
        under = (line.values - line.u_values)[start:end].tolist()
        x += [*along, *reversed(along), None]
        y += [*over, *reversed(under), None]
    if not x:
        return []
    return [
        {
            "type": "scatter",
            "mode": "lines",
            "x": float64(np.array(x, np.float64)),
            "y": float32(np.array(y, np.float64)),
            "line": {"width": 0},
            "fill": "toself",
            "fillcolor": BAR,
            "opacity": 0.45,
            "hoverinfo": "skip",
        }
    ]


def _bars(bars: Bars, axis: Axis, window: Window) -> list[dict[str, Any]]:
    starts = bars.from_ms + offsets_ms(bars.from_ms, window.zone)
    ends = bars.to_ms + offsets_ms(bars.to_ms, window.zone)
    width = ends - starts
    return [
        {
            "type": "bar",
            "name": bars.name,
            "x": float64(starts + width / 2),
            "y": float32(bars.values),
            "width": float64(width * 0.72),
            "marker": {"color": BAR, "line": {"width": 0}},
            "hovertemplate": _hover(axis),
        }
    ]


def _marks(marks: Marks, axis: Axis, window: Window) -> dict[str, Any]:
    symbol, colour = _MARKS[marks.kind]
    trace: dict[str, Any] = {
        "type": "scatter",
        "mode": "markers",
        "x": wall_clock(marks.at_ms, window.zone),
        "y": float32(marks.values),
        "marker": {
            "symbol": symbol,
            "color": colour,
            "size": 9 if marks.kind != "look" else 8,
            "line": {"color": SHEET, "width": 1},
        },
    }
    if marks.words:
        return trace | {"text": list(marks.words), "hovertemplate": "%{text}<extra></extra>"}
    return trace | {"hovertemplate": _hover(axis)}


def _hover(axis: Axis) -> str:
    unit = f" {axis.unit}" if axis.unit else ""
    return f"%{{y:,.{axis.decimals}f}}{unit}<extra></extra>"


def _end_label(line: Line) -> list[dict[str, Any]]:
    """The line's name at its last value; nothing where it has none."""
    known = np.flatnonzero(np.isfinite(line.values))
    if known.size == 0:
        return []
    return [side_label(float(line.values[known[-1]]), line.name, SECOND if line.quiet else TRACE)]
