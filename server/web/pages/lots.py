"""The page of lots: what the scale weighed and what became of its charge; and one more logged."""

from dataclasses import dataclass, field
from typing import Annotated
from urllib.parse import urlencode

from fastapi import APIRouter, Query, Request
from fastapi.responses import HTMLResponse, RedirectResponse
from sqlalchemy.orm import Session
from starlette.responses import Response

from server.accounts.account import metal_of
from server.accounts.lots import lot_results
from server.accounts.metal import crop_account
from server.accounts.results import Crops, LotResult
from server.intake.take_in import take_in_records
from server.intake.trial import faults_of_records
from server.storage.plant import House, SectionPlan
from server.storage.recorded import last_recorded_ms
from server.web.dependencies import (
    DbSession,
    Now,
    Operator,
    Reader,
    ThisHouse,
    ThisSite,
    Who,
    WriteSession,
)
from server.web.i18n import gettext as _
from server.web.pages.period import ChosenPeriod, chosen_period
from server.web.pages.words import mm
from server.web.render import page
from server.web.uploads import FormFields

router = APIRouter(include_in_schema=False)

DEFAULT_DAYS = 7
MOST_LOTS = 500
"""Lots that are listed at once, the newest first."""

FIELDS = (
    "section",
    "lot",
    "cells",
    "weighed_at",
    "pulled_at",
    "started_at",
    "cathodes_per_cell",
    "net_kg",
    "starter_kg",
)
_NUMBERS = ("cathodes_per_cell", "net_kg", "starter_kg")


@dataclass(frozen=True)
class LotOfSection:
    """One line of the table."""

    section: str
    lot: LotResult

    @property
    def grew_ms(self) -> int | None:
        """How long its oldest cathodes hung; None where that is not known."""
        return self.lot.pulled_ms - self.lot.started_ms if self.lot.started_ms else None


@dataclass(frozen=True)
class SectionSum:
    """The lots of one section over the period."""

    section: SectionPlan
    crops: Crops
    target: float


@dataclass(frozen=True)
class TypedLot:
    """The form as it was sent, with what is wrong beside the fields."""

    values: dict[str, str] = field(default_factory=dict)
    faults: dict[str, str] = field(default_factory=dict)

    def value(self, name: str, otherwise: object = "") -> object:
        """What stands in a field."""
        return self.values.get(name, otherwise)


@router.get("/lots", name="lots")
def lots(
    request: Request,
    who: Reader,
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    section: str = "",
    first: Annotated[str | None, Query(alias="from")] = None,
    last: Annotated[str | None, Query(alias="to")] = None,
    logged: str = "",
) -> HTMLResponse:
    """Show the lots of a period."""
    period = _period(db, house, now_ms, section, first, last)
    view = _view(db, house, who, now_ms, section, period, TypedLot(), logged)
    return page(request, "lots.html", view)


@router.post("/lots", name="lot_log")
def lot_log(
    request: Request,
    who: Operator,
    db: WriteSession,
    house: ThisHouse,
    now_ms: Now,
    site: ThisSite,
    form: FormFields,
) -> Response:
    """Log one lot."""
    values = {name: str(form.get(name, "")).strip() for name in FIELDS}
    record = {name: _as_record(name, text) for name, text in values.items()}
    given = (db, house, "lots", [record], who.sender, now_ms, site.settings)
    if faults := faults_of_records(*given):
        typed = TypedLot(values, {fault.column: fault.reason for fault in faults})
        period = _period(db, house, now_ms, "", None, None)
        view = _view(db, house, who, now_ms, "", period, typed, "")
        return page(request, "lots.html", view, status_code=422)
    take_in_records(*given, source="form")
    query = urlencode({"section": values["section"], "logged": values["lot"]})
    return RedirectResponse(f"{request.url_for('lots').path}?{query}", 303)


def _as_record(name: str, text: str) -> str:
    """A field as a record has it: a decimal comma is as good as a point."""
    return text.replace(",", ".") if name in _NUMBERS and "." not in text else text


def _period(
    session: Session,
    house: House,
    now_ms: int,
    section: str,
    first: str | None,
    last: str | None,
) -> ChosenPeriod:
    chosen = [house.section(section)] if section else house.sections
    recorded = [last_recorded_ms(session, plan) for plan in chosen]
    return chosen_period(
        house,
        now_ms,
        first,
        last,
        days=DEFAULT_DAYS,
        last_ms=max((moment for moment in recorded if moment is not None), default=None),
        kept={"section": section} if section else {},
    )


def _view(
    session: Session,
    house: House,
    who: Who,
    now_ms: int,
    section: str,
    period: ChosenPeriod,
    typed: TypedLot,
    logged: str,
) -> dict[str, object]:
    plans = [house.section(section)] if section else list(house.sections)
    span = (period.from_ms, period.to_ms)
    found = [
        LotOfSection(plan.name, lot)
        for plan in plans
        for lot in lot_results(session, house, plan.name, *span)
    ]
    found.sort(key=lambda one: -one.lot.pulled_ms)
    days = {"from": period.from_day.isoformat(), "to": period.to_day.isoformat()}
    return {
        "section": section,
        "choices": [
            (_("All sections"), "?" + urlencode(days), not section),
            *(
                (plan.name, "?" + urlencode({"section": plan.name, **days}), plan.name == section)
                for plan in house.sections
            ),
        ],
        "period": period,
        "sums": [
            SectionSum(
                plan,
                crop_account(session, plan, metal_of(plan), *span),
                plan.terms_at(period.to_ms - 1).target_current_efficiency,
            )
            for plan in plans
        ],
        "lots": found[:MOST_LOTS],
        "how_many": len(found),
        "may_log": who.may("operator"),
        "typed": typed,
        "names": [(plan.name, plan.name) for plan in house.sections],
        "now_ms": now_ms,
        "logged": logged,
        "mm": mm,
    }
