"""Changes of the plant from a date on, which leave the past as it was; and the plant as a file."""

import json
from collections.abc import Mapping
from typing import Any

from sqlalchemy.orm import Session

from server.intake.plant_faults import PlantFault, PlantFileWrong, checked
from server.intake.plant_file import (
    Change,
    add_cells,
    add_house_terms,
    found_section,
    terms_of,
)
from server.intake.plant_model import PlantSection, PlantShift, PlantTankhouse
from server.science.units import (
    degc_from_kelvin,
    ka_from_amps,
    kwh_t_from_j_kg,
    microohm_from_ohm,
    millimetres_from_metres,
    millivolts_from_volts,
    percent_from_share,
)
from server.storage.errors import Conflict
from server.storage.plant import House, SectionPlan, SectionTerms, house, tankhouse
from server.storage.plant_terms import (
    add_section_terms,
    drop_house_terms,
    drop_section_terms,
)
from server.storage.rebuild import record_span
from server.storage.stale import mark

FILE = "plant"
"""What stands before each fault of a change, where a file's name would stand."""

_TARGETS = ("current_efficiency_pct", "specific_energy_kwh_t", "cell_volts")
_FIXED = ("name", "process", "metal", "electrons")


def change_section(
    session: Session,
    section: str,
    changes: Mapping[str, object],
    from_ms: int,
    who: str,
    why: str,
    now_ms: int,
) -> None:
    """Let a section's terms be others from a moment on, until they change again.

    `changes` has the keys and units of a plant file, those of its targets beside the others.

    Raises
    ------
    PlantFileWrong
        With every key that is wrong or unknown.
    Conflict
        When no reason is given, or other terms took effect at that very moment.
    """
    plan = house(session).section(section)
    fields = section_fields(plan, from_ms)
    fixed = [
        PlantFault(key, str(changes[key]), f"{fields[key]}; another one is another section")
        for key in _FIXED
        if key in changes and changes[key] != fields[key]
    ]
    if fixed:
        raise PlantFileWrong(FILE, fixed)
    model = _section_model({**fields, **changes})
    change = _change(from_ms, now_ms, who, why)
    if any(terms.from_ms == from_ms for terms in plan.terms):
        _refuse_the_past(from_ms, now_ms)
        drop_section_terms(session, plan.id, from_ms)
    add_section_terms(session, plan.id, terms_of(model, change))
    add_cells(session, plan.id, len(plan.cell_ids), model.cells)
    session.flush()
    later = [terms.from_ms for terms in plan.terms if terms.from_ms > from_ms]
    _mark(session, plan, from_ms, min(later, default=None), ("charge", "readings", "lots"))


def add_section(
    session: Session,
    fields: Mapping[str, object],
    from_ms: int,
    who: str,
    why: str,
    now_ms: int,
) -> None:
    """Write a new section with its cells; its first terms hold from the start.

    Raises
    ------
    PlantFileWrong
        With every key that is wrong, missing or unknown.
    Conflict
        When no reason is given, or there is a section of that name.
    """
    model = _section_model(fields)
    names = {plan.name.casefold() for plan in house(session).sections}
    if model.name.casefold() in names:
        raise Conflict(f"there is a section {model.name} already")
    change = _change(from_ms, now_ms, who, why)
    found_section(session, model, Change(0, now_ms, change.changed_by, change.why))


