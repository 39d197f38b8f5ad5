"""The look of every figure: colours, axes, targets, bands and outages, as Plotly wants them."""

from collections.abc import Sequence
from dataclasses import dataclass
from math import floor, isfinite, log10
from typing import Any

from server.figures.encode import wall_clock_ms

Figure = dict[str, Any]

# The same values stand in static/css/tokens.css under the same names; a test compares them, and
# static/js/figure.js exchanges them for the ones of the scheme in use (light or dark).
SHEET = "#f8f8f6"
INK = "#1c1e20"
QUIET = "#5d6164"
LINE = "#cdcdc8"
PALE = "#e7e7e3"
TRACE = "#4d5357"
SECOND = "#74797c"
HATCH = "#b4b5b1"
BAR = "#b9bcbb"
LOW = "#b8400a"
HIGH = "#0b63a5"

TOKENS = {
    "sheet": SHEET,
    "ink": INK,
    "quiet": QUIET,
    "line": LINE,
    "pale": PALE,
    "trace": TRACE,
    "second": SECOND,
    "hatch": HATCH,
    "bar": BAR,
    "low": LOW,
    "high": HIGH,
}

FACE = 'system-ui, -apple-system, "Segoe UI", Roboto, "Noto Sans", sans-serif'
THIN_SPACE = "\u2009"
CLEAR = "rgba(0,0,0,0)"

_DAY_MS = 86_400_000
_HEADROOM = 0.08
_STEPS = (1.0, 2.0, 5.0, 10.0)
_MOST_STEPS = 5
_EXACT = 1e-9


@dataclass(frozen=True)
class Window:
    """The time that a figure shows, and the zone whose clock its axis reads."""

    from_ms: int
    to_ms: int
    zone: str

    def on_the_wall(self) -> tuple[int, int]:
        """Both ends as the wall clock shows them, ms."""
        return wall_clock_ms(self.from_ms, self.zone), wall_clock_ms(self.to_ms, self.zone)


@dataclass(frozen=True)
class Axis:
    """What a figure's numbers are: a quantity in words, its unit, and how finely it is read."""

    quantity: str
    unit: str
    decimals: int = 1
    starts_at_zero: bool = False


@dataclass(frozen=True)
class Target:
    """A value that is aimed at, with the words that stand beside its line."""

    value: float
    words: str


@dataclass(frozen=True)
class Band:
    """The range in which a value is as it should be; either end may be open."""

    low: float | None = None
    high: float | None = None


@dataclass(frozen=True)
class Outage:
    """A time in which the section was off or the cell bypassed."""

    from_ms: int
    to_ms: int


def layout(
    window: Window,
    axis: Axis,
    y_range: tuple[float, float],
    *,
    targets: Sequence[Target] = (),
    band: Band | None = None,
    labels: Sequence[dict[str, Any]] = (),
    height: int = 220,
) -> dict[str, Any]:
    """The layout of a figure over time: thin axes, the unit above them, targets and a band."""
    return {
        "height": height,
        "margin": {"l": 52, "r": 96 if targets or labels else 16, "t": 26, "b": 30},
        "paper_bgcolor": CLEAR,
        "plot_bgcolor": CLEAR,
        "font": {"family": FACE, "size": 12.5, "color": QUIET},
        "separators": "." + THIN_SPACE,
        "showlegend": False,
        "hovermode": "x",
        "dragmode": "zoom",
        "bargap": 0,
        "barmode": "overlay",
        "hoverlabel": {
            "bgcolor": SHEET,
            "bordercolor": LINE,
            "font": {"family": FACE, "size": 13, "color": INK},
            "align": "left",
        },
        "xaxis": _time_axis(window),
        "yaxis": _value_axis(axis, y_range),
        "shapes": [*_band(band, y_range), *(_target_line(target) for target in targets)],
        "annotations": [
            _unit_above(axis),
            *(side_label(target.value, target.words, INK) for target in targets),
            *labels,
        ],
    }


def y_range(axis: Axis, values: Sequence[float], reach: Sequence[float]) -> tuple[float, float]:
    """The ends of the value axis: everything found and everything aimed at, with some air.

    Parameters
    ----------
    axis : Axis
        Whether it starts at zero, and how finely it is read.
    values : sequence of float
        Extremes of what is drawn; missing ones are passed over.
    reach : sequence of float
        Targets and limits, which are always in view.
    """
    finite = [value for value in (*values, *reach) if isfinite(value)]
    if not finite:
        return 0.0, 1.0
    least, most = min(finite), max(finite)
    if axis.starts_at_zero:
        least, most = min(least, 0.0), max(most, 0.0)
    air = _HEADROOM * (most - least) or 2.0 * 10.0**-axis.decimals
    bottom = least if axis.starts_at_zero and least == 0.0 else least - air
    return bottom, most + air


