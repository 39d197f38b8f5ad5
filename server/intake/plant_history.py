"""What of the plant changed when: the terms of a section or of the house, one step at a time."""

from dataclasses import dataclass
from typing import Any

from server.intake.plant_change import house_fields, section_fields
from server.storage.plant import House, HouseTerms, SectionPlan, SectionTerms


@dataclass(frozen=True, slots=True)
class TermChange:
    """What took effect at a moment."""

    from_ms: int
    """0 where it holds from the start."""
    changed_ms: int
    changed_by: str
    why: str
    changes: tuple[tuple[str, Any, Any], ...]
    """Key of the plant file, the former value and the new one; empty for the first terms."""


def section_history(plan: SectionPlan) -> list[TermChange]:
    """Every change of a section's terms, the latest first."""
    fields = [section_fields(plan, terms.from_ms) for terms in plan.terms]
    return [
        _step(terms, former, now)
        for terms, former, now in zip(plan.terms, (fields[0], *fields), fields, strict=False)
    ][::-1]


def house_history(plan: House) -> list[TermChange]:
    """Every change of the price of energy and of the shifts, the latest first."""
    fields = [house_fields(plan, terms.from_ms) for terms in plan.terms]
    return [
        _step(terms, former, now)
        for terms, former, now in zip(plan.terms, (fields[0], *fields), fields, strict=False)
    ][::-1]


def _step(
    terms: SectionTerms | HouseTerms, former: dict[str, Any], now: dict[str, Any]
) -> TermChange:
    return TermChange(
        terms.from_ms,
        terms.changed_ms,
        terms.changed_by,
        terms.why,
        tuple((key, former[key], now[key]) for key in now if former[key] != now[key]),
    )
