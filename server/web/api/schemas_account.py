"""The account as the API answers it: the contract's names, in the units that stand in them."""

from pydantic import ConfigDict, Field

from server.web.api.schemas import Answer
from server.web.api.times import Moment


class ChargeAnswer(Answer):
    """Charge of the period."""

    section_kah: float
    cell_kah: float
    """Summed over the cells in service."""
    estimated_share_pct: float
    """Part of it that was filled over gaps of the record."""
    recorded_to: Moment | None
    """Where the record of current ends, if that is before the period does."""


class CropsAnswer(Answer):
    """Lots pulled in the period, each against the charge that its own cathodes received."""

    lots: int
    weighed_kg: float
    """Metal: net less starter sheets."""
    theoretical_kg: float
    current_efficiency_pct: float | None
    u_current_efficiency_pct: float | None
    estimated_share_pct: float


class PeriodAnswer(Answer):
    """Harvested and change of stock, against the charge of the period."""

    theoretical_kg: float
    harvested_kg: float
    stock_start_kg: float
    stock_end_kg: float
    u_stock_end_kg: float
    made_kg: float
    u_made_kg: float
    current_efficiency_pct: float | None
    u_current_efficiency_pct: float | None


class EnergyAnswer(Answer):
    """What the cells took."""

    dc_kwh: float | None
    u_dc_kwh: float | None
    ac_kwh: float | None
    mean_cell_volts: float | None
    specific_energy_kwh_t: float | None
    u_specific_energy_kwh_t: float | None
    cost: float | None
    """In the tankhouse's currency."""
    read_share_pct: float
    """Part of the cells' charge whose voltage was read."""


class LedgerAnswer(Answer):
    """Where a part of the ampere-hours went."""

    item: str
    kah: float
    share_pct: float | None
    u_share_pct: float | None
    basis: str


class WaterfallAnswer(Answer):
    """Where a part of the energy of each tonne went."""

    item: str
    kwh_t: float


class InputAnswer(Answer):
    """One number that a figure was worked out of."""

    name: str
    value: float | None
    unit: str
    source: str


class WorkingAnswer(Answer):
    """How a figure was worked out."""

    figure: str
    formula: str
    inputs: list[InputAnswer]
    value: float | None
    unit: str


class TargetsAnswer(Answer):
    """What the section is meant to reach."""

    current_efficiency_pct: float
    specific_energy_kwh_t: float


class AccountAnswer(Answer):
    """The books of one section over one period; every `u_` is a standard uncertainty."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "section": "A",
                "from": "2026-02-01T03:00:00Z",
                "to": "2026-03-01T03:00:00Z",
                "process": "copper electrowinning",
                "metal": "Cu",
                "electrons": 2,
                "kg_per_kah": 1.1855,
                "charge": {
                    "section_kah": 19152.0,
                    "cell_kah": 1149120.0,
                    "estimated_share_pct": 0.2,
                    "recorded_to": None,
                },
                "crops": {
                    "lots": 96,
                    "weighed_kg": 1238400.0,
                    "theoretical_kg": 1341600.0,
                    "current_efficiency_pct": 92.31,
                    "u_current_efficiency_pct": 0.35,
                    "estimated_share_pct": 0.2,
                },
                "period": {
                    "theoretical_kg": 1362300.0,
                    "harvested_kg": 1238400.0,
                    "stock_start_kg": 301000.0,
                    "stock_end_kg": 320100.0,
                    "u_stock_end_kg": 2100.0,
                    "made_kg": 1257500.0,
                    "u_made_kg": 4900.0,
                    "current_efficiency_pct": 92.31,
                    "u_current_efficiency_pct": 0.42,
                },
                "energy": {
                    "dc_kwh": 2332700.0,
                    "u_dc_kwh": 2400.0,
                    "ac_kwh": 2430000.0,
                    "mean_cell_volts": 2.03,
                    "specific_energy_kwh_t": 1855.0,
                    "u_specific_energy_kwh_t": 8.0,
                    "cost": 145800.0,
                    "read_share_pct": 99.4,
                },
                "ledger": [
                    {
                        "item": "metal",
                        "kah": 1060700.0,
                        "share_pct": 92.31,
                        "u_share_pct": 0.42,
                        "basis": "made_kg / kg_per_kah",
                    },
                    {
                        "item": "shorts",
                        "kah": 14930.0,
                        "share_pct": 1.3,
                        "u_share_pct": 0.15,
                        "basis": "expected by the watch, from readings for 98 % of the charge",
                    },
                    {
                        "item": "not explained",
                        "kah": 73490.0,
                        "share_pct": 6.39,
                        "u_share_pct": 0.45,
                        "basis": "the rest",
                    },
                ],
                "waterfall": [
                    {"item": "measured voltage", "kwh_t": 1712.4},
                    {"item": "current lost", "kwh_t": 142.6},
                ],
                "working": [
                    {
                        "figure": "crops.current_efficiency_pct",
                        "formula": "weighed_kg / theoretical_kg",
                        "inputs": [
                            {
                                "name": "weighed_kg",
                                "value": 1238400.0,
                                "unit": "kg",
                                "source": "96 lots",
                            }
                        ],
                        "value": 92.31,
                        "unit": "%",
                    }
                ],
                "remarks": [],
                "targets": {"current_efficiency_pct": 92.0, "specific_energy_kwh_t": 1900.0},
            }
        }
    )

    section: str
    from_ms: Moment = Field(alias="from")
    to_ms: Moment = Field(alias="to")
    """The period: from ≤ t < to."""
    process: str
    metal: str
    electrons: int
    kg_per_kah: float
    charge: ChargeAnswer
    crops: CropsAnswer
    period: PeriodAnswer
    energy: EnergyAnswer
    ledger: list[LedgerAnswer]
    """Shares add up to 100 % of cell_kah."""
    waterfall: list[WaterfallAnswer]
    working: list[WorkingAnswer]
    """How each figure above was worked out, as the page shows it."""
    remarks: list[str]
    """What a reader of the figures must know."""
    targets: TargetsAnswer


class MadeOfMetal(Answer):
    """How much of one metal was made."""

    metal: str
    made_kg: float


class HouseAccountAnswer(Answer):
    """The whole tankhouse over one period: its sections, and what may be added up over them."""

    from_ms: Moment = Field(alias="from")
    to_ms: Moment = Field(alias="to")
    dc_kwh: float | None
    ac_kwh: float | None
    cost: float | None
    made: list[MadeOfMetal]
    sections: list[AccountAnswer]