def change_house(
    session: Session,
    changes: Mapping[str, object],
    from_ms: int,
    who: str,
    why: str,
    now_ms: int,
) -> None:
    """Let the price of energy, the table of potentials or the shifts be others from a moment on.

    `changes` has the keys of `[tankhouse]` and may have `shifts`, a list of tables of name and
    starts. The name and the currency change for all time; the time zone never does, since
    every local time on every sheet was read in it.

    Raises as `change_section` does.
    """
    plan = house(session)
    fields = house_fields(plan, from_ms)
    if changes.get("time_zone", plan.time_zone) != plan.time_zone:
        fault = PlantFault("time_zone", str(changes["time_zone"]), plan.time_zone)
        raise PlantFileWrong(FILE, [fault])
    wanted = {**fields, **changes}
    shifts = _shift_models(wanted.pop("shifts"))
    model = checked(PlantTankhouse, wanted, FILE)
    change = _change(from_ms, now_ms, who, why)
    row = tankhouse(session)
    row.name, row.currency = model.name, model.currency
    is_same_house = all(
        getattr(model, key) == fields[key]
        for key in ("energy_price_per_kwh", "standard_potentials")
    )
    starts = tuple(sorted((shift.starts_minute, shift.name) for shift in shifts))
    is_same_shifts = starts == plan.shifts_at(from_ms)
    session.flush()
    if is_same_house and is_same_shifts:
        return
    if any(terms.from_ms == from_ms for terms in plan.terms):
        _refuse_the_past(from_ms, now_ms)
        drop_house_terms(session, from_ms)
    add_house_terms(session, model, shifts, change)
    if not is_same_shifts:
        later = [terms.from_ms for terms in plan.terms if terms.from_ms > from_ms]
        for section in plan.sections:
            _mark(session, section, from_ms, min(later, default=None), ("readings",))


def section_fields(plan: SectionPlan, at_ms: int) -> dict[str, Any]:
    """A section's terms at a moment, in the keys and units of a plant file."""
    terms = plan.terms_at(at_ms)
    resistance_ohm, rectifier = terms.differential_resistance_ohm, terms.rectifier_efficiency
    is_other = plan.process == "other"
    return {
        "name": plan.name,
        "process": plan.process,
        "metal": plan.metal if is_other else None,
        "electrons": plan.electrons if is_other else None,
        "cells": terms.cells,
        "rows": terms.rows,
        "cathodes_per_cell": terms.cathodes_per_cell,
        "cathode_area_m2": terms.cathode_area_m2,
        "rated_current_ka": _plain(ka_from_amps(terms.rated_amps)),
        "metal_value_per_kg": terms.metal_value_per_kg,
        "differential_resistance_uohm": (
            None if resistance_ohm is None else _plain(microohm_from_ohm(resistance_ohm))
        ),
        "rectifier_efficiency_pct": (
            None if rectifier is None else _plain(percent_from_share(rectifier))
        ),
        "meter_accuracy_mv": _plain(millivolts_from_volts(terms.meter_accuracy_v)),
        "current_accuracy_pct": _plain(percent_from_share(terms.current_accuracy)),
        "scale_accuracy_pct": _plain(percent_from_share(terms.scale_accuracy)),
        "walk_order": terms.walk_order,
        "bus_volts": terms.bus_volts,
        **_electrolyte_fields(terms),
        "current_efficiency_pct": _plain(percent_from_share(terms.target_current_efficiency)),
        "specific_energy_kwh_t": _plain(kwh_t_from_j_kg(terms.target_specific_energy_j_kg)),
        "cell_volts": [terms.low_volts, terms.high_volts],
    }


def _electrolyte_fields(terms: SectionTerms) -> dict[str, float | None]:
    """What a section says of the way through its electrolyte, as in a plant file."""
    gap_m, at_k, accuracy = (
        terms.electrode_gap_m,
        terms.conductivity_at_k,
        terms.conductivity_accuracy,
    )
    return {
        "electrode_gap_mm": None if gap_m is None else _plain(millimetres_from_metres(gap_m)),
        "conductivity_s_m": terms.conductivity_s_m,
        "conductivity_at_c": None if at_k is None else _plain(degc_from_kelvin(at_k)),
        "conductivity_per_c": terms.conductivity_per_k,
        "conductivity_per_metal_g_l": terms.conductivity_per_metal_g_l,
        "conductivity_per_acid_g_l": terms.conductivity_per_acid_g_l,
        "conductivity_accuracy_pct": (
            None if accuracy is None else _plain(percent_from_share(accuracy))
        ),
    }


