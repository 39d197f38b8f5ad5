"""Numbers as Plotly takes them over the wire: typed arrays in base64, and local wall-clock time."""

import base64
from datetime import UTC, datetime
from functools import lru_cache
from typing import Any
from zoneinfo import ZoneInfo

import numpy as np
import orjson
from numpy.typing import ArrayLike, NDArray

TypedArray = dict[str, str]

_STEP_MS = 14 * 86_400_000
"""Two changes of a zone's offset are never closer than this (Morocco's are four weeks apart)."""
_FINEST_MS = 60_000


def float32(values: ArrayLike) -> TypedArray:
    """Values for a y axis: four bytes each, seven significant digits, NaN a gap."""
    return _packed(np.ascontiguousarray(values, dtype="<f4"), "f4")


def table32(values: ArrayLike) -> TypedArray:
    """A table of values, row by row: four bytes each, NaN where nothing is."""
    table = np.ascontiguousarray(values, dtype="<f4")
    return _packed(table, "f4") | {"shape": ",".join(str(side) for side in table.shape)}


def float64(values: ArrayLike) -> TypedArray:
    """Values that need all their digits, such as milliseconds since 1970."""
    return _packed(np.ascontiguousarray(values, dtype="<f8"), "f8")


def wall_clock(at_ms: ArrayLike, zone: str) -> TypedArray:
    """Moments for an x axis of type date, reading as the clock on the tankhouse wall reads.

    Plotly knows no zones and would show UTC; the offset is therefore added here. Where the clock
    is put back an hour, that hour is drawn twice, as the clock showed it twice.
    """
    moments = np.asarray(at_ms, np.int64)
    return float64(moments + offsets_ms(moments, zone))


def wall_clock_ms(moment_ms: int, zone: str) -> int:
    """One moment as the wall clock shows it, ms since 1970-01-01 00:00 on that clock."""
    return moment_ms + _offset_ms(moment_ms, zone)


def offsets_ms(at_ms: ArrayLike, zone: str) -> NDArray[np.int64]:
    """How far the zone's clock is ahead of UTC at each moment, ms.

    Parameters
    ----------
    at_ms : array_like of int
        Moments, ms since 1970-01-01T00:00Z.
    zone : str
        IANA name.

    Returns
    -------
    ndarray of int64, same shape
        Offsets, ms.

    Raises
    ------
    zoneinfo.ZoneInfoNotFoundError
        If there is no such zone.

    Example
    -------
    >>> offsets_ms([1_767_225_600_000], "America/Santiago").tolist()
    [-10800000]
    """
    moments = np.asarray(at_ms, np.int64)
    if moments.size == 0:
        return np.zeros(moments.shape, np.int64)
    first, last = int(moments.min()), int(moments.max())
    edges = np.append(np.arange(first, last, _STEP_MS, dtype=np.int64), last)
    changes = [first]
    for left, right in zip(edges[:-1].tolist(), edges[1:].tolist(), strict=True):
        if _offset_ms(left, zone) != _offset_ms(right, zone):
            changes.append(_change_between(left, right, zone))
    held = np.array([_offset_ms(change, zone) for change in changes], dtype=np.int64)
    return held[np.searchsorted(np.array(changes), moments, side="right") - 1]


def as_json(figure: dict[str, Any]) -> str:
    """The figure as JSON that may stand inside a script element of type application/json."""
    text = orjson.dumps(figure, option=orjson.OPT_SERIALIZE_NUMPY).decode()
    return text.replace("<", "\\u003c").replace(">", "\\u003e").replace("&", "\\u0026")


def _packed(values: NDArray[Any], dtype: str) -> TypedArray:
    return {"dtype": dtype, "bdata": base64.b64encode(values.tobytes()).decode("ascii")}


def _change_between(left_ms: int, right_ms: int, zone: str) -> int:
    """First whole minute after `left_ms` at which the offset is the one of `right_ms`."""
    former = _offset_ms(left_ms, zone)
    while right_ms - left_ms > _FINEST_MS:
        middle = (left_ms + right_ms) // 2
        if _offset_ms(middle, zone) == former:
            left_ms = middle
        else:
            right_ms = middle
    return right_ms - right_ms % _FINEST_MS


@lru_cache(maxsize=4096)
def _offset_ms(moment_ms: int, zone: str) -> int:
    offset = datetime.fromtimestamp(moment_ms / 1000, UTC).astimezone(ZoneInfo(zone)).utcoffset()
    assert offset is not None
    return round(offset.total_seconds() * 1000)
