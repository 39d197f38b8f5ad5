"""Records as programs send them: a list under the sheet's name, read after the role is known."""

import json
from dataclasses import dataclass
from typing import Annotated, Any

import orjson
from fastapi import Depends, Request
from sqlalchemy.orm import Session
from starlette.exceptions import HTTPException
from starlette.responses import Response

from server.intake.results import RecordResult
from server.intake.take_in import take_in_records
from server.storage.plant import House
from server.web.api.resource import as_json
from server.web.dependencies import Now, Operator, Requires, ThisHouse, ThisSite, Who, WriteSession
from server.web.i18n import gettext as _
from server.web.refusals import Refused, fault
from server.web.site import Site

MOST_RECORDS = 20_000
KIND_OF = {"readings": "volts"}
"""The sheet whose columns the records have, where the API calls the list by another name."""

Record = dict[str, Any]


async def json_body(request: Request) -> Any:
    """The body as JSON, whatever is in it.

    NaN and infinities, which some programs write, are let through, so that the one record that
    holds them is held and the others go in.
    """
    kind = request.headers.get("content-type", "application/json").partition(";")[0].strip()
    if kind != "application/json" and not kind.endswith("+json"):
        raise HTTPException(415, _("Send JSON, with Content-Type: application/json."))
    body = await request.body()
    try:
        return orjson.loads(body)
    except orjson.JSONDecodeError as error:
        return _lenient(body, str(error))


def _lenient(body: bytes, what: str) -> Any:
    try:
        found = json.loads(body)
        json.dumps(found, ensure_ascii=False).encode()
    except (ValueError, RecursionError):
        refusal = fault("body", _("This is not JSON: %(what)s.") % {"what": what})
        raise Refused([refusal], status=400) from None
    return found


def records_in(found: Any, name: str) -> list[Record]:
    """The list of records under a name.

    Raises
    ------
    Refused
        If there is no such list, if it is too long, or if something in it is no record.
    """
    records = found.get(name) if isinstance(found, dict) else None
    if not isinstance(records, list):
        expected = f'{{"{name}": [...]}}'
        raise Refused([fault(name, _("There is no list of this name."), expected=expected)])
    if len(records) > MOST_RECORDS:
        expected = _("at most %(most)d") % {"most": MOST_RECORDS}
        what = _("These are too many records at once.")
        raise Refused([fault(name, what, len(records), expected)])
    faults = [
        fault(f"{name}.{place}", _("This is not a record."), record, _("an object"))
        for place, record in enumerate(records)
        if not isinstance(record, dict)
    ]
    if faults:
        raise Refused(faults[:100])
    return records


class _Records:
    """Reads the list of records of a call, once whoever calls is let in."""

    def __init__(self, name: str) -> None:
        self.name = name

    async def __call__(
        self, request: Request, _who: Annotated[Who, Depends(Requires("operator"))]
    ) -> list[Record]:
        """Give the records."""
        return records_in(await json_body(request), self.name)


@dataclass(frozen=True)
class Taking:
    """What a route needs to take records in."""

    session: Session
    house: House
    site: Site
    who: Who
    now_ms: int

    def take_in(self, name: str, records: list[Record], reason: str = "") -> Response:
        """Take records in, count what became of them, and answer it in their order."""
        kind = KIND_OF.get(name, name)
        results = take_in_records(
            self.session,
            self.house,
            kind,
            records,
            self.who.sender,
            self.now_ms,
            self.site.settings,
            source="API",
            reason=reason,
        )
        for result in results:
            self.site.metrics.rows.labels(kind, result.status).inc()
        outcomes = [
            _outcome(record, result) for record, result in zip(records, results, strict=True)
        ]
        return as_json({"results": outcomes})


def _outcome(record: Record, result: RecordResult) -> dict[str, str | None]:
    """What became of a record, under the id as its sender wrote it."""
    sent_id = record.get("id")
    outcome = {"id": sent_id if isinstance(sent_id, str) else result.id, "status": result.status}
    return outcome | ({"reason": result.reason} if result.reason else {})


def _taking(
    db: WriteSession, house: ThisHouse, site: ThisSite, who: Operator, now_ms: Now
) -> Taking:
    return Taking(db, house, site, who, now_ms)


Taken = Annotated[Taking, Depends(_taking, scope="function")]
"""Session, house and sender of a call that brings records."""

SentReadings = Annotated[list[Record], Depends(_Records("readings"))]
SentCurrent = Annotated[list[Record], Depends(_Records("current"))]
SentCounter = Annotated[list[Record], Depends(_Records("counter"))]
SentLots = Annotated[list[Record], Depends(_Records("lots"))]
SentOutages = Annotated[list[Record], Depends(_Records("outages"))]
SentElectrolyte = Annotated[list[Record], Depends(_Records("electrolyte"))]
SentFinds = Annotated[list[Record], Depends(_Records("finds"))]
