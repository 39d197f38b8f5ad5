"""The floor of a section: a needle for each cell along the path of the current.

Upright is healthy. The lean is how many times its usual noise a cell is off, growing faster than
the deviation, so that ordinary noise hardly shows. Flat: out of service. Dotted: no recent
reading. Lengths are in pixels of the drawing, angles in radians.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from server.accounts.floor import FloorCell

WIDE_LINE = 50
"""Most cells on one line of a drawing for a desk; a longer row is folded."""
NARROW_LINE = 12
"""The same for a phone, where each cell must be wide enough for a finger."""
SMALL_LINE = 15
"""The same for a small drawing of a whole section, in which no cell is pointed at."""

_WIDTH = 1004.0
_MOST_PITCH = 64.0
_FIXED_PITCH = {NARROW_LINE: 28.0, SMALL_LINE: 24.0}
_MARGIN = 28.0
_LINE_HEIGHT = 76.0
_FOOT = 62.0
"""From the top of a line down to the path of the current."""
_LENGTH = 42.0
_FLAT = 22.0
_FULL_LEAN = math.radians(58.0)
_FULL_NOISE = 7.0
_CURVE = 1.7
_NUMBERED = 10
_ROOM_FOR_NUMBERS = 26.0

DIRECTIONS = {"short": "low", "drift low": "low", "drift high": "high"}


@dataclass(frozen=True)
class Needle:
    """One cell: where it stands, where its needle points, and how it is drawn."""

    cell: FloorCell
    x: float
    tip_x: float
    tip_y: float
    line: str
    """Outline of the needle."""
    is_dotted: bool
    direction: str
    """low, high or look where the watch has raised a flag; else empty."""
    mark: str
    """Outline of the mark at the tip; empty without a flag."""
    is_numbered: bool
    left: float
    top: float
    """Corner of the field in which a finger finds the cell."""
    below: float
    """Where the cell's number stands."""


@dataclass(frozen=True)
class Floor:
    """A drawing: its size, that of each cell's field, the current's path and the needles."""

    width: float
    height: float
    pitch: float
    reach: float
    path: str
    needles: tuple[Needle, ...]

    @property
    def calm(self) -> str:
        """All needles without a flag as one outline."""
        return "".join(n.line for n in self.needles if not n.direction and not n.is_dotted)

    @property
    def unread(self) -> str:
        """All dotted ones without a flag as one outline."""
        return "".join(n.line for n in self.needles if not n.direction and n.is_dotted)

    @property
    def flagged(self) -> list[Needle]:
        """Those with a flag."""
        return [needle for needle in self.needles if needle.direction]


def lean(times_noise: float) -> float:
    """Angle of a needle from upright, to the right for a cell that reads high."""
    share = min(abs(times_noise) / _FULL_NOISE, 1.0) ** _CURVE
    return math.copysign(share * _FULL_LEAN, times_noise)


def floor(cells: Sequence[FloorCell], rows: int, longest_line: int = WIDE_LINE) -> Floor:
    """The drawing of a section whose cells stand in `rows` rows.

    The current runs along the first row, back along the second, and so on. A row of more cells
    than `longest_line` is folded into lines of nearly equal length.
    """
    lines = _lines(cells, rows, longest_line)
    most = max((len(line) for line in lines), default=0)
    if not most:
        return Floor(0.0, 0.0, 0.0, 0.0, "", ())
    pitch = _FIXED_PITCH.get(longest_line) or min(_WIDTH / most, _MOST_PITCH)
    needles: list[Needle] = []
    for place, line in enumerate(lines):
        foot = _FOOT + place * _LINE_HEIGHT
        numbered = _numbered(line, pitch)
        for step, cell in enumerate(line):
            along = most - 1 - step if place % 2 else step
            x = _MARGIN + (along + 0.5) * pitch
            needles.append(_needle(cell, x, foot, pitch, cell.cell in numbered))
    return Floor(
        width=round(2 * _MARGIN + most * pitch, 1),
        height=_FOOT + (len(lines) - 1) * _LINE_HEIGHT + 20.0,
        pitch=round(pitch, 1),
        reach=_LINE_HEIGHT - 6,
        path=_path([len(line) for line in lines], most, pitch),
        needles=tuple(needles),
    )


