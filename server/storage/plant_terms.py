"""Terms of the house and of its sections, written and replaced."""

from collections.abc import Mapping
from typing import Any

from sqlalchemy import delete
from sqlalchemy.orm import Session

from server.storage.plant import HouseTerms, SectionTerms, Shift


def add_section_terms(session: Session, section_id: int, terms: Mapping[str, Any]) -> None:
    """Write what holds for a section from a moment on."""
    session.add(SectionTerms(section_id=section_id, **terms))
    session.flush()


def drop_section_terms(session: Session, section_id: int, from_ms: int) -> None:
    """Take back terms of a section that have not taken effect yet."""
    session.execute(
        delete(SectionTerms).where(
            SectionTerms.section_id == section_id, SectionTerms.from_ms == from_ms
        )
    )


def drop_house_terms(session: Session, from_ms: int) -> None:
    """Take back terms of the house that have not taken effect yet."""
    session.execute(delete(Shift).where(Shift.from_ms == from_ms))
    session.execute(delete(HouseTerms).where(HouseTerms.from_ms == from_ms))
