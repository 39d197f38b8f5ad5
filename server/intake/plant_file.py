"""Reads a plant file, and sets up the books of the tankhouse that it describes."""

import secrets
import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from sqlalchemy.orm import Session

from server.intake.plant_faults import PlantFault, PlantFileWrong, checked
from server.intake.plant_model import PlantFile, PlantSection, PlantShift, PlantTankhouse
from server.science.units import (
    amps_from_ka,
    j_kg_from_kwh_t,
    kelvin_from_degc,
    metres_from_millimetres,
    ohm_from_microohm,
    share_from_percent,
    volts_from_millivolts,
)
from server.storage.errors import Conflict
from server.storage.plant import (
    FROM_THE_START_MS,
    Cell,
    HouseTerms,
    Section,
    SectionTerms,
    Shift,
    Tankhouse,
    has_plant,
)

__all__ = [
    "Change",
    "PlantFault",
    "PlantFile",
    "PlantFileWrong",
    "add_cells",
    "add_house_terms",
    "found_plant",
    "found_section",
    "read_plant",
    "terms_of",
]


@dataclass(frozen=True, slots=True)
class Change:
    """From when something holds, and who put it down when and why."""

    from_ms: int
    changed_ms: int
    changed_by: str
    why: str


def read_plant(source: Path | str, name: str | None = None) -> PlantFile:
    """Read a plant file, given by its path or as its text.

    Raises
    ------
    PlantFileWrong
        When it is not TOML, or with every key that is wrong, missing or unknown.
    """
    file = name or (source.name if isinstance(source, Path) else "plant.toml")
    try:
        text = source.read_text(encoding="utf-8-sig") if isinstance(source, Path) else source
    except FileNotFoundError:
        raise PlantFileWrong(file, [PlantFault("the file", "", "a plant file there")]) from None
    except (OSError, UnicodeDecodeError) as error:
        fault = PlantFault("the file", str(error), "text in UTF-8")
        raise PlantFileWrong(file, [fault]) from None
    try:
        content = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise PlantFileWrong(file, [PlantFault("the file", str(error), "TOML")]) from None
    return checked(PlantFile, content, file)


def found_plant(session: Session, plant: PlantFile, now_ms: int, who: str) -> None:
    """Write the tankhouse, its sections and their cells into books that have none yet.

    Raises
    ------
    Conflict
        When there is a tankhouse already.
    """
    if has_plant(session):
        raise Conflict("this database holds a tankhouse already; it is changed from its own pages")
    house = plant.tankhouse
    change = Change(FROM_THE_START_MS, now_ms, who, "as in the plant file")
    session.add(
        Tankhouse(
            name=house.name,
            time_zone=house.time_zone,
            currency=house.currency,
            signing_key=secrets.token_urlsafe(48),
            made_ms=now_ms,
        )
    )
    add_house_terms(session, house, plant.shift, change)
    for section in plant.section:
        found_section(session, section, change)


def found_section(session: Session, section: PlantSection, change: Change) -> int:
    """Write a new section with its first terms and its cells; answers its id."""
    chemistry = section.chemistry()
    row = Section(
        name=section.name,
        process=chemistry.name,
        metal=chemistry.metal.symbol,
        electrons=chemistry.metal.electrons,
    )
    session.add(row)
    session.flush()
    session.add(SectionTerms(section_id=row.id, **terms_of(section, change)))
    add_cells(session, row.id, 0, section.cells)
    session.flush()
    return row.id


def add_cells(session: Session, section_id: int, former: int, cells: int) -> None:
    """Write the cells after the last that there is."""
    session.add_all(
        Cell(section_id=section_id, number=number) for number in range(former + 1, cells + 1)
    )


def add_house_terms(
    session: Session, house: PlantTankhouse, shifts: list[PlantShift], change: Change
) -> None:
    """Write what holds for the whole house from a moment on."""
    session.add(
        HouseTerms(
            from_ms=change.from_ms,
            energy_price_per_kwh=house.energy_price_per_kwh,
            standard_potentials=house.standard_potentials,
            changed_ms=change.changed_ms,
            changed_by=change.changed_by,
            why=change.why,
        )
    )
    session.flush()
    session.add_all(
        Shift(from_ms=change.from_ms, starts_minute=shift.starts_minute, name=shift.name)
        for shift in shifts
    )
    session.flush()


def terms_of(section: PlantSection, change: Change) -> dict[str, Any]:
    """A section's terms as they are stored, in SI units and shares."""
    resistance_uohm = section.differential_resistance_uohm
    rectifier_pct = section.rectifier_efficiency_pct
    low_volts, high_volts = section.targets.cell_volts
    return {
        "from_ms": change.from_ms,
        "cells": section.cells,
        "rows": section.rows,
        "cathodes_per_cell": section.cathodes_per_cell,
        "cathode_area_m2": section.cathode_area_m2,
        "rated_amps": amps_from_ka(section.rated_current_ka),
        "metal_value_per_kg": section.metal_value_per_kg,
        "differential_resistance_ohm": (
            None if resistance_uohm is None else ohm_from_microohm(resistance_uohm)
        ),
        "rectifier_efficiency": (
            None if rectifier_pct is None else share_from_percent(rectifier_pct)
        ),
        "meter_accuracy_v": volts_from_millivolts(section.meter_accuracy_mv),
        "current_accuracy": share_from_percent(section.current_accuracy_pct),
        "scale_accuracy": share_from_percent(section.scale_accuracy_pct),
        "walk_order": section.walk_order,
        "bus_volts": section.bus_volts,
        **_electrolyte_of(section),
        "target_current_efficiency": share_from_percent(section.targets.current_efficiency_pct),
        "target_specific_energy_j_kg": j_kg_from_kwh_t(section.targets.specific_energy_kwh_t),
        "low_volts": low_volts,
        "high_volts": high_volts,
        "changed_ms": change.changed_ms,
        "changed_by": change.changed_by,
        "why": change.why,
    }


def _electrolyte_of(section: PlantSection) -> dict[str, float | None]:
    """What the section says of the way through its electrolyte; None where it does not."""
    gap_mm, at_c = section.electrode_gap_mm, section.conductivity_at_c
    accuracy_pct = section.conductivity_accuracy_pct
    return {
        "electrode_gap_m": None if gap_mm is None else metres_from_millimetres(gap_mm),
        "conductivity_s_m": section.conductivity_s_m,
        "conductivity_at_k": None if at_c is None else kelvin_from_degc(at_c),
        "conductivity_per_k": section.conductivity_per_c,
        "conductivity_per_metal_g_l": section.conductivity_per_metal_g_l,
        "conductivity_per_acid_g_l": section.conductivity_per_acid_g_l,
        "conductivity_accuracy": None if accuracy_pct is None else share_from_percent(accuracy_pct),
    }
