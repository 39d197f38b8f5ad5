"""Accounts from SI to the units that the API's fields name."""

from collections.abc import Callable

from server.accounts.results import Account, HouseAccount, LedgerItem, Working
from server.science.units import (
    kah_from_coulombs,
    kg_kah_from_kg_c,
    kwh_from_joules,
    kwh_t_from_j_kg,
    percent_from_share,
)
from server.web.api.schemas_account import (
    AccountAnswer,
    ChargeAnswer,
    CropsAnswer,
    EnergyAnswer,
    HouseAccountAnswer,
    InputAnswer,
    LedgerAnswer,
    MadeOfMetal,
    PeriodAnswer,
    TargetsAnswer,
    WaterfallAnswer,
    WorkingAnswer,
)


def known(value: float | None, conversion: Callable[[float], float]) -> float | None:
    """A value in another unit; None where it is not known."""
    return None if value is None else float(conversion(value))


def house_account_answer(account: HouseAccount) -> HouseAccountAnswer:
    """The account of the house as the API answers it."""
    return HouseAccountAnswer(
        from_ms=account.from_ms,
        to_ms=account.to_ms,
        dc_kwh=known(account.dc_j, kwh_from_joules),
        ac_kwh=known(account.ac_j, kwh_from_joules),
        cost=account.cost,
        made=[MadeOfMetal(metal=metal, made_kg=kg) for metal, kg in account.made_kg],
        sections=[account_answer(section) for section in account.sections],
    )


def account_answer(account: Account) -> AccountAnswer:
    """The account of a section as the API answers it."""
    return AccountAnswer(
        section=account.section,
        from_ms=account.from_ms,
        to_ms=account.to_ms,
        process=account.process,
        metal=account.metal,
        electrons=account.electrons,
        kg_per_kah=float(kg_kah_from_kg_c(account.kg_per_c)),
        charge=_charge(account),
        crops=_crops(account),
        period=_period(account),
        energy=_energy(account),
        ledger=[_ledger(item) for item in account.ledger],
        waterfall=[
            WaterfallAnswer(item=item.item, kwh_t=float(kwh_t_from_j_kg(item.j_kg)))
            for item in account.waterfall
        ],
        working=[_working(working) for working in account.working],
        remarks=list(account.remarks),
        targets=TargetsAnswer(
            current_efficiency_pct=float(percent_from_share(account.target_current_efficiency)),
            specific_energy_kwh_t=float(kwh_t_from_j_kg(account.target_specific_energy_j_kg)),
        ),
    )


def _charge(account: Account) -> ChargeAnswer:
    charge = account.charge
    return ChargeAnswer(
        section_kah=float(kah_from_coulombs(charge.section_c)),
        cell_kah=float(kah_from_coulombs(charge.cell_c)),
        estimated_share_pct=float(percent_from_share(charge.estimated_share)),
        recorded_to=charge.recorded_to_ms,
    )


def _crops(account: Account) -> CropsAnswer:
    crops = account.crops
    return CropsAnswer(
        lots=crops.lots,
        weighed_kg=crops.weighed_kg,
        theoretical_kg=crops.theoretical_kg,
        current_efficiency_pct=known(crops.current_efficiency, percent_from_share),
        u_current_efficiency_pct=known(crops.u_current_efficiency, percent_from_share),
        estimated_share_pct=float(percent_from_share(crops.estimated_share)),
    )


def _period(account: Account) -> PeriodAnswer:
    period = account.period
    return PeriodAnswer(
        theoretical_kg=period.theoretical_kg,
        harvested_kg=period.harvested_kg,
        stock_start_kg=period.stock_start_kg,
        stock_end_kg=period.stock_end_kg,
        u_stock_end_kg=period.u_stock_end_kg,
        made_kg=period.made_kg,
        u_made_kg=period.u_made_kg,
        current_efficiency_pct=known(period.current_efficiency, percent_from_share),
        u_current_efficiency_pct=known(period.u_current_efficiency, percent_from_share),
    )


def _energy(account: Account) -> EnergyAnswer:
    energy = account.energy
    return EnergyAnswer(
        dc_kwh=known(energy.dc_j, kwh_from_joules),
        u_dc_kwh=known(energy.u_dc_j, kwh_from_joules),
        ac_kwh=known(energy.ac_j, kwh_from_joules),
        mean_cell_volts=energy.mean_cell_volts,
        specific_energy_kwh_t=known(energy.specific_energy_j_kg, kwh_t_from_j_kg),
        u_specific_energy_kwh_t=known(energy.u_specific_energy_j_kg, kwh_t_from_j_kg),
        cost=energy.cost,
        read_share_pct=float(percent_from_share(energy.read_share)),
    )


def _ledger(item: LedgerItem) -> LedgerAnswer:
    return LedgerAnswer(
        item=item.item,
        kah=float(kah_from_coulombs(item.charge_c)),
        share_pct=known(item.share, percent_from_share),
        u_share_pct=known(item.u_share, percent_from_share),
        basis=item.basis,
    )


def _working(working: Working) -> WorkingAnswer:
    return WorkingAnswer(
        figure=working.figure,
        formula=working.formula,
        inputs=[
            InputAnswer(name=i.name, value=i.value, unit=i.unit, source=i.source)
            for i in working.inputs
        ],
        value=working.value,
        unit=working.unit,
    )
