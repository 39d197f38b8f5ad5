"""The carpet of a section, fetched by its page when it comes into view."""

from typing import Annotated

import numpy as np
from fastapi import APIRouter, Query
from starlette.responses import Response

from server.figures.carpet import CarpetWords, carpet_figure
from server.figures.encode import as_json
from server.figures.layout import Window
from server.storage.recorded import last_recorded_ms
from server.watch.expected import carpet
from server.web.dependencies import DbSession, Now, Reader, ThisHouse
from server.web.i18n import gettext as _
from server.web.pages.period import chosen_period

router = APIRouter(include_in_schema=False)

DEFAULT_DAYS = 30

MOST_COLUMNS = 400
"""Rounds side by side, beyond which neighbours share a column: two pixels each."""


@router.get("/sections/{section_name}/carpet", name="section_carpet")
def section_carpet(
    section_name: str,
    _who: Reader,
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    first: Annotated[str | None, Query(alias="from")] = None,
    last: Annotated[str | None, Query(alias="to")] = None,
) -> Response:
    """Answer the figure of cells by rounds over the period of the page."""
    plan = house.section(section_name)
    last_ms = last_recorded_ms(db, plan)
    period = chosen_period(house, now_ms, first, last, days=DEFAULT_DAYS, last_ms=last_ms)
    woven = carpet(db, plan, period.from_ms, period.to_ms, MOST_COLUMNS)
    figure = carpet_figure(
        Window(period.from_ms, period.to_ms, house.time_zone),
        woven.started_ms,
        np.asarray(woven.deviation_v * np.float32(1000)),
        woven.times_band,
        plan.terms_at(period.to_ms - 1).rows,
        CarpetWords(_("Cell"), _("bands")),
    )
    return Response(as_json(figure), media_type="application/json")
