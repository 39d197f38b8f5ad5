"""The newest assays of a section's electrolyte, as far back as one has to look for each value."""

from dataclasses import dataclass

from sqlalchemy import select
from sqlalchemy.orm import Session, aliased

from server.storage.records import ElectrolyteSample

STREAMS = ("spent", "feed")
"""What leaves a cell is what stands between its plates; the feed says less of it."""

_LOOK_BACK = 60
"""Samples of a section that are looked at; laboratories send temperature and metal apart."""


@dataclass(frozen=True)
class Assay:
    """One value of an assay."""

    value: float
    stream: str
    at_ms: int


def newest_assays(
    session: Session, section_id: int, now_ms: int, names: tuple[str, ...]
) -> dict[str, Assay]:
    """The newest value of each of these columns: of the spent electrolyte, else of the feed."""
    newer = aliased(ElectrolyteSample)
    same = (
        (newer.section_id == ElectrolyteSample.section_id)
        & (newer.stream == ElectrolyteSample.stream)
        & (newer.at_ms == ElectrolyteSample.at_ms)
        & (newer.revision > ElectrolyteSample.revision)
    )
    rows = session.scalars(
        select(ElectrolyteSample)
        .where(
            ElectrolyteSample.section_id == section_id,
            ElectrolyteSample.at_ms <= now_ms,
            ElectrolyteSample.is_void == 0,
            ~select(newer.at_ms).where(same).exists(),
        )
        .order_by(ElectrolyteSample.at_ms.desc())
        .limit(_LOOK_BACK)
    ).all()
    found: dict[str, Assay] = {}
    for stream in STREAMS:
        for row in rows:
            if row.stream == stream:
                for name in names:
                    value = getattr(row, name)
                    if value is not None:
                        found.setdefault(name, Assay(float(value), stream, row.at_ms))
    return found
