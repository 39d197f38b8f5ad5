"""What was recorded wrongly: corrected or withdrawn, with the former value, who, when and why."""

from collections.abc import Mapping, Sequence

import numpy as np
from sqlalchemy.orm import Session

from server.intake.keys import record_key
from server.intake.lots import mark_lots
from server.intake.outages import mark_outages, refresh_bypasses
from server.intake.sitting import IntakeSettings
from server.intake.stretches import mark_moments
from server.science.units import microvolts_from_volts
from server.storage import readings
from server.storage.deliveries import Delivery
from server.storage.delivery_rows import add_delivery, delivery_with_id, keep_counts
from server.storage.errors import Conflict, NotFound
from server.storage.held_rows import drop_held_of
from server.storage.plant import House, SectionPlan
from server.storage.records import ElectrolyteSample, Find, Lot, Outage
from server.storage.revisions import (
    Key,
    Record,
    Revision,
    add_revisions,
    brought_by,
    revisions,
)
from server.storage.samples import SampleTable, add_samples, sample_revisions
from server.storage.suspicions import decide_suspicions, withdraw_suspicions_of
from server.storage.turns import take_turn
from server.storage.withdrawals import take_back_readings, take_back_samples

RECORDS: dict[str, Record] = {
    "lots": Lot,
    "outages": Outage,
    "electrolyte": ElectrolyteSample,
    "finds": Find,
}
SAMPLES: dict[str, SampleTable] = {"current": "current_sample", "counter": "counter_sample"}


def correct_reading(
    session: Session,
    house: House,
    section: str,
    cell: int,
    at_ms: int,
    volts: float,
    who: str,
    why: str,
    now_ms: int,
) -> None:
    """Put another voltage in the place of a stored one; the former is kept.

    Raises
    ------
    NotFound
        When nothing is stored there.
    Conflict
        When no reason is given, or this voltage is stored already.
    """
    microvolts = microvolts_from_volts(volts)
    replace_reading(session, house, section, cell, at_ms, microvolts, "corrected", who, why, now_ms)


def withdraw_reading(
    session: Session,
    house: House,
    section: str,
    cell: int,
    at_ms: int,
    who: str,
    why: str,
    now_ms: int,
) -> None:
    """Leave a stored reading out for good; what was entered is kept.

    Raises as `correct_reading` does.
    """
    replace_reading(session, house, section, cell, at_ms, None, "withdrawn", who, why, now_ms)


def replace_reading(
    session: Session,
    house: House,
    section: str,
    cell: int,
    at_ms: int,
    microvolts: int | None,
    state: str,
    who: str,
    why: str,
    now_ms: int,
) -> None:
    """Write the next revision of a reading, believed, and close what doubts there are of it."""
    take_turn(session)
    plan = house.section(section)
    cell_id = plan.cell_id(cell)
    known = readings.history(session, cell_id, at_ms)
    if not known:
        raise NotFound("reading", f"of cell {cell} of {section} at that time")
    revision, stored, suspect, _ = known[-1]
    if stored == microvolts and not suspect:
        raise Conflict("the books say so already")
    delivery_id = _new_delivery(session, "volts", state, who, why, now_ms, count=1)
    if microvolts is None:
        readings.withdraw(session, cell_id, at_ms, revision + 1, delivery_id)
    else:
        one = np.array([[cell_id], [at_ms], [revision + 1], [microvolts], [0]])
        readings.store(session, one[0], one[1], one[2], one[3], one[4], delivery_id)
    decide_suspicions(session, [(cell_id, at_ms)], state, who, why.strip(), now_ms)
    mark_moments(session, plan.id, "readings", [at_ms])


def withdraw_record(
    session: Session,
    house: House,
    kind: str,
    fields: Mapping[str, str],
    who: str,
    why: str,
    now_ms: int,
    settings: IntakeSettings,
) -> None:
    """Leave one record out for good; `fields` are the columns that tell which one is meant.

    Raises
    ------
    NotFound
        When there is no such record.
    Conflict
        When no reason is given, the fields do not tell which is meant, or it is withdrawn.
    """
    latest_ms = now_ms + settings.future_tolerance_s * 1000
    plan, key = record_key(house, kind, fields, latest_ms)
    if kind == "volts":
        cell = plan.number_of(key[0])
        withdraw_reading(session, house, plan.name, cell, key[1], who, why, now_ms)
        return
    take_turn(session)
    delivery_id = _new_delivery(session, kind, "withdrawn", who, why, now_ms, count=1)
    if kind in SAMPLES:
        _withdraw_sample(session, plan, SAMPLES[kind], key[1], delivery_id)
        return
    history = revisions(session, RECORDS[kind], [key]).get(key)
    if not history:
        raise NotFound("record of this sheet", ", ".join(fields.values()))
    last = history[-1]
    if last.is_void:
        raise Conflict("this record is withdrawn already")
    void = Revision(last.revision + 1, True, last.values, delivery_id)
    add_revisions(session, RECORDS[kind], [(key, void)])
    _follow(session, house, kind, {key: [*history, void]}, now_ms)


