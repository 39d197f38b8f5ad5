"""What really happened in a made-up section, and what an exact account of it would say.

The current is constant within a minute, everything else about a cell within a quarter of an hour.
Charge, metal and energy of any interval are therefore sums without error of integration: the
integrals of the current and of its square within each quarter, times what the cell was in it.
"""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.demo.recipe import MINUTE_MS, STEP_MS
from server.demo.running_totals import CellTotals, CurrentTotals
from server.science.arrays import Moments, Numbers
from server.science.constants import FARADAY_C_MOL, Metal
from server.science.errors import OutOfRange


@dataclass(frozen=True)
class Span:
    """A stretch of time, half-open."""

    from_ms: int
    to_ms: int


@dataclass(frozen=True)
class CutTruth:
    """A stretch in which the set-point was lowered by a share of itself."""

    from_ms: int
    to_ms: int
    share: float


@dataclass(frozen=True)
class LotTruth:
    """Cathodes pulled together: their true metal, and what the scale said of them."""

    lot: str
    cells: tuple[int, ...]
    cathodes: int
    started_at_ms: int
    pulled_at_ms: int
    weighed_at_ms: int
    metal_kg: float
    starter_kg: float
    net_kg: float


@dataclass(frozen=True)
class ShortTruth:
    """A short: when it began, when and how it ended, and what it took in the end."""

    cell: int
    from_ms: int
    to_ms: int | None
    ended_by: str
    growth_h: float
    final_share: float
    final_amps: float


@dataclass(frozen=True)
class ContactTruth:
    """A contact that corroded, and when it was cleaned, if it was."""

    cell: int
    from_ms: int
    to_ms: int | None
    ohm_per_day: float


@dataclass(frozen=True)
class BypassTruth:
    """A cell out of the circuit, without an end while it still is."""

    cell: int
    from_ms: int
    to_ms: int | None


@dataclass(frozen=True)
class ScaleFault:
    """From when on the scale reads wrong, and by which share of the weight."""

    from_ms: int
    share: float


@dataclass(frozen=True)
class SlipTruth:
    """A slip of the pen: what was meant and what was written, cell by cell."""

    kind: str
    at_ms: int
    cells: tuple[int, ...]
    meant_volts: tuple[float, ...]
    written_volts: tuple[float, ...]


@dataclass(frozen=True)
class Events:
    """Everything that befell a section, in order of time."""

    outages: tuple[Span, ...]
    trips: tuple[Span, ...]
    cuts: tuple[CutTruth, ...]
    gaps: tuple[Span, ...]
    shorts: tuple[ShortTruth, ...]
    contacts: tuple[ContactTruth, ...]
    bypasses: tuple[BypassTruth, ...]
    scale_faults: tuple[ScaleFault, ...]


