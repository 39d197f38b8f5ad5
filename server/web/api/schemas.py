"""The promise made to callers: what the API takes and answers, field by field, with units."""

from typing import Literal

from pydantic import BaseModel, ConfigDict, Field

from server.web.api.times import Moment

Status = Literal["stored", "duplicate", "held", "suspect"]
SheetName = Literal[
    "readings", "volts", "current", "counter", "lots", "outages", "electrolyte", "finds"
]
"""`readings` and `volts` are the same sheet: the call's name and the file's."""


class Answer(BaseModel):
    """What all answers share."""

    model_config = ConfigDict(
        extra="forbid",
        frozen=True,
        populate_by_name=True,
        use_attribute_docstrings=True,
        ser_json_inf_nan="null",
    )


class Fault(Answer):
    """One thing that cannot be taken."""

    where: str
    """Where it stands, such as `query.from` or `readings.3.volts`."""
    what: str
    """What is wrong, as a sentence."""
    found: str = ""
    expected: str = ""


class Problem(Answer):
    """Why a call was refused (RFC 9457)."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "type": "about:blank",
                "title": "Unprocessable Entity",
                "status": 422,
                "detail": "from “2026-03-29T02:30” does not exist: the clock was put forward"
                " over it; expected a time that clocks in Europe/Warsaw showed.",
                "instance": "/api/v1/accounts",
                "errors": [
                    {
                        "where": "query.from",
                        "what": "from “2026-03-29T02:30” does not exist: the clock was put"
                        " forward over it; expected a time that clocks in Europe/Warsaw showed.",
                        "found": "2026-03-29T02:30",
                        "expected": "a time that clocks in Europe/Warsaw showed",
                    }
                ],
            }
        }
    )

    type: str
    title: str
    status: int
    detail: str
    instance: str = ""
    """Path of the call."""
    errors: list[Fault] = []


class RecordOutcome(Answer):
    """What became of one record."""

    id: str | None
    """The sender's own id; null where none was sent."""
    status: Status
    reason: str | None = None
    """Why it is held, or not believed; left out where there is nothing to say."""


class Outcomes(Answer):
    """What became of each record, in the order in which they were sent."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "results": [
                    {"id": "0d1f6a6e-8a6b-4e0e-9d53-1f0f5b1f2c11", "status": "stored"},
                    {
                        "id": None,
                        "status": "held",
                        "reason": "There is no cell 99 in that section; expected a cell from 1"
                        " to 24.",
                    },
                ]
            }
        }
    )

    results: list[RecordOutcome]


class ReadingSeries(Answer):
    """Readings of one cell as three lists of one length, by time."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "at": ["2026-03-01T02:10:00Z", "2026-03-01T10:12:00Z"],
                "volts": [2.031, 20.34],
                "suspect": [False, True],
            }
        }
    )

    at: list[Moment]
    volts: list[float]
    suspect: list[bool]
    """Whether the reading is doubted, and so left out of the figures."""
    expected: list[float | None] = []
    """With `watch=yes` only: what the cell would have read if it were healthy, V."""
    probability: list[float | None] = []
    """With `watch=yes` only: of a short, 0 to 1."""


class HeldAnswer(Answer):
    """A row that could not be taken, word for word."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "id": 17,
                "sheet": "volts",
                "source": "volts-2026-03-01.csv",
                "sender": "Ines",
                "received_at": "2026-03-01T12:04:10Z",
                "line": 1204,
                "column": "volts",
                "found": "2,o31",
                "expected": "cell voltage in V",
                "reason": "volts “2,o31” is not a number; expected cell voltage in V.",
                "fields": {
                    "at": "2026-03-01T02:10",
                    "section": "A",
                    "cell": "7",
                    "volts": "2,o31",
                },
                "raw": "2026-03-01T02:10;A;7;2,o31",
                "state": "held",
                "decided_at": None,
                "decided_by": None,
                "decided_why": None,
            }
        }
    )

    id: int
    sheet: str
    source: str
    """Name of the file, or `form` or `API`."""
    sender: str
    received_at: Moment
    line: int
    column: str | None
    found: str
    expected: str
    reason: str
    fields: dict[str, str]
    """Text by column, to be mended."""
    raw: str
    state: Literal["held", "mended", "dropped"]
    decided_at: Moment | None
    decided_by: str | None
    decided_why: str | None


class HeldRows(Answer):
    """Rows held, the newest first."""

    held: list[HeldAnswer]
    next: int | None
    """Ask for the older ones with `before` set to this; null where there are none."""


class SuspectAnswer(Answer):
    """A reading that can be read and not believed."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "id": 5,
                "section": "A",
                "cell": 7,
                "at": "2026-03-01T02:10:00Z",
                "volts": 2031.0,
                "suggested_volts": 2.031,
                "reason": "A thousand times what the cell should show: a slipped unit?",
                "found": "2031",
                "expected": "about 2.03 V",
                "source": "API",
                "line": 7,
                "state": "open",
                "decided_at": None,
                "decided_by": None,
                "decided_why": None,
            }
        }
    )

    id: int
    section: str
    cell: int
    at: Moment
    volts: float | None
    suggested_volts: float | None
    """What was probably meant; null where nothing suggests itself."""
    reason: str
    found: str
    expected: str
    source: str
    line: int
    state: Literal["open", "confirmed", "corrected", "withdrawn"]
    decided_at: Moment | None
    decided_by: str | None
    decided_why: str | None


class Suspects(Answer):
    """Readings that are not believed, the newest first."""

    suspects: list[SuspectAnswer]
    next: int | None
    """Ask for the older ones with `before` set to this; null where there are none."""


class Decision(Answer):
    """Why someone decides so."""

    model_config = ConfigDict(json_schema_extra={"example": {"reason": "Read again: 2.034 V."}})

    reason: str = Field(min_length=1, max_length=2000)


class Mending(Answer):
    """The row as it should have been."""

    model_config = ConfigDict(
        json_schema_extra={"example": {"fields": {"cell": "9"}, "reason": "Slip of the pen."}}
    )

    fields: dict[str, str | float | int | None] = Field(max_length=50)
    """The columns to change; those not named stay as they were."""
    reason: str = Field(default="", max_length=2000)
    """Needed where the mended row corrects what is stored already."""


class CorrectVolts(Decision):
    """The voltage as it was."""

    model_config = ConfigDict(
        json_schema_extra={"example": {"volts": 2.034, "reason": "Slipped decimal point."}}
    )

    volts: float = Field(ge=-1000, le=1000, allow_inf_nan=False)


class Correction(Decision):
    """Records of one sheet, and why they are corrected or withdrawn."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "sheet": "current",
                "reason": "The shunt was read in the wrong range.",
                "records": [{"at": "2026-03-01T02:10:00Z", "section": "A", "current_ka": 28.5}],
            }
        }
    )

    sheet: SheetName
    records: list[dict[str, str | float | int | None]] = Field(min_length=1, max_length=20_000)
    """With the columns of the sheet; to withdraw, the columns of its key are enough."""


class Health(Answer):
    """Whether the server lives, and whether it can work."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "status": "ready",
                "database": "reachable",
                "tables": "0001",
                "expected_tables": "0001",
                "stale_stretches": 0,
                "version": "0.1.0",
            }
        }
    )

    status: Literal["ready", "not ready"]
    database: Literal["reachable", "unreachable"]
    tables: str | None
    """Revision of the database's tables."""
    expected_tables: str | None
    """Revision that this program works with."""
    stale_stretches: int
    """Stretches of time whose figures are yet to be brought up to date."""
    version: str
