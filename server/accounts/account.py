"""The whole account of one section over one period, and of the house."""

import math

from sqlalchemy.orm import Session

from server.accounts.charge import PeriodCharge, period_charge
from server.accounts.energy import energy_account
from server.accounts.errors import WrongPeriod
from server.accounts.ledger import ledger, waterfall
from server.accounts.metal import crop_account, made_account
from server.accounts.results import Account, Charge, Crops, Energy, HouseAccount, Made
from server.accounts.short_charge import shorts_account
from server.accounts.stock import StockBook
from server.accounts.working import workings
from server.science.constants import Metal
from server.science.faraday import equivalent_kg_c
from server.science.processes import process
from server.storage.plant import House, SectionPlan

_MUCH_ESTIMATED = 0.02
_LITTLE_READ = 0.9


def metal_of(section: SectionPlan) -> Metal:
    """The metal that a section makes, with the electrons its process takes."""
    return process(section.process, section.metal, section.electrons).metal


def section_account(
    session: Session,
    house: House,
    section_name: str,
    from_ms: int,
    to_ms: int,
    book: StockBook | None = None,
) -> Account:
    """The books of one section over [from_ms, to_ms).

    A book of its stock over that time may be given, where it is at hand.
    """
    if to_ms <= from_ms:
        raise WrongPeriod(from_ms, to_ms)
    section = house.section(section_name)
    metal = metal_of(section)
    passed = period_charge(session, section, from_ms, to_ms)
    crops = crop_account(session, section, metal, from_ms, to_ms)
    stock = [
        (book or StockBook(session, section, metal, at_ms, at_ms)).at(at_ms)
        for at_ms in (from_ms, to_ms)
    ]
    made = made_account(section, metal, passed, crops.weighed_kg, *stock)
    energy = energy_account(session, house, section, passed, made, from_ms, to_ms)
    shorts = shorts_account(session, section, from_ms, to_ms)
    charge = Charge(
        section_c=passed.section_c,
        cell_c=passed.cells_c,
        estimated_share=passed.estimated_share,
        recorded_to_ms=passed.recorded_to_ms,
    )
    terms = section.terms_at(to_ms - 1)
    return Account(
        section=section.name,
        from_ms=from_ms,
        to_ms=to_ms,
        process=section.process,
        metal=section.metal,
        electrons=section.electrons,
        kg_per_c=float(equivalent_kg_c(metal)),
        charge=charge,
        crops=crops,
        period=made,
        energy=energy,
        ledger=ledger(passed.cells_c, made, metal, shorts),
        waterfall=waterfall(energy, made, metal),
        working=workings(charge, crops, made, energy, metal, terms, shorts),
        remarks=tuple(_remarks(passed, crops, made, energy)),
        target_current_efficiency=terms.target_current_efficiency,
        target_specific_energy_j_kg=terms.target_specific_energy_j_kg,
    )


def _remarks(passed: PeriodCharge, crops: Crops, made: Made, energy: Energy) -> list[str]:
    """What the reader must know about these figures."""
    remarks = []
    if passed.cells_c <= 0:
        return ["No current is recorded for this time."]
    if passed.recorded_to_ms is not None:
        remarks.append(
            "The record of current ends before this time does; what came after is not counted."
        )
    if passed.estimated_share > _MUCH_ESTIMATED:
        remarks.append(
            f"{passed.estimated_share * 100:.1f} % of the charge is estimated over gaps in the"
            " current log."
        )
    if energy.dc_j is None:
        remarks.append("No cell voltages are at hand for this time: the energy is unknown.")
    elif energy.read_share < _LITTLE_READ:
        remarks.append(
            f"Voltages cover {energy.read_share * 100:.0f} % of the charge; the rest is given the"
            " median of the cells that were read."
        )
    for basis, efficiency, u_efficiency in (
        ("crops", crops.current_efficiency, crops.u_current_efficiency),
        ("period", made.current_efficiency, made.u_current_efficiency),
    ):
        if efficiency is None or u_efficiency is None:
            continue
        if efficiency - 2 * u_efficiency > 1:
            remarks.append(
                f"The efficiency of the {basis} is above 100 % beyond doubt: a weight, a"
                " count of cathodes or the ammeter is wrong."
            )
    if (
        crops.current_efficiency is not None
        and crops.u_current_efficiency is not None
        and made.current_efficiency is not None
        and made.u_current_efficiency is not None
    ):
        apart = abs(crops.current_efficiency - made.current_efficiency)
        doubt = math.hypot(crops.u_current_efficiency, made.u_current_efficiency)
        if apart > 2 * doubt:
            remarks.append(
                f"The two bases of current efficiency differ by {apart * 100:.1f} points, more"
                " than their uncertainties allow."
            )
    return remarks


def house_account(session: Session, house: House, from_ms: int, to_ms: int) -> HouseAccount:
    """The whole house over [from_ms, to_ms): sections, and what adds up over them."""
    accounts = tuple(
        section_account(session, house, section.name, from_ms, to_ms) for section in house.sections
    )
    made: dict[str, float] = {}
    for account in accounts:
        made[account.metal] = made.get(account.metal, 0.0) + account.period.made_kg
    return HouseAccount(
        from_ms=from_ms,
        to_ms=to_ms,
        sections=accounts,
        dc_j=_sum([a.energy.dc_j for a in accounts]),
        ac_j=_sum([a.energy.ac_j for a in accounts]),
        cost=_sum([a.energy.cost for a in accounts]),
        made_kg=tuple(sorted(made.items())),
    )


def _sum(values: list[float | None]) -> float | None:
    """A sum in which one unknown makes the whole unknown."""
    total = 0.0
    for value in values:
        if value is None:
            return None
        total += value
    return total