@dataclass(frozen=True)
class SectionTruth:
    """The true course of one section: its current by the minute, its cells by the quarter hour.

    A cell's voltage is `emf_volts + resistance_ohm × amps`; both carry the quarter of an hour in
    their first axis and the cell in the second. `short_share` is the part of the cell's current
    that passes through shorts, `cell_yield × section_yield` the metal that the rest makes, as a
    share of Faraday's. `hung_step` says in which quarter the cathodes then hanging were hung.
    """

    name: str
    metal: Metal
    start_ms: int
    end_ms: int
    amps: Numbers
    emf_volts: Numbers
    resistance_ohm: Numbers
    short_share: Numbers
    in_service: NDArray[np.bool_]
    cell_yield: Numbers
    section_yield: Numbers
    temperature_degc: Numbers
    hung_step: NDArray[np.int64]
    events: Events
    lots: tuple[LotTruth, ...] = ()
    slips: tuple[SlipTruth, ...] = ()

    @property
    def cells(self) -> int:
        """How many cells the section has."""
        return self.cell_yield.size

    @property
    def kg_per_c(self) -> float:
        """Metal that one coulomb makes when nothing is lost."""
        return self.metal.molar_mass_kg_mol / (self.metal.electrons * FARADAY_C_MOL)

    def section_charge_c(self, from_ms: int, to_ms: int) -> float:
        """Charge that the rectifier gave."""
        self._check(from_ms, to_ms)
        return self._current.until(to_ms)[0] - self._current.until(from_ms)[0]

    def cell_charge_c(self, from_ms: int, to_ms: int) -> Numbers:
        """Charge through each cell while it was in service."""
        return self._between(self._charge, from_ms, to_ms)

    def short_charge_c(self, from_ms: int, to_ms: int) -> Numbers:
        """Charge of each cell that went through its shorts."""
        return self._between(self._shorted, from_ms, to_ms)

    def made_kg(self, from_ms: int, to_ms: int) -> Numbers:
        """Metal deposited in each cell."""
        return self._between(self._metal, from_ms, to_ms)

    def dc_energy_j(self, from_ms: int, to_ms: int) -> Numbers:
        """Energy that each cell took while it was in service."""
        return self._between(self._energy, from_ms, to_ms)

    def stock_kg(self, at_ms: int) -> Numbers:
        """Metal hanging in each cell; cathodes pulled at this very moment still count."""
        self._check(self.start_ms, at_ms)
        if at_ms == self.start_ms:
            return np.zeros(self.cells)
        hung = self.hung_step[(at_ms - 1 - self.start_ms) // STEP_MS]
        return self._metal.until(at_ms) - self._metal.at_steps(hung)

    def amps_at(self, at_ms: ArrayLike) -> Numbers:
        """Section current at given moments."""
        moments = np.asarray(at_ms, dtype=np.int64)
        amps: Numbers = self.amps[(moments - self.start_ms) // MINUTE_MS]
        return amps

    def volts_at(self, at_ms: ArrayLike, cell: ArrayLike) -> Numbers:
        """Voltage across cells, numbered from 1, at given moments; meaningless without current."""
        where = self._where(at_ms, cell)
        volts: Numbers = self.emf_volts[where] + self.resistance_ohm[where] * self.amps_at(at_ms)
        return volts

    def short_amps_at(self, at_ms: ArrayLike, cell: ArrayLike) -> Numbers:
        """Current through the shorts of cells at given moments."""
        amps: Numbers = self.short_share[self._where(at_ms, cell)] * self.amps_at(at_ms)
        return amps

    def in_service_at(self, at_ms: ArrayLike, cell: ArrayLike) -> NDArray[np.bool_]:
        """Whether cells were in the circuit at given moments."""
        in_service: NDArray[np.bool_] = self.in_service[self._where(at_ms, cell)]
        return in_service

    def _where(self, at_ms: ArrayLike, cell: ArrayLike) -> tuple[Moments, Moments]:
        steps = (np.asarray(at_ms, dtype=np.int64) - self.start_ms) // STEP_MS
        return steps, np.asarray(cell, dtype=np.int64) - 1

    def _check(self, from_ms: int, to_ms: int) -> None:
        for name, at_ms in (("from_ms", from_ms), ("to_ms", to_ms)):
            if not self.start_ms <= at_ms <= self.end_ms:
                raise OutOfRange(name, at_ms, f"{self.start_ms} to {self.end_ms}")

    def _between(self, totals: CellTotals, from_ms: int, to_ms: int) -> Numbers:
        self._check(from_ms, to_ms)
        return totals.until(to_ms) - totals.until(from_ms)

    @cached_property
    def _current(self) -> CurrentTotals:
        return CurrentTotals(self.amps, self.start_ms)

    @cached_property
    def _charge(self) -> CellTotals:
        return CellTotals(self._current, self.in_service.astype(np.float64))

    @cached_property
    def _shorted(self) -> CellTotals:
        return CellTotals(self._current, self.in_service * self.short_share)

    @cached_property
    def _metal(self) -> CellTotals:
        per_c = self.kg_per_c * np.multiply.outer(self.section_yield, self.cell_yield)
        return CellTotals(self._current, per_c * self.in_service * (1.0 - self.short_share))

    @cached_property
    def _energy(self) -> CellTotals:
        emf, resistance = self.in_service * self.emf_volts, self.in_service * self.resistance_ohm
        return CellTotals(self._current, emf, resistance)


@dataclass(frozen=True)
class AccountTruth:
    """An exact account of a section from `from_ms` up to `to_ms`, in SI units and shares.

    Efficiencies are true metal over Faraday's; NaN where no charge passed. `weighed_kg` is what the
    scale said of the same lots, less their starter sheets.
    """

    section: str
    from_ms: int
    to_ms: int
    section_charge_c: float
    cell_charge_c: float
    short_charge_c: float
    lots: int
    weighed_kg: float
    harvested_kg: float
    crops_theoretical_kg: float
    crops_current_efficiency: float
    period_theoretical_kg: float
    stock_start_kg: float
    stock_end_kg: float
    made_kg: float
    period_current_efficiency: float
    dc_energy_j: float
    mean_cell_volts: float
    specific_energy_j_kg: float


def account(section: SectionTruth, from_ms: int, to_ms: int) -> AccountTruth:
    """What a perfect account of this section would say: lots pulled, metal made, energy taken."""
    pulled = [lot for lot in section.lots if from_ms <= lot.pulled_at_ms < to_ms]
    cell_charge_c = float(section.cell_charge_c(from_ms, to_ms).sum())
    theoretical_kg = section.kg_per_c * cell_charge_c
    crops_theoretical_kg = section.kg_per_c * sum(lot_charge_c(section, lot) for lot in pulled)
    harvested_kg = sum(lot.metal_kg for lot in pulled)
    made_kg = float(section.made_kg(from_ms, to_ms).sum())
    dc_energy_j = float(section.dc_energy_j(from_ms, to_ms).sum())
    return AccountTruth(
        section=section.name,
        from_ms=from_ms,
        to_ms=to_ms,
        section_charge_c=section.section_charge_c(from_ms, to_ms),
        cell_charge_c=cell_charge_c,
        short_charge_c=float(section.short_charge_c(from_ms, to_ms).sum()),
        lots=len(pulled),
        weighed_kg=sum(lot.net_kg - lot.starter_kg for lot in pulled),
        harvested_kg=harvested_kg,
        crops_theoretical_kg=crops_theoretical_kg,
        crops_current_efficiency=_share(harvested_kg, crops_theoretical_kg),
        period_theoretical_kg=theoretical_kg,
        stock_start_kg=float(section.stock_kg(from_ms).sum()),
        stock_end_kg=float(section.stock_kg(to_ms).sum()),
        made_kg=made_kg,
        period_current_efficiency=_share(made_kg, theoretical_kg),
        dc_energy_j=dc_energy_j,
        mean_cell_volts=_share(dc_energy_j, cell_charge_c),
        specific_energy_j_kg=_share(dc_energy_j, made_kg),
    )


def lot_charge_c(section: SectionTruth, lot: LotTruth) -> float:
    """Charge that the lot's own cathodes received while they grew."""
    cells = np.array(lot.cells) - 1
    return float(section.cell_charge_c(lot.started_at_ms, lot.pulled_at_ms)[cells].sum())


def _share(part: float, whole: float) -> float:
    return part / whole if whole else float("nan")