def _lines(cells: Sequence[FloorCell], rows: int, longest: int) -> list[Sequence[FloorCell]]:
    """The cells line by line, in the order of the current."""
    per_row = -(-len(cells) // max(rows, 1))
    lines: list[Sequence[FloorCell]] = []
    for first in range(0, len(cells), max(per_row, 1)):
        row = cells[first : first + per_row]
        folds = -(-len(row) // longest)
        length = -(-len(row) // folds)
        lines += [row[start : start + length] for start in range(0, len(row), length)]
    return lines


def _needle(cell: FloorCell, x: float, foot: float, pitch: float, is_numbered: bool) -> Needle:
    direction = DIRECTIONS.get(cell.flag_kind, "look") if cell.flag_kind else ""
    angle = lean(cell.times_noise) if cell.times_noise is not None else 0.0
    x, y = round(x, 1), foot - 4
    tip_x = round(x + _LENGTH * math.sin(angle), 1)
    tip_y = round(y - _LENGTH * math.cos(angle), 1)
    line = f"M{x:g} {y:g}L{tip_x:g} {tip_y:g}"
    if cell.state != "in service":
        tip_x, tip_y = x, y
        line = f"M{x - _FLAT / 2:g} {y:g}h{_FLAT:g}"
    return Needle(
        cell=cell,
        x=x,
        tip_x=tip_x,
        tip_y=tip_y,
        line=line,
        is_dotted=cell.state == "in service" and cell.times_noise is None,
        direction=direction,
        mark=_mark(direction, tip_x, tip_y),
        is_numbered=is_numbered,
        left=round(x - pitch / 2, 1),
        top=foot - _LENGTH - 10,
        below=foot + 15,
    )


def _mark(direction: str, x: float, y: float) -> str:
    """A triangle down or up, or a dot, at the tip of a needle."""
    if direction == "low":
        return f"M{x - 6:g} {y - 5:g}h12l-6 10z"
    if direction == "high":
        return f"M{x - 6:g} {y + 5:g}h12l-6-10z"
    if direction == "look":
        return f"M{x - 4:g} {y:g}a4 4 0 1 0 8 0a4 4 0 1 0-8 0z"
    return ""


def _numbered(line: Sequence[FloorCell], pitch: float) -> set[int]:
    """Cells whose number is written: those with a flag, the ends of the line, and every tenth."""
    flagged = {cell.cell for cell in line if cell.flag_kind}
    apart = max(1, math.ceil(_ROOM_FOR_NUMBERS / pitch))
    numbered = set(flagged)
    ends = [line[0].cell, line[-1].cell]
    for number in (*ends, *(c.cell for c in line if c.cell % _NUMBERED == 0)):
        if all(abs(number - other) >= apart for other in numbered if other != number):
            numbered.add(number)
    return numbered


def _path(lengths: Sequence[int], most: int, pitch: float) -> str:
    """The current's path: along each line, and round the bend to the next."""
    left, right = _MARGIN - 8, _MARGIN + most * pitch + 8
    parts = []
    for place, length in enumerate(lengths):
        y = _FOOT + place * _LINE_HEIGHT
        is_back = bool(place % 2)
        start, end = (right, left) if is_back else (left, right)
        if place == len(lengths) - 1:
            reach = length * pitch + 16
            end = start - reach if is_back else start + reach
        parts.append(f"M{start:g} {y:g}H{round(end, 1):g}" if not place else f"H{round(end, 1):g}")
        if place < len(lengths) - 1:
            bend = -12 if is_back else 12
            half = _LINE_HEIGHT / 2
            parts.append(f"q{bend} 0 {bend} {half:g}t{-bend} {half:g}")
    return "".join(parts)
