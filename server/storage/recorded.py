"""Up to when there are records of a section."""

from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows, marks
from server.storage.plant import SectionPlan


def last_recorded_ms(session: Session, section: SectionPlan) -> int | None:
    """The newest moment at which a section's current or one of its cells is known."""
    row = fetch_rows(
        session,
        "SELECT (SELECT MAX(at_ms) FROM charge_knot WHERE section_id = ?),"
        " (SELECT MAX(at_ms) FROM latest_reading WHERE cell_id IN"
        f" ({marks(len(section.cell_ids))}))",
        (section.id, *section.cell_ids),
    )[0]
    return max((int(moment) for moment in row if moment is not None), default=None)