def house_fields(plan: House, at_ms: int) -> dict[str, Any]:
    """What holds for the house at a moment, in the keys and units of a plant file."""
    return {
        "name": plan.name,
        "time_zone": plan.time_zone,
        "currency": plan.currency,
        "energy_price_per_kwh": plan.terms_at(at_ms).energy_price_per_kwh,
        "standard_potentials": plan.terms_at(at_ms).standard_potentials,
        "shifts": [
            {"name": name, "starts": f"{minute // 60:02d}:{minute % 60:02d}"}
            for minute, name in plan.shifts_at(at_ms)
        ],
    }


def plant_toml(session: Session, at_ms: int) -> str:
    """The plant as it is at a moment, as a plant file."""
    plan = house(session)
    fields = house_fields(plan, at_ms)
    shifts = fields.pop("shifts")
    given_of_house = {key: value for key, value in fields.items() if value is not None}
    tables = [
        _table("[tankhouse]", given_of_house),
        *(_table("[[shift]]", shift) for shift in shifts),
    ]
    for section in plan.sections:
        of_section = section_fields(section, at_ms)
        targets = {key: of_section.pop(key) for key in _TARGETS}
        given = {key: value for key, value in of_section.items() if value not in (None, "")}
        tables.append(_table("[[section]]", given) + _table("[section.targets]", targets))
    return "\n".join(tables)


def _table(heading: str, fields: Mapping[str, Any]) -> str:
    # Names are printable, so that what JSON makes of them is what TOML reads.
    lines = [f"{key} = {json.dumps(value, ensure_ascii=False)}" for key, value in fields.items()]
    return "\n".join((heading, *lines, ""))


def _section_model(fields: Mapping[str, object]) -> PlantSection:
    content = {key: value for key, value in fields.items() if value is not None}
    targets = {key: content.pop(key) for key in _TARGETS if key in content}
    return checked(PlantSection, {**content, "targets": targets}, FILE)


def _shift_models(shifts: object) -> list[PlantShift]:
    if not isinstance(shifts, list) or not shifts:
        fault = PlantFault("shifts", str(shifts), "at least one shift with name and starts")
        raise PlantFileWrong(FILE, [fault])
    models = [checked(PlantShift, shift, FILE) for shift in shifts]
    for key, values in (
        ("shifts.starts", [model.starts_minute for model in models]),
        ("shifts.name", [model.name.casefold() for model in models]),
    ):
        if len(set(values)) < len(values):
            found = ", ".join(f"{model.name} {model.starts}" for model in models)
            raise PlantFileWrong(FILE, [PlantFault(key, found, "each of them once")])
    return models


def _change(from_ms: int, now_ms: int, who: str, why: str) -> Change:
    if not why.strip():
        raise Conflict("the plant is changed with a reason")
    return Change(from_ms, now_ms, who, why.strip())


def _refuse_the_past(from_ms: int, now_ms: int) -> None:
    if from_ms < now_ms:
        raise Conflict(
            "other terms took effect at that very moment, and what was then stays as it was;"
            " choose another moment"
        )


def _mark(
    session: Session, plan: SectionPlan, from_ms: int, to_ms: int | None, kinds: tuple[str, ...]
) -> None:
    """Mark what was recorded from a moment on, up to when the terms changed again."""
    for kind, (first_ms, last_ms) in record_span(session, plan).items():
        start_ms = max(first_ms, from_ms)
        end_ms = last_ms if to_ms is None else min(last_ms, to_ms)
        if kind in kinds and start_ms < end_ms:
            mark(session, plan.id, kind, start_ms, end_ms)


def _plain(value: float) -> float:
    """A number without the dust that a change of units leaves on it."""
    return float(f"{value:.12g}")
