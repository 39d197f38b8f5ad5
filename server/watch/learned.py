"""What the watch has learned of a section from its readings."""

import math

from sqlalchemy.orm import Session

from server.storage.plant import SectionPlan
from server.storage.watch_rows import state_before
from server.watch.model.state import RESISTANCE, RESISTANCE_VAR, unpacked
from server.watch.resistance import relative_u_resistance


def relative_u_learned(session: Session, section: SectionPlan, at_ms: int) -> float:
    """Relative standard uncertainty of the differential resistance, as learned by a moment.

    Before anything is learned, or where it was remembered by another version of the program, that
    of the plant's or the process's figure.
    """
    kept = state_before(session, section.id, at_ms)
    try:
        shared = unpacked(kept[2]).shared if kept else None
    except ValueError:
        shared = None
    if shared is None:
        return relative_u_resistance(section, section.terms_at(at_ms - 1))
    return math.sqrt(shared[RESISTANCE_VAR]) / float(shared[RESISTANCE])
