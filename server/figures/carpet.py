"""The carpet of a section: cells by rounds, each reading shaded by how far it was off.

What is as expected is grey, so that a pattern stands out: a row, a bay, a shift, a reader.
"""

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from server.figures.encode import table32, wall_clock
from server.figures.layout import HIGH, LINE, LOW, PALE, Axis, Figure, Window, layout

FULL_SHADE = 6.0
"""Bands by which a reading is off where the shade is at its fullest."""

_CALM = 2.0
"""Up to here all is the same grey."""

_USUAL_MS = 8 * 3_600_000
"""From round to round, where there is but one."""

_LONG = 2.2
"""Times the usual time between rounds, beyond which the time between is blank."""

_CELL_PX = 4.0
_LEAST_PX, _MOST_PX = 150, 460
_MARGIN_PX = 56


@dataclass(frozen=True)
class CarpetWords:
    """Words of a carpet in the reader's language."""

    cell: str
    bands: str
    """What the shade counts, after its number."""


def carpet_figure(
    window: Window,
    started_ms: NDArray[np.int64],
    deviation_mv: NDArray[np.float32],
    times_band: NDArray[np.float32],
    rows: int,
    words: CarpetWords,
) -> Figure:
    """Cells by columns of rounds as a dictionary that Plotly draws.

    Arrays are cells by rounds, NaN where a cell was not read; that stays blank. Where the cells
    stand in several rows a thin line parts them.
    """
    cells = max(len(times_band), 1)
    middles_ms, columns = _columns(started_ms)
    ends = cells + 0.5, 0.5
    drawn = layout(window, Axis(words.cell, "", 0), (0.5, cells + 0.5), height=_height(cells))
    per_row = -(-cells // max(rows, 1))
    drawn["hovermode"] = "closest"
    drawn["xaxis"] |= {"showspikes": False}
    drawn["yaxis"] = {
        "range": list(ends),
        "fixedrange": True,
        "showgrid": False,
        "zeroline": False,
        "showline": False,
        "ticks": "",
        "tickmode": "array",
        "tickvals": _ticks(cells),
        "ticklabelstandoff": 4,
    }
    drawn["shapes"] = [_parting(row * per_row + 0.5) for row in range(1, rows) if per_row < cells]
    drawn["annotations"] = [one | {"text": words.cell} for one in drawn["annotations"]]
    return {
        "data": [
            {
                "type": "heatmap",
                "x": wall_clock(middles_ms, window.zone),
                "y": list(range(1, cells + 1)),
                "z": table32(_spread(times_band, columns)),
                "customdata": table32(_spread(np.round(deviation_mv, 1), columns)),
                "zmin": -FULL_SHADE,
                "zmax": FULL_SHADE,
                "colorscale": _shades(),
                "showscale": False,
                # Without any gap Plotly draws with a style of its own in the page, which the
                # page's rules forbid.
                "xgap": 0.05,
                "ygap": 0.05,
                "hoverongaps": False,
                "hovertemplate": f"{words.cell} %{{y}}, %{{x|%-d %b %H:%M}}"
                f"<br>%{{customdata:.0f}} mV, %{{z:.1f}} {words.bands}<extra></extra>",
            }
        ],
        "layout": drawn,
    }


def _columns(started_ms: NDArray[np.int64]) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Middles of the columns, and of each the round that it shows; -1 for a blank one.

    Columns meet half-way, so that a longer time without rounds needs blank ones at its ends.
    """
    gaps_ms = np.diff(started_ms)
    usual_ms = int(np.median(gaps_ms)) if len(gaps_ms) else _USUAL_MS
    after = np.flatnonzero(gaps_ms > _LONG * usual_ms)
    blank_ms = [started_ms[after] + usual_ms, started_ms[after + 1] - usual_ms]
    if len(started_ms) == 1:
        blank_ms = [started_ms - usual_ms, started_ms + usual_ms]
    middles = np.concatenate([started_ms, *blank_ms])
    shown = np.concatenate(
        [np.arange(len(started_ms)), np.full(len(middles) - len(started_ms), -1)]
    )
    order = np.argsort(middles, kind="stable")
    return middles[order], shown[order]


def _spread(values: NDArray[np.float32], columns: NDArray[np.int64]) -> NDArray[np.float32]:
    """The columns as they are drawn, the blank ones among them."""
    blank = np.full((len(values), 1), np.nan, np.float32)
    return np.concatenate((values, blank), axis=1)[:, columns]


def _shades() -> list[list[Any]]:
    """From what reads low over grey to what reads high; tokens, which the script exchanges."""
    calm = 0.5 * _CALM / FULL_SHADE
    return [[0.0, LOW], [0.5 - calm, PALE], [0.5 + calm, PALE], [1.0, HIGH]]


def _height(cells: int) -> int:
    return round(min(max(cells * _CELL_PX, _LEAST_PX), _MOST_PX)) + _MARGIN_PX


def _ticks(cells: int) -> list[int]:
    """The first cell, and round numbers after it."""
    step = next((size for size in (5, 10, 20, 50, 100, 200) if cells / size <= 10), 500)
    return [1, *range(step, cells + 1, step)]


def _parting(y: float) -> dict[str, Any]:
    return {
        "type": "line",
        "xref": "paper",
        "x0": 0,
        "x1": 1,
        "yref": "y",
        "y0": y,
        "y1": y,
        "line": {"color": LINE, "width": 1},
    }
