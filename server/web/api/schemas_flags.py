"""What the API takes and answers about flags, and about the watch's own record."""

from typing import Literal

from pydantic import ConfigDict, Field
from pydantic.config import JsonDict

from server.web.api.schemas import Answer
from server.web.api.times import Moment

Tier = Literal["look", "act"]
State = Literal["raised", "seen", "working", "shelved", "ended"]
Act = Literal["seen", "working", "shelved", "unshelved", "closed"]

FLAG_EXAMPLE: JsonDict = {
    "section": "A",
    "cell": 7,
    "kind": "drift low",
    "tier": "act",
    "raised_at": "2026-03-01T02:10:00Z",
    "ended_at": None,
    "raised_by": "2026-03-01T02:10:00Z",
    "volts": 1.87,
    "expected_volts": 2.03,
    "deviation_mv": -160.0,
    "short_ka": 0.9,
    "u_short_ka": 0.2,
    "lost_kg_per_day": 24.0,
    "lost_value_per_day": 204.0,
    "evidence": "1.870 V, below the 1.95 V that the section's cells should show.",
    "state": "working",
    "shelved_until": None,
    "seen_by": "tomas",
    "assigned_to": "mira",
    "ended_by": None,
    "verdict": None,
    "probability": None,
}


class FlagAnswer(Answer):
    """What the watch says of a cell, and what people did about it."""

    model_config = ConfigDict(json_schema_extra={"example": FLAG_EXAMPLE})

    section: str
    cell: int
    kind: str
    """short, drift high, drift low, suspect reading or no reading."""
    tier: str
    """look: watched; act: sure enough to send someone."""
    raised_at: Moment
    ended_at: Moment | None
    """When the readings ended it; null while it is open."""
    raised_by: Moment
    """Time of the reading that raised it."""
    volts: float | None
    expected_volts: float | None
    deviation_mv: float | None
    short_ka: float | None
    u_short_ka: float | None
    lost_kg_per_day: float | None
    lost_value_per_day: float | None
    """In the tankhouse's currency."""
    evidence: str
    """One sentence that a person can read."""
    state: State
    """Where it stands now. A find or a person may have ended it before the readings do."""
    shelved_until: Moment | None
    """When it comes back by itself; null where it is not shelved."""
    seen_by: str | None
    """Who was the first to do something about it."""
    assigned_to: str | None
    """Who works on it, or did."""
    ended_by: Literal["evidence", "pull", "find", "person"] | None
    verdict: Literal["hit", "false call", "something else"] | None
    """What was found at the cell says so of the flag; null while nobody has looked."""
    probability: float | None
    """Of a short, 0 to 1, as stated when it was raised; null for what is no short."""


class Flags(Answer):
    """Every flag whose life touches the time asked for."""

    flags: list[FlagAnswer]


class NewestAnswer(Answer):
    """How a flagged cell stands by its newest reading; the flag keeps what it was raised by."""

    updated_at: Moment
    """Time of that reading."""
    deviation_mv: float | None
    probability: float | None
    """Of a short, 0 to 1."""
    short_ka: float | None
    """What a short takes if there is one; null for what is no short."""
    u_short_ka: float | None
    lost_kg_per_day: float | None
    """What is to be expected: less in so far as there may be no short."""
    lost_value_per_day: float | None


NEWEST_EXAMPLE: JsonDict = {
    "updated_at": "2026-03-01T18:10:00Z",
    "deviation_mv": -165.0,
    "probability": None,
    "short_ka": 0.9,
    "u_short_ka": 0.2,
    "lost_kg_per_day": 25.0,
    "lost_value_per_day": 212.0,
}


class WorkItemAnswer(FlagAnswer):
    """An open flag with its place on the list and on the walk."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {**FLAG_EXAMPLE, "rank": 1, "walk": 7, "newest": NEWEST_EXAMPLE}
        }
    )

    rank: int
    """1 is what to do first."""
    walk: int
    """Place along the walk through the section."""
    newest: NewestAnswer
    """By this the list is ranked."""


class PlannedStopAnswer(Answer):
    """A cell whose anodes or contacts deserve a planned stop."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "section": "A",
                "cell": 12,
                "flags": 3,
                "since": "2026-02-14T02:10:00Z",
                "last_raised_at": "2026-02-14T02:10:00Z",
                "deviation_mv": 85.0,
                "gain_kwh_per_month": 2200.0,
                "gain_kg_per_month": None,
            }
        }
    )

    section: str
    cell: int
    flags: int
    """Drifts high that were raised in the last 90 days."""
    since: Moment | None
    """Since when one is open; null where none is."""
    last_raised_at: Moment
    deviation_mv: float | None
    """By how much it reads high now, or did when the last flag was raised."""
    gain_kwh_per_month: float | None
    """What the repair should bring in 30 days: that voltage times the cell's charge."""
    gain_kg_per_month: float | None
    """Metal, where the cell has a short as well."""


