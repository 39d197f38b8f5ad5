"""What a rebuild forgets, and how far the records reach from which it starts anew."""

from sqlalchemy.orm import Session

from server.storage.direct import execute, fetch_rows
from server.storage.plant import SectionPlan
from server.storage.readings import span_ms
from server.storage.stale import Kind

_DERIVED = (
    "charge_day",
    "charge_knot",
    "energy_day",
    "summary",
    "latest_reading",
    "crop",
    "lot_figure",
    "flag",
    "watched_round",
    "watch_state",
    "short_day",
    "stale",
)


def forget_derived(session: Session) -> None:
    """Delete every derived row; the records stay."""
    for table in _DERIVED:
        execute(session, f"DELETE FROM {table}")


def record_span(session: Session, section: SectionPlan) -> dict[Kind, tuple[int, int]]:
    """First and last moment of a section's records, by what they bear on; [from, to)."""
    spans: dict[Kind, tuple[int, int]] = {}
    tables: tuple[tuple[Kind, str, str], ...] = (
        ("charge", "current_sample", "at_ms"),
        ("lots", "lot", "pulled_ms"),
    )
    for kind, table, column in tables:
        first, last = fetch_rows(
            session,
            f"SELECT MIN({column}), MAX({column}) FROM {table} WHERE section_id = ?",
            (section.id,),
        )[0]
        if first is not None:
            spans[kind] = (int(first), int(last) + 1)
    readings = span_ms(session, section.cell_ids)
    if readings is not None:
        spans["readings"] = (readings[0], readings[1] + 1)
    return spans
