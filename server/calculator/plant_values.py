"""The plant's own values of a section, each with where it is from."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
from sqlalchemy.orm import Session

from server.accounts.doubt import doubts_of, root_sum
from server.calculator.assays import newest_assays
from server.calculator.filled import Doubt, Filled, rounded
from server.calculator.sum import Basis, Need
from server.calculator.texts import N_, Day, Said, Word
from server.calculator.typical import (
    HOURS_PER_DAY,
    doubts_of_instruments,
    price_of,
    typical_values,
    usual_doubts,
    usual_ranges,
)
from server.science.faraday import current_efficiency, deposited_kg
from server.science.processes import process
from server.science.units import (
    hours_from_seconds,
    ka_from_amps,
    microohm_from_ohm,
    millimetres_from_metres,
    millivolts_from_volts,
    percent_from_share,
    seconds_from_hours,
)
from server.storage.latest import latest
from server.storage.lots import crops_of_lots, lot_figures, lots_with_ids
from server.storage.plant import House, SectionPlan, SectionTerms
from server.watch.deviations import deviations_now
from server.watch.resistance import relative_u_resistance, resistance_ohm

LOTS_DAYS = 30
_DAY_MS = 86_400_000
_STREAM_WORDS = {"spent": N_("spent"), "feed": N_("feed")}


def section_basis(
    session: Session, house: House, plan: SectionPlan, now_ms: int, needs: frozenset[Need]
) -> Basis:
    """A section of the house with its own values now.

    `needs` names what has to be looked up in the books; the set-up is always there.
    """
    kind = process(plan.process, plan.metal, plan.electrons)
    terms, of_house = plan.terms_at(now_ms), house.terms_at(now_ms)
    accuracy = Said(N_("accuracy in the set-up, a limit"))
    basis = Basis(
        process=kind,
        currency=house.currency,
        section=plan,
        terms=terms,
        table=of_house.standard_potentials,
        filled=typical_values(kind)
        | _set_up(plan, terms)
        | {"energy_price_per_kwh": price_of(of_house.energy_price_per_kwh)},
        doubts=usual_doubts(kind)
        | doubts_of_instruments(
            terms.current_accuracy, terms.scale_accuracy, terms.meter_accuracy_v, accuracy
        )
        | {"differential_resistance_uohm": _doubt_of_resistance(plan, terms)},
        usual=usual_ranges(kind) | {"volts": (terms.low_volts, terms.high_volts)},
    )
    for need in needs:
        filled, doubts = _FROM_THE_BOOKS[need](session, house, basis, now_ms)
        basis = replace(basis, filled={**basis.filled, **filled}, doubts={**basis.doubts, **doubts})
    return basis


_Found = tuple[dict[str, Filled], dict[str, Doubt]]


def _of(basis: Basis) -> tuple[SectionPlan, SectionTerms]:
    assert basis.section is not None
    assert basis.terms is not None
    return basis.section, basis.terms


def _set_up(plan: SectionPlan, terms: SectionTerms) -> dict[str, Filled]:
    """What the set-up says of a section."""
    efficiency_pct = rounded(float(percent_from_share(terms.target_current_efficiency)))
    of_resistance = (
        Said(N_("share of the voltage that follows the current in this process"))
        if terms.differential_resistance_ohm is None
        else Said(N_("differential resistance, set-up"))
    )
    found = {
        "current_ka": Filled(
            rounded(float(ka_from_amps(terms.rated_amps))), Said(N_("rated current, set-up"))
        ),
        "cells": Filled(float(terms.cells), Said(N_("cells of the section, set-up"))),
        "cathodes": Filled(float(terms.cathodes_per_cell), Said(N_("cathodes, set-up"))),
        "cathode_area_m2": Filled(terms.cathode_area_m2, Said(N_("area, set-up"))),
        "current_efficiency_pct": Filled(efficiency_pct, Said(N_("target, set-up"))),
        "metal_value_per_kg": Filled(terms.metal_value_per_kg, Said(N_("value, set-up"))),
        "volts": Filled(
            rounded((terms.low_volts + terms.high_volts) / 2),
            Said(N_("middle of the target voltages, set-up")),
        ),
        "differential_resistance_uohm": Filled(
            rounded(float(microohm_from_ohm(resistance_ohm(plan, terms))), 4), of_resistance
        ),
    }
    if terms.electrode_gap_m is not None:
        gap_mm = rounded(float(millimetres_from_metres(terms.electrode_gap_m)))
        found["gap_mm"] = Filled(gap_mm, Said(N_("gap, set-up")))
    if terms.rectifier_efficiency is not None:
        found["rectifier_efficiency_pct"] = Filled(
            rounded(float(percent_from_share(terms.rectifier_efficiency))),
            Said(N_("rectifier, set-up")),
        )
    return found


def _doubt_of_resistance(plan: SectionPlan, terms: SectionTerms) -> Doubt:
    origin = (
        Said(N_("half the usual band of the process"))
        if terms.differential_resistance_ohm is None
        else Said(N_("common practice"))
    )
    return Doubt(origin, share=relative_u_resistance(plan, terms))


def _efficiency(session: Session, house: House, basis: Basis, now_ms: int) -> _Found:
    """The current efficiency of the lots pulled lately."""
    plan, terms = _of(basis)
    rows = lot_figures(session, plan.id, now_ms - LOTS_DAYS * _DAY_MS, now_ms + 1)
    metal_kg, charge_c = sum(row[2] for row in rows), sum(row[4] for row in rows)
    if metal_kg <= 0 or charge_c <= 0:
        return {}, {}
    share = float(current_efficiency(metal_kg, charge_c, basis.metal))
    doubts = doubts_of(terms)
    origin = Said(N_("lots of the last %(days)s days"), {"days": LOTS_DAYS})
    return (
        {"current_efficiency_pct": Filled(rounded(percent_from_share(share), 4), origin)},
        {
            "current_efficiency_pct": Doubt(
                Said(N_("scale and current of those lots")),
                share=root_sum(doubts.scale, doubts.current),
            )
        },
    )


def _lot(session: Session, house: House, basis: Basis, now_ms: int) -> _Found:
    """The last lot: its weight, and the charge of its own cathodes as a mean current."""
    plan, terms = _of(basis)
    rows = lot_figures(session, plan.id, now_ms - LOTS_DAYS * _DAY_MS, now_ms + 1)
    if not rows:
        return {}, {}
    lot_id, pulled_ms, metal_kg, net_kg, charge_c, _, cathodes = rows[-1]
    crops = crops_of_lots(session, [lot_id])
    started_ms = int(crops["started_ms"].min()) if len(crops) else 0
    lots = lots_with_ids(session, [lot_id])
    hours = float(hours_from_seconds((pulled_ms - started_ms) / 1000))
    if not lots or started_ms <= 0 or hours <= 0 or charge_c <= 0:
        return {}, {}
    origin = Said(N_("lot %(lot)s, pulled %(day)s"), {"lot": lots[0].name, "day": Day(pulled_ms)})
    cells = cathodes / terms.cathodes_per_cell
    hours, cells = rounded(hours), rounded(cells)
    mean_a = charge_c / (cells * float(seconds_from_hours(hours)))
    return {
        "net_kg": Filled(rounded(net_kg), origin),
        "starter_kg": Filled(rounded(net_kg - metal_kg), origin),
        "hours": Filled(hours, origin),
        "cells": Filled(cells, origin),
        "current_ka": Filled(rounded(float(ka_from_amps(mean_a))), origin),
        "target_kg": Filled(rounded(net_kg / cathodes, 3), origin),
    }, {}


def _target(session: Session, house: House, basis: Basis, now_ms: int) -> _Found:
    """What a cathode of the last lot weighed, else what one weighs after the usual growth."""
    filled, _ = _lot(session, house, basis, now_ms)
    if "target_kg" in filled:
        return {"target_kg": filled["target_kg"]}, {}
    _, terms = _of(basis)
    grown_s = float(seconds_from_hours(basis.process.crop_days * HOURS_PER_DAY))
    made_kg = float(deposited_kg(terms.rated_amps * grown_s, basis.metal))
    each_kg = made_kg * terms.target_current_efficiency / terms.cathodes_per_cell
    return {"target_kg": Filled(rounded(each_kg, 3), Said(N_("usual growth of a crop")))}, {}


def _volts(session: Session, house: House, basis: Basis, now_ms: int) -> _Found:
    """The middle of the cells' newest readings, where they are of the last day."""
    plan, terms = _of(basis)
    newest = latest(session, plan.cell_ids[: terms.cells])
    volts = [read_v for at_ms, read_v in newest.values() if now_ms - _DAY_MS < at_ms <= now_ms]
    if not volts:
        return {}, {}
    middle_v = rounded(float(np.median(volts)), 4)
    return {"volts": Filled(middle_v, Said(N_("median of the cells' newest readings")))}, {}