class Worklist(Answer):
    """Open flags: those to act on first, the costliest first."""

    items: list[WorkItemAnswer]
    planned: list[PlannedStopAnswer]
    """Cells with a drift high for more than a week, or three in 90 days; most to gain first."""


class FlagActSent(Answer):
    """What is done about a flag, which is named by its cell, its kind and when it was raised."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "section": "A",
                "cell": 7,
                "kind": "drift low",
                "raised_at": "2026-03-01T02:10:00Z",
                "act": "shelved",
                "until": "2026-03-04T06:00:00Z",
                "reason": "Pulled on Wednesday anyway.",
            }
        }
    )

    section: str = Field(max_length=200)
    cell: int = Field(ge=1, le=100_000)
    kind: str = Field(max_length=40)
    raised_at: str = Field(max_length=40)
    act: Act
    until: str | None = Field(default=None, max_length=40)
    """Needed with `shelved`: until when, seven days from now at most."""
    reason: str = Field(default="", max_length=500)
    """Needed with `shelved` and `closed`."""
    assigned_to: str = Field(default="", max_length=200)
    """With `working`: who works on it; whoever calls, where it is left out."""


class RightAnswer(Answer):
    """Flags that were right, of those that a find says something of, with a 95 % interval."""

    pct: float
    low_pct: float
    high_pct: float


class CountedAnswer(Answer):
    """Flags of one kind and tier, and what was found where they stood."""

    kind: str
    tier: str
    raised: int
    hits: int
    false_calls: int
    something_else: int
    """Something was found, and not what the flag said."""
    not_looked_at: int
    """No find says anything of these."""
    right: RightAnswer | None
    """Hits among hits and false calls; null while there is neither."""


class CalibrationAnswer(Answer):
    """Flags whose stated probability lay in a range, as far as somebody looked."""

    from_: float = Field(alias="from")
    """Share, 0 to 1."""
    to: float
    flags: int
    hits: int
    stated_pct: float | None
    """The mean of what was stated."""
    right: RightAnswer | None


class TargetAnswer(Answer):
    """What is published for a figure."""

    acceptable: float | None
    """Very likely acceptable up to here."""
    most: float | None
    """The most that is manageable."""
    status: str
    """`looked up` in public notes that quote the standard, or `from memory`."""


class LoadFigureAnswer(Answer):
    """One figure of the alarm load; one whose name ends in `share` is 0 to 1."""

    name: str
    value: float | None
    target: TargetAnswer | None


class LoadAnswer(Answer):
    """The alarm load over a period, for one person who works the list."""

    from_: Moment = Field(alias="from")
    to: Moment
    is_long_enough: bool
    """Whether the period is as long as the standard asks for, 30 days."""
    raised: int
    figures: list[LoadFigureAnswer]


class WatchRecordAnswer(Answer):
    """How often the watch was right, and how much it asks for."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "at": "2026-03-01T12:00:00Z",
                "lately_days": 90,
                "lately": [
                    {
                        "kind": "short",
                        "tier": "act",
                        "raised": 40,
                        "hits": 27,
                        "false_calls": 3,
                        "something_else": 1,
                        "not_looked_at": 9,
                        "right": {"pct": 90.0, "low_pct": 74.4, "high_pct": 96.5},
                    }
                ],
                "overall": [],
                "calibration": None,
                "load": {
                    "from": "2026-01-30T12:00:00Z",
                    "to": "2026-03-01T12:00:00Z",
                    "is_long_enough": True,
                    "raised": 66,
                    "figures": [
                        {
                            "name": "per_day",
                            "value": 2.2,
                            "target": {"acceptable": 150.0, "most": 300.0, "status": "looked up"},
                        }
                    ],
                },
            }
        }
    )

    at: Moment
    lately_days: int
    lately: list[CountedAnswer]
    overall: list[CountedAnswer]
    calibration: list[CalibrationAnswer] | None
    """Null where no flag states a probability."""
    load: LoadAnswer