def outage_trace(
    outages: Sequence[Outage], window: Window, y_ends: tuple[float, float]
) -> dict[str, Any] | None:
    """The hatched stretches of the outages, one trace for all; None where there were none."""
    x: list[int | None] = []
    y: list[float | None] = []
    low, high = y_ends
    for outage in outages:
        if outage.to_ms <= window.from_ms or outage.from_ms >= window.to_ms:
            continue
        left = wall_clock_ms(max(outage.from_ms, window.from_ms), window.zone)
        right = wall_clock_ms(min(outage.to_ms, window.to_ms), window.zone)
        x += [left, left, right, right, left, None]
        y += [low, high, high, low, low, None]
    if not x:
        return None
    return {
        "type": "scatter",
        "mode": "lines",
        "x": x,
        "y": y,
        "line": {"width": 0},
        "fill": "toself",
        "fillcolor": PALE,
        "fillpattern": {
            "shape": "/",
            "size": 7,
            "solidity": 0.16,
            "fgcolor": HATCH,
            "bgcolor": PALE,
            "fillmode": "replace",
        },
        "hoverinfo": "skip",
    }


def side_label(value: float, words: str, colour: str = QUIET, shift: int = 0) -> dict[str, Any]:
    """Words at the right-hand end of a line; the script moves them inside on a narrow screen."""
    return {
        "name": "side",
        "xref": "paper",
        "x": 1,
        "xanchor": "left",
        "xshift": 6,
        "yref": "y",
        "y": value,
        "yanchor": "middle",
        "yshift": shift,
        "text": words,
        "showarrow": False,
        "font": {"size": 12.5, "color": colour},
    }


def _time_axis(window: Window) -> dict[str, Any]:
    left, right = window.on_the_wall()
    return {
        "type": "date",
        "range": [left, right],
        "showgrid": False,
        "zeroline": False,
        "showline": True,
        "linecolor": LINE,
        "linewidth": 1,
        "ticks": "outside",
        "ticklen": 4,
        "tickcolor": LINE,
        "nticks": 8,
        "tickformatstops": [
            {"dtickrange": [None, 3_600_000 * 12], "value": "%H:%M\n%-d %b"},
            {"dtickrange": [3_600_000 * 12, "M1"], "value": "%-d %b"},
            {"dtickrange": ["M1", "M12"], "value": "%b\n%Y"},
            {"dtickrange": ["M12", None], "value": "%Y"},
        ],
        "hoverformat": "%a %-d %b %H:%M" if right - left < 400 * _DAY_MS else "%-d %b %Y %H:%M",
        "showspikes": True,
        "spikemode": "across",
        "spikesnap": "data",
        "spikethickness": 1,
        "spikedash": "solid",
        "spikecolor": LINE,
    }


def _value_axis(axis: Axis, y_ends: tuple[float, float]) -> dict[str, Any]:
    step = _step(y_ends[1] - y_ends[0])
    return {
        "range": list(y_ends),
        "fixedrange": True,
        "showgrid": True,
        "gridcolor": PALE,
        "gridwidth": 1,
        "zeroline": False,
        "showline": False,
        "ticks": "",
        "ticklabelstandoff": 4,
        "tick0": 0,
        "dtick": step,
        "tickformat": f",.{max(0, -floor(log10(step) + _EXACT))}f",
        "hoverformat": f",.{axis.decimals}f",
    }


def _step(height: float) -> float:
    """The round number by which the value axis is divided, at most into `_MOST_STEPS` parts."""
    least = height / _MOST_STEPS
    power = 10.0 ** floor(log10(least))
    return next(step * power for step in _STEPS if step * power >= least * (1 - _EXACT))


def _unit_above(axis: Axis) -> dict[str, Any]:
    return {
        "name": "unit",
        "xref": "paper",
        "x": 0,
        "xanchor": "right",
        "xshift": -8,
        "yref": "paper",
        "y": 1,
        "yanchor": "bottom",
        "yshift": 8,
        "text": axis.unit,
        "showarrow": False,
    }


def _target_line(target: Target) -> dict[str, Any]:
    return {
        "type": "line",
        "xref": "paper",
        "x0": 0,
        "x1": 1,
        "yref": "y",
        "y0": target.value,
        "y1": target.value,
        "layer": "above",
        "line": {"color": INK, "width": 1},
    }


def _band(band: Band | None, y_ends: tuple[float, float]) -> list[dict[str, Any]]:
    if band is None:
        return []
    return [
        {
            "type": "rect",
            "xref": "paper",
            "x0": 0,
            "x1": 1,
            "yref": "y",
            "y0": y_ends[0] if band.low is None else band.low,
            "y1": y_ends[1] if band.high is None else band.high,
            "layer": "below",
            "fillcolor": PALE,
            "line": {"width": 0},
        }
    ]
