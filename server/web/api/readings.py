"""Voltages of the cells, as they are read and as they are asked for."""

from typing import Annotated, Any, Literal

import numpy as np
from fastapi import Query
from numpy.typing import NDArray
from starlette.responses import Response

from server.accounts.cell import CellSeries, cell_series
from server.figures.thinning import points_kept
from server.watch.expected import expected_at
from server.web.api.parameters import (
    CellNumber,
    FromTime,
    KnownTime,
    Points,
    SectionName,
    ToTime,
)
from server.web.api.resource import as_json, problems, resource
from server.web.api.schemas import Outcomes, ReadingSeries
from server.web.api.sent import SentReadings, Taken
from server.web.api.sheet_schemas import body_of
from server.web.api.times import all_written
from server.web.dependencies import DbSession, ThisHouse, requires
from server.web.moments import moment_of, span_of

router = resource("records")

_FOR_DOUBTED = 4
"""One place in so many is kept for doubted readings, whose extremes are not the cell's."""


Watch = Annotated[
    Literal["yes", "no"],
    Query(
        description="yes: also what the watch made of each reading, `expected` and `probability`."
    ),
]


@router.post(
    "/readings",
    summary="Send readings",
    response_model=Outcomes,
    openapi_extra=body_of("readings"),
    responses=problems(413),
)
def post_readings(sent: SentReadings, taken: Taken) -> Response:
    """Take readings in. The same `id` twice is stored once, so that a lost answer does no harm."""
    return taken.take_in("readings", sent)


@router.get(
    "/readings",
    summary="Readings of one cell over a period",
    response_model=ReadingSeries,
    dependencies=[requires("reader")],
    responses=problems(404),
)
def get_readings(
    db: DbSession,
    house: ThisHouse,
    section: SectionName,
    cell: CellNumber,
    from_time: FromTime,
    to_time: ToTime,
    points: Points = None,
    known_at: KnownTime = None,
    watch: Watch = "no",
) -> Response:
    """Answer the readings that count, by time; doubted ones are among them and marked."""
    from_ms, to_ms = span_of(from_time, to_time, house)
    known_ms = moment_of(known_at, house, "query.known_at") if known_at else None
    series = cell_series(db, house, section, cell, from_ms, to_ms, known_ms)
    kept = kept_of(series, points) if points else slice(None)
    answer: dict[str, Any] = {
        "at": all_written(series.at_ms[kept]),
        "volts": np.ascontiguousarray(series.volts[kept]),
        "suspect": (series.suspect[kept] != 0).tolist(),
    }
    if watch == "yes":
        made = expected_at(db, house.section(section), cell, series.at_ms)
        answer["expected"] = np.round(made.expected_v[kept], 5)
        answer["probability"] = np.round(made.probability[kept], 4)
    return as_json(answer)


def kept_of(series: CellSeries, points: int) -> NDArray[np.intp]:
    """Which readings to keep so that there are at most `points`, and no extreme is lost.

    Believed and doubted readings are thinned apart, lest a slip of the pen hide a short.
    """
    is_doubted = series.suspect != 0
    doubted, believed = np.flatnonzero(is_doubted), np.flatnonzero(~is_doubted)
    for_doubted = min(points // _FOR_DOUBTED, len(doubted))
    kept = [_thinned(series, believed, points - for_doubted)]
    if for_doubted:
        kept.append(_thinned(series, doubted, for_doubted))
    return np.sort(np.concatenate(kept))


def _thinned(series: CellSeries, places: NDArray[np.intp], points: int) -> NDArray[np.intp]:
    if len(places) <= points:
        return places
    # Of each stretch at most its two extremes stay, besides the first and the last reading.
    stretches = max((points - 2) // 2, 1)
    chosen = points_kept(series.at_ms[places], series.volts[places], stretches)
    return places[chosen[:points]]
