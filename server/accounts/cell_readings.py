"""The readings of a cell as the log holds them, each with what it would be at rated current."""

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import groupby

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.charge import charge_record
from server.science.energy import referred_volts
from server.storage.plant import House, SectionPlan
from server.storage.reading_log import LoggedReading, reading_log
from server.watch.resistance import resistance_ohm

_LEAST_LOAD = 0.2


@dataclass(frozen=True)
class ReadingTold:
    """One reading as it stands, with the revisions that led there."""

    at_ms: int
    volts: float | None
    """None where it is withdrawn."""
    referred_v: float | None
    """At rated current; None without load."""
    is_doubted: bool
    doubt_id: int | None
    doubt: str
    history: tuple[LoggedReading, ...]
    """Every revision, the newest first; one alone where it was never changed."""


@dataclass(frozen=True)
class ReadingsPage:
    """Some readings of a cell, the newest first."""

    readings: tuple[ReadingTold, ...]
    before_ms: int | None
    """Readings before this moment follow on the next page; None on the last."""


def at_rated_current(
    session: Session, section: SectionPlan, at_ms: NDArray[np.int64], volts: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Voltages as they would have been at rated current; NaN for those read without load."""
    if not len(at_ms):
        return np.empty(0)
    first_ms, last_ms = int(at_ms.min()), int(at_ms.max())
    amps = charge_record(session, section.id, first_ms, last_ms + 1).amps_at(at_ms)
    terms = [section.terms_at(moment) for moment in at_ms.tolist()]
    rated = np.array([t.rated_amps for t in terms])
    amps = np.where(np.isfinite(amps), amps, rated)
    resistance = np.array([resistance_ohm(section, t) for t in terms])
    referred = referred_volts(volts, amps, rated, resistance)
    return np.where(amps >= _LEAST_LOAD * rated, referred, np.nan)


def cell_readings(
    session: Session,
    house: House,
    section_name: str,
    cell: int,
    from_ms: int,
    to_ms: int,
    limit: int,
    known_ms: int | None = None,
) -> ReadingsPage:
    """The newest readings of a cell in [from_ms, to_ms), at most about `limit`."""
    section = house.section(section_name)
    rows = reading_log(session, section.cell_id(cell), from_ms, to_ms, limit + 1, known_ms)
    groups = [tuple(group) for _, group in groupby(rows, key=lambda row: row.at_ms)]
    before_ms = None
    if len(rows) > limit and len(groups) > 1:
        # The last group may have been cut between two revisions.
        groups, before_ms = groups[:-1], groups[-1][0].at_ms + 1
    return ReadingsPage(_told(session, section, groups), before_ms)


def _told(
    session: Session, section: SectionPlan, groups: Sequence[tuple[LoggedReading, ...]]
) -> tuple[ReadingTold, ...]:
    newest = [group[0] for group in groups]
    at_ms = np.array([row.at_ms for row in newest], np.int64)
    volts = np.array([np.nan if row.volts is None else row.volts for row in newest])
    referred = at_rated_current(session, section, at_ms, volts)
    return tuple(
        ReadingTold(
            at_ms=row.at_ms,
            volts=row.volts,
            referred_v=None if np.isnan(value) else float(value),
            is_doubted=row.is_doubted,
            doubt_id=row.doubt_id,
            doubt=row.doubt,
            history=group,
        )
        for row, value, group in zip(newest, referred, groups, strict=True)
    )
