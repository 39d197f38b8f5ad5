"""The plant as the API answers it: sections, cells and what was weighed; and what files brought."""

from typing import Literal

from pydantic import ConfigDict, Field

from server.web.api.schemas import Answer
from server.web.api.times import Moment


class SectionTargets(Answer):
    """What the section is meant to reach."""

    current_efficiency_pct: float
    specific_energy_kwh_t: float
    cell_volts: tuple[float, float]
    """Lowest and highest voltage of a cell that is as it should be."""


class SectionAnswer(Answer):
    """A section as it is set up now; names and units as in plant.toml."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "section": "A",
                "process": "copper electrowinning",
                "metal": "Cu",
                "electrons": 2,
                "cells": 60,
                "rows": 2,
                "cathodes_per_cell": 60,
                "cathode_area_m2": 2.2,
                "rated_current_ka": 28.5,
                "metal_value_per_kg": 8.5,
                "differential_resistance_uohm": None,
                "rectifier_efficiency_pct": 96.0,
                "meter_accuracy_mv": 2.0,
                "current_accuracy_pct": 0.5,
                "scale_accuracy_pct": 0.2,
                "walk_order": "snake",
                "bus_volts": None,
                "electrode_gap_mm": 42.0,
                "conductivity_s_m": 58.0,
                "conductivity_at_c": 45.0,
                "conductivity_per_c": 0.4,
                "conductivity_per_metal_g_l": None,
                "conductivity_per_acid_g_l": None,
                "conductivity_accuracy_pct": 5.0,
                "targets": {
                    "current_efficiency_pct": 92.0,
                    "specific_energy_kwh_t": 1900.0,
                    "cell_volts": [1.95, 2.15],
                },
                "since": "2026-01-01T03:00:00Z",
            }
        }
    )

    section: str
    process: str
    metal: str
    electrons: int
    cells: int
    rows: int
    cathodes_per_cell: int
    cathode_area_m2: float
    rated_current_ka: float
    metal_value_per_kg: float
    differential_resistance_uohm: float | None
    rectifier_efficiency_pct: float | None
    meter_accuracy_mv: float
    current_accuracy_pct: float
    scale_accuracy_pct: float
    walk_order: str
    bus_volts: float | None
    electrode_gap_mm: float | None
    conductivity_s_m: float | None
    conductivity_at_c: float | None
    conductivity_per_c: float | None
    conductivity_per_metal_g_l: float | None
    conductivity_per_acid_g_l: float | None
    conductivity_accuracy_pct: float | None
    targets: SectionTargets
    since: Moment | None
    """From when these terms hold; null: from the start."""


class Plant(Answer):
    """The tankhouse and its sections."""

    tankhouse: str
    time_zone: str
    currency: str
    energy_price_per_kwh: float
    standard_potentials: str | None
    """Key of the table of standard potentials that the house chose; null: the program's own."""
    sections: list[SectionAnswer]


class CellAnswer(Answer):
    """One cell as it is now."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "section": "A",
                "cell": 7,
                "state": "in service",
                "volts": 1.87,
                "read_at": "2026-03-01T02:10:00Z",
                "deposit_started_at": "2026-02-26T14:00:00Z",
                "deposit_kg": 1510.0,
                "last_efficiency_pct": 91.8,
                "flag_kind": "drift low",
                "flag_tier": "act",
                "flag_raised_at": "2026-03-01T02:10:00Z",
                "evidence": "1.870 V, below the 1.95 V that the section's cells should show.",
            }
        }
    )

    section: str
    cell: int
    state: str
    """in service, bypassed or off."""
    volts: float | None
    read_at: Moment | None
    deposit_started_at: Moment | None
    deposit_kg: float | None
    last_efficiency_pct: float | None
    flag_kind: str | None
    flag_tier: str | None
    flag_raised_at: Moment | None
    evidence: str | None


class Cells(Answer):
    """The cells of a section, by number."""

    at: Moment
    cells: list[CellAnswer]


class LotAnswer(Answer):
    """One lot with its own efficiency."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "lot": "L-2026-0301-A1",
                "cells": "1-12;15",
                "weighed_at": "2026-03-01T15:20:00Z",
                "started_at": "2026-02-22T13:00:00Z",
                "pulled_at": "2026-03-01T13:00:00Z",
                "cathodes": 260,
                "net_kg": 17_180.0,
                "starter_kg": 0.0,
                "metal_kg": 17_180.0,
                "theoretical_kg": 18_610.0,
                "current_efficiency_pct": 92.32,
                "u_current_efficiency_pct": 0.35,
                "thickness_mm": 3.36,
                "is_impossible": False,
            }
        }
    )

    lot: str
    cells: str
    """Cell numbers in short, such as 1-12;15."""
    weighed_at: Moment
    started_at: Moment
    pulled_at: Moment
    cathodes: int
    net_kg: float
    starter_kg: float
    metal_kg: float
    theoretical_kg: float
    current_efficiency_pct: float | None
    u_current_efficiency_pct: float | None
    thickness_mm: float | None
    is_impossible: bool
    """More metal than its charge could have made, beyond twice the stated uncertainty."""


class Lots(Answer):
    """Lots pulled in the period, the newest first."""

    section: str
    from_ms: Moment = Field(alias="from")
    to_ms: Moment = Field(alias="to")
    lots: list[LotAnswer]


class SheetTaken(Answer):
    """What one sheet of a file brought."""

    delivery: int
    sheet: str
    worksheet: str | None
    dialect: str
    """How it was read, as a sentence."""
    rows: int
    stored: int
    duplicates: int
    held: int
    suspect: int
    unknown_columns: list[str]


class FileTaken(Answer):
    """What one file brought."""

    name: str
    sheets: list[SheetTaken]
    notes: list[str]


class HeldInPreview(Answer):
    """A row that would be held."""

    line: int
    column: str | None
    found: str
    expected: str
    reason: str
    raw: str


class SuspectInPreview(Answer):
    """A reading that would not be believed."""

    line: int
    section: str
    cell: int
    at: Moment
    found: str
    expected: str
    suggested: str | None
    reason: str


class SheetPreviewed(Answer):
    """What one sheet of a file would bring."""

    sheet: str
    worksheet: str | None
    dialect: str
    rows: int
    new: int
    duplicates: int
    held: int
    suspect: int
    first_at: Moment | None
    last_at: Moment | None
    first_held: list[HeldInPreview]
    first_suspect: list[SuspectInPreview]
    unknown_columns: list[str]


class FilePreviewed(Answer):
    """What one file would bring."""

    name: str
    sheets: list[SheetPreviewed]
    notes: list[str]


class Imports(Answer):
    """What the files brought, or would bring."""

    is_preview: bool
    files: list[FileTaken | FilePreviewed]


class Withdrawal(Answer):
    """Which delivery is withdrawn, and how much it held."""

    delivery: int
    withdrawn: int
    """How many records were withdrawn."""
    status: Literal["withdrawn"] = "withdrawn"
