"""The page of one section: its floor now, and its figures over a period."""

from dataclasses import dataclass
from math import floor as whole_below
from math import isfinite, log10
from typing import Annotated

from fastapi import APIRouter, Query, Request
from fastapi.responses import HTMLResponse
from sqlalchemy.orm import Session

from server.accounts.account import section_account
from server.accounts.floor import FloorCell, section_floor
from server.accounts.results import CellState
from server.accounts.standing import section_standing
from server.accounts.state import cell_states
from server.accounts.today import is_efficiency_low, is_energy_high
from server.accounts.trends import current_steps, section_days, section_outages
from server.figures.floor import NARROW_LINE, floor
from server.settings import Settings
from server.storage.plant import House
from server.storage.recorded import last_recorded_ms
from server.storage.watch_rows import has_rounds
from server.watch.worklist import worklist
from server.web.dependencies import DbSession, Now, Reader, ThisHouse, ThisSite
from server.web.filters import no_data, number
from server.web.live import live_token
from server.web.pages import words
from server.web.pages.account_words import account_words
from server.web.pages.floor_words import floor_sentence, needle_words
from server.web.pages.period import ChosenPeriod, chosen_period
from server.web.pages.section_trends import section_trends
from server.web.render import page

router = APIRouter(include_in_schema=False)

DEFAULT_DAYS = 30

_DIGITS = 6
_MOST_DECIMALS = 9


@dataclass(frozen=True)
class CellRow:
    """One line of the table of cells."""

    state: CellState
    floor: FloorCell
    deposit_age_ms: int | None


@router.get("/sections/{section_name}", name="section")
def section(
    request: Request,
    section_name: str,
    _who: Reader,
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    site: ThisSite,
    first: Annotated[str | None, Query(alias="from")] = None,
    last: Annotated[str | None, Query(alias="to")] = None,
) -> HTMLResponse:
    """Show a section's floor as it is now, and its books over a period."""
    live = {"live": live_token(db)}
    last_ms = last_recorded_ms(db, house.section(section_name))
    period = chosen_period(house, now_ms, first, last, days=DEFAULT_DAYS, last_ms=last_ms)
    view = _view(db, house, section_name, now_ms, period, site.settings)
    return page(request, "section.html", live | view)


def _view(
    session: Session,
    house: House,
    section_name: str,
    now_ms: int,
    period: ChosenPeriod,
    settings: Settings,
) -> dict[str, object]:
    plan = house.section(section_name)
    span = (period.from_ms, period.to_ms)
    cells = section_floor(session, house, section_name, now_ms)
    account = section_account(session, house, section_name, *span)
    days = section_days(session, house, section_name, *span)
    steps = current_steps(session, house, section_name, *span)
    outages = section_outages(session, plan, *span)
    rows = plan.terms_at(now_ms).rows
    trends = section_trends(days, steps, outages, account, house.time_zone)
    has_carpet = has_rounds(session, plan.id, *span)
    flags = [w for w in worklist(session, house, now_ms) if w.flag.section == section_name]
    return {
        "standing": section_standing(session, house, section_name, now_ms, settings.max_hold_ms),
        "names": [other.name for other in house.sections],
        "wide_floor": floor(cells, rows),
        "narrow_floor": floor(cells, rows, NARROW_LINE),
        "floor_sentence": floor_sentence(cells),
        "flags": flags,
        "currency": house.currency,
        "period": period,
        "account": account,
        "is_efficiency_low": is_efficiency_low(account),
        "is_energy_high": is_energy_high(account),
        "waterfall_j_kg": sum(item.j_kg for item in account.waterfall),
        "made_kg": account.period.made_kg if account.charge.cell_c > 0 else None,
        "has_figures": has_carpet or any(trend.figure for trend in trends),
        "has_carpet": has_carpet,
        "trends": trends[:-1],
        "current": trends[-1],
        "days": list(reversed(days)),
        "outages": outages,
        "cells": [
            CellRow(state, lean, _age(state.deposit_started_ms, now_ms))
            for state, lean in zip(
                cell_states(session, house, section_name, now_ms), cells, strict=True
            )
        ],
        "digits": digits,
        "needle_words": needle_words,
        "translated": account_words,
        **WORDS,
    }


def _age(started_ms: int | None, now_ms: int) -> int | None:
    return None if started_ms is None else now_ms - started_ms


WORDS = {
    name: getattr(words, name)
    for name in ("process_words", "metal_words", "state_words", "item_words", "figure_words")
}


def digits(value: float | None) -> str:
    """A number with six digits, so that a working can be followed by hand."""
    if value is None or not isfinite(value):
        return no_data()
    if value == 0 or float(value).is_integer():
        return number(value)
    return number(value, min(max(_DIGITS - 1 - whole_below(log10(abs(value))), 0), _MOST_DECIMALS))
