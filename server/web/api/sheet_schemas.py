"""What records look like in the OpenAPI document, drawn from the columns of the sheets."""

from typing import Any

from server.intake.columns import SHEETS, Column, Reads
from server.web.api.sent import KIND_OF, MOST_RECORDS

_ID = "0d1f6a6e-8a6b-4e0e-9d53-1f0f5b1f2c11"
_AT = "2026-03-01T02:10:00Z"

EXAMPLES: dict[str, dict[str, Any]] = {
    "readings": {"id": _ID, "section": "A", "cell": 7, "at": _AT, "volts": 2.031},
    "current": {"at": _AT, "section": "A", "current_ka": 28.5},
    "counter": {"at": _AT, "section": "A", "counter_kah": 418_022.5},
    "lots": {
        "weighed_at": "2026-03-01T15:20:00Z",
        "lot": "L-2026-0301-A1",
        "section": "A",
        "cells": "1-12;15",
        "pulled_at": "2026-03-01T13:00:00Z",
        "started_at": "2026-02-22T13:00:00Z",
        "cathodes_per_cell": 20,
        "net_kg": 11_842.0,
        "starter_kg": 0,
    },
    "outages": {
        "section": "A",
        "cells": "33",
        "from": "2026-03-01T06:00:00Z",
        "to": "2026-03-01T14:30:00Z",
        "state": "bypassed",
    },
    "electrolyte": {
        "at": _AT,
        "section": "A",
        "stream": "feed",
        "metal_g_l": 42.1,
        "acid_g_l": 178.0,
        "temperature_c": 45.5,
    },
    "finds": {
        "at": _AT,
        "section": "A",
        "cell": 7,
        "cathode": 31,
        "found": "short",
        "action": "Nodule taken off.",
    },
}

_TEXT = {
    Reads.MOMENT: "ISO 8601; without an offset it is the tankhouse's local time",
    Reads.CELLS: "cell numbers in short, such as 1-12;15",
}


def body_of(name: str) -> dict[str, Any]:
    """The body of a call that sends records of one kind, for `openapi_extra`."""
    schema = {
        "type": "object",
        "required": [name],
        "properties": {
            name: {
                "type": "array",
                "maxItems": MOST_RECORDS,
                "items": {"$ref": f"#/components/schemas/{component(name)}"},
            }
        },
        "example": {name: [EXAMPLES[name]]},
    }
    return {"requestBody": {"required": True, "content": {"application/json": {"schema": schema}}}}


def component(name: str) -> str:
    """Name of the schema of one record."""
    return f"Record of {name}".title().replace(" ", "")


def components() -> dict[str, Any]:
    """The schema of a record of each kind."""
    return {component(name): _record(name) for name in EXAMPLES}


def _record(name: str) -> dict[str, Any]:
    kind = SHEETS[KIND_OF.get(name, name)]
    identity = {
        "type": ["string", "null"],
        "format": "uuid",
        "description": "The sender's own id: the same id twice is stored once.",
    }
    return {
        "type": "object",
        "description": "A record that cannot be read is held, not refused: the others go in.",
        "required": list(kind.required),
        "properties": {"id": identity} | {column.name: _value(column) for column in kind.columns},
        "example": EXAMPLES[name],
    }


def _value(column: Column) -> dict[str, Any]:
    words = [column.quantity, column.unit, _TEXT.get(column.reads, "")]
    described: dict[str, Any] = {"description": ", ".join(filter(None, words))}
    kind = "string"
    if column.reads in (Reads.CELL, Reads.WHOLE):
        kind = "integer"
    elif column.reads is Reads.NUMBER:
        kind = "number"
    if kind != "string":
        described |= {"minimum": column.low, "maximum": column.high}
    if column.choices:
        described["enum"] = list(column.choices)
    return {"type": [kind, "null"] if column.blank_allowed else kind} | described
