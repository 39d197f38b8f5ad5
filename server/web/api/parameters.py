"""Parameters that several calls share, with what the document says of them."""

from typing import Annotated

from fastapi import Path, Query

_TIME = (
    "ISO 8601 with an offset (an offset's plus sign is written %2B), or the tankhouse's local"
    " time, or a local day."
)

_HOUR = {"a day": {"value": "2026-03-01"}, "a moment": {"value": "2026-03-01T06:00:00Z"}}

FromTime = Annotated[
    str,
    Query(alias="from", max_length=40, description=f"From when. {_TIME}", openapi_examples=_HOUR),
]
ToTime = Annotated[
    str,
    Query(
        alias="to",
        max_length=40,
        description=f"Until when, that moment left out. {_TIME}",
        openapi_examples={
            "a day": {"value": "2026-03-02"},
            "a moment": {"value": "2026-03-02T06:00:00Z"},
        },
    ),
]
FromIfAny = Annotated[
    str | None,
    Query(alias="from", max_length=40, description=f"From when; where left out, a month. {_TIME}"),
]
ToIfAny = Annotated[
    str | None,
    Query(alias="to", max_length=40, description=f"Until when; now where it is left out. {_TIME}"),
]
AtTime = Annotated[
    str | None,
    Query(max_length=40, description=f"At which moment; now where it is left out. {_TIME}"),
]
KnownTime = Annotated[
    str | None,
    Query(
        max_length=40,
        description=f"As it was known at this moment: later deliveries are left out. {_TIME}",
    ),
]
SectionName = Annotated[str, Query(max_length=200, description="Name of the section.")]
SectionIfAny = Annotated[
    str | None, Query(max_length=200, description="Name of the section; all where left out.")
]
CellNumber = Annotated[int, Query(ge=1, le=100_000, description="Number of the cell.")]
Points = Annotated[
    int | None,
    Query(
        ge=8,
        le=20_000,
        description="At most so many readings; the extremes are kept, and so are doubted ones as"
        " long as they are few.",
    ),
]
Limit = Annotated[int, Query(ge=1, le=1000, description="At most so many rows.")]
Before = Annotated[
    int | None,
    Query(ge=1, le=2**53, description="Only rows before this one: `next` of the page before."),
]
RowId = Annotated[int, Path(ge=1, le=2**53, description="Number of the row.")]
