"""One cell over a time: its readings, and what happened to it."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.crops import cells_of
from server.storage.cell_events import corrections_of_cell, finds_of_cell
from server.storage.current import effective_outages
from server.storage.plant import House
from server.storage.readings import between


@dataclass(frozen=True)
class CellSeries:
    """The effective readings of one cell, by time."""

    at_ms: NDArray[np.int64]
    volts: NDArray[np.float64]
    suspect: NDArray[np.int64]
    """0 where the reading is believed, else the code of the doubt."""


@dataclass(frozen=True)
class CellEvent:
    """Something that happened to a cell."""

    at_ms: int
    to_ms: int | None
    """When it ended, if it lasts; None while it goes on, or for what has no length."""
    kind: str
    """outage, find or correction."""
    text: str


def cell_series(
    session: Session,
    house: House,
    section_name: str,
    cell: int,
    from_ms: int,
    to_ms: int,
    known_ms: int | None = None,
) -> CellSeries:
    """The readings of a cell in [from_ms, to_ms), as they count now or as they were known then."""
    cell_id = house.section(section_name).cell_id(cell)
    series = between(session, (cell_id,), from_ms, to_ms, known_ms)
    return CellSeries(series.at_ms, series.volts, series.suspect)


def cell_events(
    session: Session, house: House, section_name: str, cell: int, from_ms: int, to_ms: int
) -> list[CellEvent]:
    """What happened to a cell in [from_ms, to_ms), the newest first."""
    section = house.section(section_name)
    cell_id = section.cell_id(cell)
    events = [
        CellEvent(start, end, "outage", "section off" if not cells else state)
        for cells, start, end, state in effective_outages(session, section.id, from_ms, to_ms)
        if not cells or cell in cells_of(cells)
    ]
    for at_ms, cathode, found, action in finds_of_cell(session, cell_id, from_ms, to_ms):
        where = f" on cathode {cathode}" if cathode else ""
        done = f"; {action}" if action else ""
        events.append(CellEvent(at_ms, None, "find", f"{found}{where}{done}"))
    for change in corrections_of_cell(session, cell_id, from_ms, to_ms):
        became = "withdrawn" if change.volts is None else f"{change.volts:.3f} V"
        was = "withdrawn" if change.former_volts is None else f"{change.former_volts:.3f} V"
        events.append(
            CellEvent(
                change.at_ms,
                None,
                "correction",
                f"{was} became {became}, by {change.sender}: {change.reason}",
            )
        )
    return sorted(events, key=lambda e: -e.at_ms)
