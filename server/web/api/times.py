"""Moments as the API writes them: ISO 8601, in UTC, ending in Z."""

from datetime import UTC, datetime, timedelta
from typing import Annotated, Literal

import numpy as np
from numpy.typing import NDArray
from pydantic import PlainSerializer, WithJsonSchema

_EPOCH = datetime(1970, 1, 1, tzinfo=UTC)


def written(at_ms: int) -> str:
    """A moment as text, with milliseconds only where it has some.

    >>> written(1_772_330_400_000), written(1_772_330_400_250)
    ('2026-03-01T02:00:00Z', '2026-03-01T02:00:00.250Z')
    """
    at = _EPOCH + timedelta(milliseconds=at_ms)
    finest = "milliseconds" if at_ms % 1000 else "seconds"
    return at.isoformat(timespec=finest).replace("+00:00", "Z")


def all_written(at_ms: NDArray[np.int64]) -> list[str]:
    """Many moments as text, all with milliseconds where one of them has some.

    >>> all_written(np.array([0, 60_000]))
    ['1970-01-01T00:00:00Z', '1970-01-01T00:01:00Z']
    """
    unit: Literal["ms", "s"] = "ms" if bool(np.any(at_ms % 1000)) else "s"
    moments: NDArray[np.datetime64] = at_ms.astype("datetime64[ms]")
    texts: list[str] = np.datetime_as_string(moments, unit=unit, timezone="UTC").tolist()
    return texts


Moment = Annotated[
    int,
    PlainSerializer(written, return_type=str),
    WithJsonSchema({"type": "string", "format": "date-time", "examples": ["2026-03-01T02:00:00Z"]}),
]
"""A moment, ms since 1970 inside and ISO 8601 in UTC outside."""
