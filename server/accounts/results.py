"""What an account answers: frozen results in SI units, shares from 0 to 1, None for unknown."""

from dataclasses import dataclass


@dataclass(frozen=True)
class Charge:
    """Charge of the period."""

    section_c: float
    cell_c: float
    """Summed over the cells in service."""
    estimated_share: float
    recorded_to_ms: int | None
    """Where the record of current ends, if that is before the period does."""


@dataclass(frozen=True)
class Crops:
    """Lots pulled in the period, each against the charge its own cathodes received."""

    lots: int
    weighed_kg: float
    """Metal: net less starter sheets."""
    theoretical_kg: float
    current_efficiency: float | None
    u_current_efficiency: float | None
    estimated_share: float


@dataclass(frozen=True)
class Made:
    """Harvested and change of stock, against the charge of the period."""

    theoretical_kg: float
    harvested_kg: float
    stock_start_kg: float
    stock_end_kg: float
    u_stock_end_kg: float
    made_kg: float
    u_made_kg: float
    current_efficiency: float | None
    u_current_efficiency: float | None


@dataclass(frozen=True)
class Energy:
    """What the cells took."""

    dc_j: float | None
    u_dc_j: float | None
    ac_j: float | None
    """None where the section names no rectifier efficiency."""
    mean_cell_volts: float | None
    specific_energy_j_kg: float | None
    u_specific_energy_j_kg: float | None
    cost: float | None
    """In the house's currency; of the AC energy where it is known, else of the DC energy."""
    read_share: float
    """Part of the cells' charge whose voltage was read, 0 to 1."""


@dataclass(frozen=True)
class Shorts:
    """What the watch expects to have passed through shorts, flagged or not."""

    charge_c: float
    u_charge_c: float
    watched_c: float
    """The cells' charge for which a round speaks."""
    relative_u_resistance: float
    """Of the resistance by which a missing voltage becomes a current; common to all cells."""


@dataclass(frozen=True)
class LedgerItem:
    """Where a part of the ampere-hours went."""

    item: str
    charge_c: float
    share: float | None
    u_share: float | None
    basis: str


@dataclass(frozen=True)
class WaterfallItem:
    """Where a part of the energy of each kilogram went."""

    item: str
    j_kg: float


@dataclass(frozen=True)
class Input:
    """One number that a figure was worked out of, and where it came from."""

    name: str
    value: float | None
    unit: str
    source: str


@dataclass(frozen=True)
class Working:
    """How a figure was worked out."""

    figure: str
    formula: str
    inputs: tuple[Input, ...]
    value: float | None
    unit: str


@dataclass(frozen=True)
class Account:
    """The books of one section over one period, [from_ms, to_ms)."""

    section: str
    from_ms: int
    to_ms: int
    process: str
    metal: str
    electrons: int
    kg_per_c: float
    charge: Charge
    crops: Crops
    period: Made
    energy: Energy
    ledger: tuple[LedgerItem, ...]
    waterfall: tuple[WaterfallItem, ...]
    working: tuple[Working, ...]
    remarks: tuple[str, ...]
    """Sentences on what the reader must know: estimated charge, bases that disagree, ..."""
    target_current_efficiency: float
    target_specific_energy_j_kg: float


@dataclass(frozen=True)
class HouseAccount:
    """The whole house over one period: its sections, and what may be added up over them."""

    from_ms: int
    to_ms: int
    sections: tuple[Account, ...]
    dc_j: float | None
    ac_j: float | None
    cost: float | None
    made_kg: tuple[tuple[str, float], ...]
    """Per metal symbol."""


@dataclass(frozen=True)
class CropResult:
    """One cell's crop: its lot, its growth and what became of its charge."""

    cell: int
    lot: str
    started_ms: int
    pulled_ms: int
    cathodes: int
    charge_c: float
    metal_kg: float
    current_efficiency: float | None
    thickness_m: float | None
    is_shared: bool


@dataclass(frozen=True)
class LotResult:
    """One lot with its own efficiency."""

    lot: str
    cells: str
    weighed_ms: int
    started_ms: int
    pulled_ms: int
    cathodes: int
    net_kg: float
    starter_kg: float
    metal_kg: float
    theoretical_kg: float
    current_efficiency: float | None
    u_current_efficiency: float | None
    thickness_m: float | None
    is_impossible: bool
    """More metal than its charge could have made, beyond twice the stated uncertainty."""


@dataclass(frozen=True)
class DayFigures:
    """A section's figures of one local day, for trends; arrays would be built of these."""

    from_ms: int
    to_ms: int
    mean_amps: float | None
    cell_charge_c: float
    estimated_share: float
    dc_j: float | None
    mean_cell_volts: float | None
    pulled_kg: float
    crop_current_efficiency: float | None
    """Of the lots pulled that day; None where none was."""
    specific_energy_j_kg: float | None
    """Mean voltage of the day over the efficiency of its lots."""


@dataclass(frozen=True)
class CellState:
    """One cell as it is now."""

    number: int
    volts: float | None
    read_ms: int | None
    state: str
    """in service, bypassed or off."""
    deposit_started_ms: int | None
    deposit_kg: float | None
    last_efficiency: float | None
    flag_kind: str | None
    flag_tier: str | None
    flag_raised_ms: int | None
    evidence: str | None


@dataclass(frozen=True)
class RoundState:
    """How far the shift's round has come in a section."""

    shift: str
    from_ms: int
    to_ms: int
    cells_read: int
    cells_in_service: int
    last_read_ms: int | None


@dataclass(frozen=True)
class SectionState:
    """One section as it is now, for the page of the day."""

    name: str
    process: str
    metal: str
    amps: float | None
    amps_at_ms: int | None
    rated_amps: float
    is_off: bool
    cells_in_service: int
    cells: int
    round: RoundState
    recent: Account
    """The last seven days."""
    today: Account
    """Since local midnight."""
    open_flags: int
    acting_flags: int