def _deviation(session: Session, house: House, basis: Basis, now_ms: int) -> _Found:
    """The cell that stands lowest now, and how far cells of the section usually scatter."""
    plan, terms = _of(basis)
    found = deviations_now(session, house, plan.name, now_ms)
    if not found:
        return {}, {"deviation_mv": _doubt_of_meter(terms)}
    lowest = min(found, key=lambda cell: cell.deviation_v)
    origin = Said(
        N_("cell %(cell)s against the median, read %(day)s"),
        {"cell": lowest.cell, "day": Day(lowest.read_ms)},
    )
    noise_mv = float(millivolts_from_volts(lowest.noise_v))
    return (
        {
            "deviation_mv": Filled(
                rounded(float(millivolts_from_volts(lowest.deviation_v)), 4), origin
            )
        },
        {"deviation_mv": Doubt(Said(N_("usual scatter of the section's cells")), always=noise_mv)},
    )


def _doubt_of_meter(terms: SectionTerms) -> Doubt:
    meter_mv = float(millivolts_from_volts(doubts_of(terms).meter_v))
    return Doubt(Said(N_("accuracy in the set-up, a limit")), always=meter_mv)


def _assay(session: Session, house: House, basis: Basis, now_ms: int) -> _Found:
    """The newest assay of the electrolyte."""
    plan, _ = _of(basis)
    names = ("metal_g_l", "acid_g_l", "temperature_degc")
    return {
        name: Filled(
            rounded(assay.value),
            Said(
                N_("%(stream)s, assay of %(day)s"),
                {"stream": Word(_STREAM_WORDS[assay.stream]), "day": Day(assay.at_ms)},
            ),
        )
        for name, assay in newest_assays(session, plan.id, now_ms, names).items()
    }, {}


_FROM_THE_BOOKS: dict[Need, Callable[[Session, House, Basis, int], _Found]] = {
    "efficiency": _efficiency,
    "lot": _lot,
    "target": _target,
    "volts": _volts,
    "deviation": _deviation,
    "assay": _assay,
}
