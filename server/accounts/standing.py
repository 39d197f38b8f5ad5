"""How a section stands at this moment: what runs, at which current, and how far the round is."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.accounts.periods import DAY_MS, HOUR_MS
from server.accounts.results import RoundState
from server.accounts.state import round_state, states_of_cells
from server.accounts.trends import last_current
from server.storage.plant import House

ROUND_DUE_MS = HOUR_MS
"""How long before its end a shift's round should be complete."""


@dataclass(frozen=True)
class Standing:
    """A section at this moment."""

    name: str
    process: str
    metal: str
    cells: int
    cells_in_service: int
    is_off: bool
    amps: float | None
    amps_at_ms: int | None
    round: RoundState
    is_current_old: bool
    is_round_late: bool


def section_standing(
    session: Session, house: House, section_name: str, now_ms: int, max_hold_ms: int
) -> Standing:
    """How one section stands now."""
    section = house.section(section_name)
    is_off, states = states_of_cells(session, section, now_ms)
    sample = last_current(session, section, now_ms)
    amps_at_ms = sample[0] if sample else None
    walked = round_state(session, house, section_name, now_ms)
    return Standing(
        name=section.name,
        process=section.process,
        metal=section.metal,
        cells=len(states),
        cells_in_service=sum(state == "in service" for state in states.values()),
        is_off=is_off,
        amps=sample[1] if sample else None,
        amps_at_ms=amps_at_ms,
        round=walked,
        is_current_old=is_current_old(amps_at_ms, is_off, now_ms, max_hold_ms),
        is_round_late=is_round_late(walked, is_off, amps_at_ms, now_ms),
    )


def is_current_old(amps_at_ms: int | None, is_off: bool, now_ms: int, max_hold_ms: int) -> bool:
    """Whether the last logged current is older than it is held for."""
    return amps_at_ms is not None and not is_off and now_ms - amps_at_ms > max_hold_ms


def is_round_late(walked: RoundState, is_off: bool, amps_at_ms: int | None, now_ms: int) -> bool:
    """Whether the shift ends within the hour and cells are yet to be read.

    A section whose current nobody has logged for a day is not being run, and has no round.
    """
    if amps_at_ms is None or now_ms - amps_at_ms > DAY_MS:
        return False
    is_incomplete = walked.cells_read < walked.cells_in_service
    return is_incomplete and not is_off and now_ms >= walked.to_ms - ROUND_DUE_MS
