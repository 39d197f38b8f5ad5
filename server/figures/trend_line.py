"""A cell's last readings as a small line, without axes: whether it fell, crept or jumped."""

from collections.abc import Sequence
from dataclasses import dataclass

WIDTH, HEIGHT = 132, 34
_ROOM = 4.0
_LEAST_V = 0.02
"""The least height of the drawing, so that noise of some millivolts does not fill it."""


@dataclass(frozen=True)
class TrendLine:
    """What the drawing needs, in its own units."""

    points: str
    """Of a polyline, from the oldest reading to the newest."""
    last_x: float
    last_y: float
    expected_y: float | None
    """Where the voltage that was expected lies."""
    low_volts: float
    high_volts: float
    """The extremes of the readings."""


def trend_line(
    at_ms: Sequence[int], volts: Sequence[float], expected_volts: float | None
) -> TrendLine | None:
    """The line of these readings, by time; None for fewer than two."""
    if len(at_ms) < 2:
        return None
    shown = [*volts, *([] if expected_volts is None else [expected_volts])]
    middle = (min(shown) + max(shown)) / 2
    half = max(max(shown) - min(shown), _LEAST_V) / 2
    first, length = at_ms[0], max(at_ms[-1] - at_ms[0], 1)

    def x(moment: int) -> float:
        return round(_ROOM + (moment - first) / length * (WIDTH - 2 * _ROOM), 1)

    def y(value: float) -> float:
        return round(HEIGHT / 2 - (value - middle) / half * (HEIGHT / 2 - _ROOM), 1)

    return TrendLine(
        points=" ".join(
            f"{x(moment)},{y(value)}" for moment, value in zip(at_ms, volts, strict=True)
        ),
        last_x=x(at_ms[-1]),
        last_y=y(volts[-1]),
        expected_y=None if expected_volts is None else y(expected_volts),
        low_volts=min(volts),
        high_volts=max(volts),
    )
