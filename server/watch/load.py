"""How much the watch asks of whoever works its list, as alarm management measures it.

The figures are those of ANSI/ISA-18.2 and IEC 62682, for one person who works the list, with a
flag taken as an alarm at the moment of the reading that raised it. Flags come with the rounds, so
that a round in which much is found is a flood by these measures.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from sqlalchemy.orm import Session

from server.storage.flag_spans import FlagSpan, flag_spans
from server.watch.life import DAY_MS

HOUR_MS = 3_600_000
TEN_MINUTES_MS = 600_000

FLOOD = 10
"""Alarms in ten minutes above which a flood begins.

Source: ANSI/ISA-18.2, as public engineering notes quote it.
"""

CHATTERS_MS = DAY_MS
"""A flag that is raised again within this time after its end chatters: three rounds of a shift."""

WORST = 10
LEAST_DAYS = 30
"""The standard rates alarms over at least so many days."""

LOOKED_UP = "looked up"
FROM_MEMORY = "from memory"


@dataclass(frozen=True)
class Target:
    """What is published for a figure: very likely acceptable, and the most that is manageable."""

    acceptable: float | None
    most: float | None
    status: str
    """Looked up in public notes that quote the standard, or from memory."""


@dataclass(frozen=True)
class LoadFigure:
    """One figure of the load. A name that ends in `share` is 0 to 1."""

    name: str
    value: float | None
    target: Target | None


@dataclass(frozen=True)
class AlarmLoad:
    """The load over a period, [from_ms, to_ms)."""

    from_ms: int
    to_ms: int
    raised: int
    figures: tuple[LoadFigure, ...]

    @property
    def is_long_enough(self) -> bool:
        """Whether the period is as long as the standard asks for."""
        return self.to_ms - self.from_ms >= (LEAST_DAYS - 1) * DAY_MS


# Per day, hour and ten minutes, and the flood: ANSI/ISA-18.2 (2009) and EEMUA 191, as public
# engineering notes quote them. Priorities: 5, 15 and 80 % for high, medium and low, as a safety
# consultancy quotes them; to act on stands for high and medium here. The others from memory of
# the same standard.
TARGETS = {
    "per_day": Target(150.0, 300.0, LOOKED_UP),
    "per_hour": Target(6.0, 12.0, LOOKED_UP),
    "per_ten_minutes": Target(1.0, 2.0, LOOKED_UP),
    "most_in_ten_minutes": Target(float(FLOOD), None, LOOKED_UP),
    "flood_share": Target(0.01, None, LOOKED_UP),
    "act_share": Target(0.2, None, LOOKED_UP),
    "standing_at_the_end": Target(5.0, None, FROM_MEMORY),
    "standing_on_average": Target(5.0, None, FROM_MEMORY),
    "chattering": Target(0.0, None, FROM_MEMORY),
    "worst_cells_share": Target(0.01, 0.05, FROM_MEMORY),
}


def alarm_load(session: Session, from_ms: int, to_ms: int) -> AlarmLoad:
    """The load over [from_ms, to_ms)."""
    flags = flag_spans(session, from_ms - CHATTERS_MS, to_ms)
    return load_of(flags, from_ms, to_ms)


def load_of(flags: Sequence[FlagSpan], from_ms: int, to_ms: int) -> AlarmLoad:
    """The load of these flags, which may reach beyond the period."""
    raised = [flag for flag in flags if from_ms <= flag.raised_ms < to_ms]
    count = len(raised)
    periods = max((to_ms - from_ms) / TEN_MINUTES_MS, 1.0)
    days = (to_ms - from_ms) / DAY_MS
    tens = np.bincount([(flag.raised_ms - from_ms) // TEN_MINUTES_MS for flag in raised] or [0])
    most = int(tens.max()) if raised else 0
    values: dict[str, float | None] = {
        "per_day": count / days,
        "per_hour": count / (days * 24),
        "per_ten_minutes": count / periods,
        "most_in_ten_minutes": float(most),
        "flood_share": float(np.count_nonzero(tens > FLOOD)) / periods,
        "act_share": _share([flag.tier == "act" for flag in raised]),
        "standing_at_the_end": _standing_at(flags, to_ms),
        "standing_on_average": _standing_on_average(flags, from_ms, to_ms),
        "chattering": float(_chattering(flags, from_ms, to_ms)),
        "worst_cells_share": _worst_share(raised),
    }
    figures = tuple(LoadFigure(name, value, TARGETS[name]) for name, value in values.items())
    return AlarmLoad(from_ms, to_ms, count, figures)


def _share(are: Sequence[bool]) -> float | None:
    return sum(are) / len(are) if are else None


def _standing_at(flags: Sequence[FlagSpan], at_ms: int) -> float:
    """Flags that are open at a moment and have been for more than a day."""
    return float(
        sum(
            flag.raised_ms < at_ms - DAY_MS and (flag.ended_ms is None or flag.ended_ms >= at_ms)
            for flag in flags
        )
    )


def _standing_on_average(flags: Sequence[FlagSpan], from_ms: int, to_ms: int) -> float:
    """How many have been open for more than a day, on the average of the period."""
    stood_ms = 0
    for flag in flags:
        until_ms = to_ms if flag.ended_ms is None else min(flag.ended_ms, to_ms)
        stood_ms += max(until_ms - max(flag.raised_ms + DAY_MS, from_ms), 0)
    return stood_ms / (to_ms - from_ms)


def _chattering(flags: Sequence[FlagSpan], from_ms: int, to_ms: int) -> int:
    """Flags of the period that came again shortly after one of their cell and kind had ended."""
    ended: dict[tuple[int, str], int] = {}
    again = 0
    for flag in flags:
        key = (flag.cell_id, flag.kind)
        last_ms = ended.get(key)
        is_again = last_ms is not None and flag.raised_ms - last_ms <= CHATTERS_MS
        again += is_again and from_ms <= flag.raised_ms < to_ms
        if flag.ended_ms is not None:
            ended[key] = flag.ended_ms
    return again


def _worst_share(raised: Sequence[FlagSpan]) -> float | None:
    """The share of the load that the ten most often flagged cells make."""
    if not raised:
        return None
    _, counts = np.unique([flag.cell_id for flag in raised], return_counts=True)
    return float(np.sort(counts)[-WORST:].sum()) / len(raised)
