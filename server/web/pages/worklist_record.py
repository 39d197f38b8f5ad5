"""The watch's own record: how often it was right, and how much it asks for."""

from dataclasses import dataclass
from typing import Annotated

from fastapi import APIRouter, Query, Request
from fastapi.responses import HTMLResponse
from sqlalchemy.orm import Session

from server.storage.plant import House
from server.storage.recorded import last_recorded_ms
from server.watch.life import DAY_MS
from server.watch.load import LEAST_DAYS, LoadFigure, alarm_load
from server.watch.record import LATELY_MS, watch_record
from server.web.dependencies import DbSession, Now, Reader, ThisHouse
from server.web.filters import no_data, number, percent
from server.web.pages import worklist_words as words
from server.web.pages.period import ChosenPeriod, chosen_period
from server.web.render import page

router = APIRouter(include_in_schema=False)


@dataclass(frozen=True)
class LoadLine:
    """A figure of the load with its targets, as text, and whether it is over them."""

    words: str
    value: str
    acceptable: str
    most: str
    status: str
    is_over: bool


@router.get("/worklist/record", name="worklist_record")
def worklist_record(
    request: Request,
    _who: Reader,
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    first: Annotated[str | None, Query(alias="from")] = None,
    last: Annotated[str | None, Query(alias="to")] = None,
) -> HTMLResponse:
    """Show the record up to now, and the load over a period."""
    recorded = (last_recorded_ms(db, section) for section in house.sections)
    last_ms = max((moment for moment in recorded if moment is not None), default=None)
    period = chosen_period(house, now_ms, first, last, days=LEAST_DAYS, last_ms=last_ms)
    return page(request, "worklist_record.html", _view(db, house, now_ms, period))


def _view(session: Session, house: House, now_ms: int, period: ChosenPeriod) -> dict[str, object]:
    load = alarm_load(session, period.from_ms, period.to_ms)
    return {
        "record": watch_record(session, now_ms),
        "lately_days": LATELY_MS // DAY_MS,
        "period": period,
        "load": load,
        "lines": [_line(figure) for figure in load.figures],
        "least_days": LEAST_DAYS,
        "tankhouse": house.name,
        "words": words,
    }


def _line(figure: LoadFigure) -> LoadLine:
    target, value = figure.target, figure.value
    limit = None if target is None else target.acceptable
    return LoadLine(
        words=words.load_words(figure.name),
        value=_figure(figure.name, value),
        acceptable="" if limit is None else _limit(figure.name, limit),
        most="" if target is None or target.most is None else _limit(figure.name, target.most),
        status="" if target is None else words.status_words(target.status),
        is_over=value is not None and limit is not None and value > limit,
    )


def _figure(name: str, value: float | None) -> str:
    """A figure with the digits that it deserves."""
    if value is None:
        return no_data()
    if name.endswith("share"):
        return percent(value, 1, "%")
    if value == int(value):
        return number(value)
    return number(value, 3 if value < 0.1 else 2 if value < 10 else 1)


def _limit(name: str, limit: float) -> str:
    return percent(limit, 0, "%") if name.endswith("share") else number(limit)