def _withdraw_sample(
    session: Session, plan: SectionPlan, table: SampleTable, at_ms: int, delivery_id: int
) -> None:
    history = sample_revisions(session, table, plan.id, at_ms, at_ms + 1).get(at_ms)
    if not history:
        raise NotFound("sample", f"of {plan.name} at that time")
    if history[-1].value is None:
        raise Conflict("this sample is withdrawn already")
    revision = history[-1].revision + 1
    add_samples(session, table, [(plan.id, at_ms, revision, None)], delivery_id)
    mark_moments(session, plan.id, "charge", [at_ms])


def withdraw_delivery(
    session: Session, house: House, delivery_id: int, who: str, why: str, now_ms: int
) -> int:
    """Take back everything that a delivery brought and nothing has replaced since.

    What the delivery corrected returns to the value before it; what it brought first is
    withdrawn. Rows that it holds are dropped. Answers how many records were taken back.

    Raises
    ------
    NotFound
        When there is no such delivery.
    Conflict
        When no reason is given, or nothing of it counts any more.
    """
    take_turn(session)
    delivery = delivery_with_id(session, delivery_id)
    kind = delivery.sheet
    by_id = _new_delivery(session, kind, f"withdrawal of {delivery.source}", who, why, now_ms)
    if kind == "volts":
        count = _take_back_readings(session, house, delivery_id, by_id)
    elif kind in SAMPLES:
        count = _take_back_samples(session, SAMPLES[kind], delivery_id, by_id)
    else:
        count = _take_back_records(session, house, kind, delivery_id, by_id, now_ms)
    if not count:
        raise Conflict("nothing of this delivery counts any more")
    keep_counts(session, by_id, {"rows": count, "stored": count})
    withdraw_suspicions_of(session, delivery_id, who, why.strip(), now_ms)
    drop_held_of(session, delivery_id, who, why.strip(), now_ms)
    return count


def _take_back_readings(session: Session, house: House, delivery_id: int, by_id: int) -> int:
    taken = take_back_readings(session, delivery_id, by_id)
    for plan in house.sections:
        moments = taken.moments_of(plan.cell_ids)
        if len(moments):
            mark_moments(session, plan.id, "readings", moments)
    return len(taken.at_ms)


def _take_back_samples(session: Session, table: SampleTable, delivery_id: int, by_id: int) -> int:
    taken = take_back_samples(session, table, delivery_id, by_id)
    for section_id in set(taken.owner_id.tolist()):
        mark_moments(session, section_id, "charge", taken.moments_of([section_id]))
    return len(taken.at_ms)


def _take_back_records(
    session: Session, house: House, kind: str, delivery_id: int, by_id: int, now_ms: int
) -> int:
    record = RECORDS[kind]
    changed: dict[Key, list[Revision]] = {}
    histories = revisions(session, record, brought_by(session, record, delivery_id))
    for key, history in histories.items():
        last = history[-1]
        if last.delivery_id != delivery_id or last.is_void:
            continue
        former = [revision for revision in history if revision.delivery_id != delivery_id]
        back = former[-1] if former else Revision(0, True, last.values, delivery_id)
        restored = Revision(last.revision + 1, back.is_void, back.values, by_id)
        changed[key] = [*history, restored]
    add_revisions(session, record, [(key, history[-1]) for key, history in changed.items()])
    _follow(session, house, kind, changed, now_ms)
    return len(changed)


def _follow(
    session: Session,
    house: House,
    kind: str,
    changed: Mapping[Key, Sequence[Revision]],
    now_ms: int,
) -> None:
    """Mark what depends on records whose every revision is given."""
    if kind == "lots":
        for (section_id, _), history in changed.items():
            mark_lots(session, section_id, history)
    elif kind == "outages":
        for (section_id, _, from_ms), history in changed.items():
            mark_outages(session, section_id, from_ms, history, now_ms)
        for section_id in {key[0] for key in changed}:
            refresh_bypasses(session, house.section_of_id(section_id))


def _new_delivery(
    session: Session, sheet: str, source: str, who: str, why: str, now_ms: int, count: int = 0
) -> int:
    if not why.strip():
        raise Conflict("what is in the books is changed with a reason")
    return add_delivery(
        session,
        Delivery(
            sheet=sheet,
            source=source,
            sender=who,
            received_ms=now_ms,
            reason=why.strip(),
            rows=count,
            stored=count,
        ),
    )
