"""The house today: each section's state with what is not as it should be, and the totals."""

from collections.abc import Sequence
from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.accounts.results import Account, SectionState
from server.accounts.standing import is_current_old, is_round_late
from server.accounts.state import section_states
from server.storage.plant import House
from server.storage.recorded import last_recorded_ms

_SURE = 2.0
"""Standard uncertainties by which a figure must miss its target before the page says so."""


@dataclass(frozen=True)
class SectionToday:
    """A section with what is off about it."""

    state: SectionState
    today_kg: float | None
    """Metal made since local midnight; None while no current is recorded."""
    week_kg: float | None
    """Metal made in the last seven days."""
    is_efficiency_low: bool
    """Under its target by more than the doubt about it."""
    is_energy_high: bool
    """Kilowatt-hours a tonne over their target by more than the doubt about them."""
    is_round_late: bool
    """The shift ends within the hour and cells are yet to be read."""
    is_current_old: bool
    """The last logged current is older than it is held for."""


@dataclass(frozen=True)
class Totals:
    """What adds up over the sections; None where one of them is unknown."""

    made_kg: tuple[tuple[str, float], ...]
    """Per metal symbol, of the sections that carried current."""
    dc_j: float | None
    cost: float | None


@dataclass(frozen=True)
class HouseToday:
    """All sections, and what adds up over them."""

    sections: tuple[SectionToday, ...]
    today: Totals
    """Since local midnight."""
    week: Totals
    """The last seven days."""
    last_recorded_ms: int | None
    """The newest record of the house; None while there is none."""

    @property
    def made_kg(self) -> list[tuple[str, float | None, float]]:
        """(metal symbol, made today, made in the last seven days); None: not running today."""
        today = dict(self.today.made_kg)
        return [(symbol, today.get(symbol), mass) for symbol, mass in self.week.made_kg]


def house_today(session: Session, house: House, now_ms: int, max_hold_ms: int) -> HouseToday:
    """Every section as it is now, what is off about it, and the totals of the house."""
    states = section_states(session, house, now_ms)
    recorded = (last_recorded_ms(session, section) for section in house.sections)
    return HouseToday(
        sections=tuple(_looked_at(state, now_ms, max_hold_ms) for state in states),
        today=totals([state.today for state in states]),
        week=totals([state.recent for state in states]),
        last_recorded_ms=max((moment for moment in recorded if moment is not None), default=None),
    )


def totals(accounts: Sequence[Account]) -> Totals:
    """Metal, energy and its cost over the accounts of several sections."""
    running = [account for account in accounts if account.charge.cell_c > 0]
    made: dict[str, float] = {}
    for account in running:
        made[account.metal] = made.get(account.metal, 0.0) + account.period.made_kg
    return Totals(
        made_kg=tuple(sorted(made.items())),
        dc_j=_sum([account.energy.dc_j for account in running]),
        cost=_sum([account.energy.cost for account in running]),
    )


def _sum(values: Sequence[float | None]) -> float | None:
    """A sum in which one unknown makes the whole unknown; no sum of nothing."""
    known = [value for value in values if value is not None]
    return sum(known) if known and len(known) == len(values) else None


def _looked_at(state: SectionState, now_ms: int, max_hold_ms: int) -> SectionToday:
    return SectionToday(
        state=state,
        today_kg=_made_kg(state.today),
        week_kg=_made_kg(state.recent),
        is_efficiency_low=is_efficiency_low(state.recent),
        is_energy_high=is_energy_high(state.recent),
        is_round_late=is_round_late(state.round, state.is_off, state.amps_at_ms, now_ms),
        is_current_old=is_current_old(state.amps_at_ms, state.is_off, now_ms, max_hold_ms),
    )


def _made_kg(account: Account) -> float | None:
    return account.period.made_kg if account.charge.cell_c > 0 else None


def is_efficiency_low(account: Account) -> bool:
    """Whether the efficiency of the lots is under its target beyond doubt."""
    crops = account.crops
    if crops.current_efficiency is None or crops.u_current_efficiency is None:
        return False
    highest = crops.current_efficiency + _SURE * crops.u_current_efficiency
    return highest < account.target_current_efficiency


def is_energy_high(account: Account) -> bool:
    """Whether the energy of each kilogram is over its target beyond doubt."""
    energy = account.energy
    if energy.specific_energy_j_kg is None or energy.u_specific_energy_j_kg is None:
        return False
    lowest = energy.specific_energy_j_kg - _SURE * energy.u_specific_energy_j_kg
    return lowest > account.target_specific_energy_j_kg
