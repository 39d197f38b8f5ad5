"""One maker per table: each fills whatever the test does not care about, and commits.

Makers of records write what was recorded and nothing that is derived from it; `keep_books` works
out the rest, as the program does after a delivery.
"""

import itertools
import json
from collections.abc import Sequence
from typing import Any

import numpy as np
from sqlalchemy.orm import Session

from server.jobs import catch_up
from server.settings import Settings
from server.storage import readings, samples
from server.storage.deliveries import Delivery, HeldRow, Suspicion
from server.storage.flag_acts import FlagAct
from server.storage.flags import Flag
from server.storage.people import Person, Token
from server.storage.plant import (
    FROM_THE_START_MS,
    Cell,
    HouseTerms,
    Section,
    SectionPlan,
    SectionTerms,
    Shift,
    Tankhouse,
    has_plant,
    house,
)
from server.storage.rebuild import record_span
from server.storage.records import ElectrolyteSample, Find, Lot, Outage
from server.storage.stale import mark

HOUR_MS = 3_600_000
DAY_MS = 24 * HOUR_MS

NOW_MS = 1_709_640_000_000
"""2024-03-05T12:00Z, a Tuesday."""

KEY = "a key that signs the cookies of tests alone"

_numbers = itertools.count(1)


def make_house(session: Session, **given: Any) -> Tankhouse:
    """A tankhouse that works three shifts; `energy_price_per_kwh` may be given too."""
    price = given.pop("energy_price_per_kwh", 0.09)
    tankhouse = Tankhouse(
        **{
            "name": "North House",
            "time_zone": "UTC",
            "currency": "USD",
            "signing_key": KEY,
            "made_ms": FROM_THE_START_MS,
        }
        | given
    )
    terms = HouseTerms(
        from_ms=FROM_THE_START_MS,
        energy_price_per_kwh=price,
        changed_ms=FROM_THE_START_MS,
        changed_by="test",
        why="",
    )
    session.add_all([tankhouse, terms])
    session.flush()
    session.add_all(
        Shift(from_ms=FROM_THE_START_MS, starts_minute=60 * hour, name=name)
        for hour, name in ((0, "night"), (8, "day"), (16, "evening"))
    )
    session.commit()
    return tankhouse


def make_section(session: Session, **given: Any) -> SectionPlan:
    """A section of ten cells of copper electrowinning at 36 kA, in a house if there is none yet.

    Takes what the section and its terms hold: name, process, cells, rated_amps and so on.
    """
    if not has_plant(session):
        make_house(session)
    of_section = {
        "name": f"EW{next(_numbers)}",
        "process": "copper electrowinning",
        "metal": "Cu",
        "electrons": 2,
    }
    section = Section(**{name: given.pop(name, value) for name, value in of_section.items()})
    session.add(section)
    session.flush()
    terms = make_terms(session, section.id, **given)
    session.add_all(Cell(section_id=section.id, number=n + 1) for n in range(terms.cells))
    session.commit()
    return house(session).section(section.name)


def make_terms(session: Session, section_id: int, **given: Any) -> SectionTerms:
    """What holds for a section from `from_ms` on; without it, from the start."""
    terms = SectionTerms(
        **{
            "section_id": section_id,
            "from_ms": FROM_THE_START_MS,
            "cells": 10,
            "rows": 2,
            "cathodes_per_cell": 60,
            "cathode_area_m2": 2.0,
            "rated_amps": 36_000.0,
            "metal_value_per_kg": 9.2,
            "differential_resistance_ohm": 11e-6,
            "rectifier_efficiency": 0.97,
            "meter_accuracy_v": 0.002,
            "current_accuracy": 0.005,
            "scale_accuracy": 0.002,
            "walk_order": "",
            "bus_volts": None,
            "target_current_efficiency": 0.93,
            "target_specific_energy_j_kg": 1950 * 3600.0,
            "low_volts": 1.85,
            "high_volts": 2.15,
            "changed_ms": FROM_THE_START_MS,
            "changed_by": "test",
            "why": "",
        }
        | given
    )
    session.add(terms)
    session.commit()
    return terms


def make_delivery(session: Session, **given: Any) -> Delivery:
    """A delivery that brought records."""
    delivery = Delivery(
        **{"sheet": "volts", "source": "form", "sender": "test", "received_ms": NOW_MS} | given
    )
    session.add(delivery)
    session.commit()
    return delivery


def make_readings(
    session: Session,
    cell_id: int,
    at_ms: Sequence[int],
    volts: Sequence[float],
    *,
    suspect: int = 0,
    revision: int = 0,
    delivery: Delivery | None = None,
) -> None:
    """Voltages of one cell."""
    count = len(at_ms)
    readings.store(
        session,
        np.full(count, cell_id),
        np.asarray(at_ms, np.int64),
        np.full(count, revision),
        np.rint(np.asarray(volts) * 1e6).astype(np.int64),
        np.full(count, suspect),
        (delivery or make_delivery(session)).id,
    )
    session.commit()


def make_current(
    session: Session,
    section_id: int,
    at_ms: Sequence[int],
    amps: Sequence[float],
    *,
    revision: int = 0,
    delivery: Delivery | None = None,
) -> None:
    """Samples of a section's current."""
    rows = [(section_id, at, revision, a) for at, a in zip(at_ms, amps, strict=True)]
    number = (delivery or make_delivery(session, sheet="current")).id
    samples.add_samples(session, "current_sample", rows, number)
    session.commit()


def make_counter(
    session: Session,
    section_id: int,
    at_ms: Sequence[int],
    counter_c: Sequence[float],
    *,
    revision: int = 0,
    delivery: Delivery | None = None,
) -> None:
    """What a section's ampere-hour counter showed, C."""
    rows = [(section_id, at, revision, c) for at, c in zip(at_ms, counter_c, strict=True)]
    number = (delivery or make_delivery(session, sheet="counter")).id
    samples.add_samples(session, "counter_sample", rows, number)
    session.commit()


def make_lot(session: Session, section_id: int, **given: Any) -> Lot:
    """A lot of one cell, pulled now after a week and weighed two hours later."""
    pulled_ms = given.get("pulled_ms", NOW_MS)
    return _recorded(
        session,
        Lot,
        "lots",
        {
            "section_id": section_id,
            "name": f"L{next(_numbers)}",
            "cells": "1",
            "pulled_ms": pulled_ms,
            "weighed_ms": pulled_ms + 2 * HOUR_MS,
            "started_ms": pulled_ms - 7 * DAY_MS,
            "cathodes_per_cell": 60,
            "net_kg": 6669.0,
            "starter_kg": 0.0,
        }
        | given,
    )


def make_outage(session: Session, section_id: int, **given: Any) -> Outage:
    """The whole section off for the hour before now."""
    return _recorded(
        session,
        Outage,
        "outages",
        {
            "section_id": section_id,
            "cells": "",
            "from_ms": NOW_MS - HOUR_MS,
            "to_ms": NOW_MS,
            "state": "off",
        }
        | given,
    )


def make_assay(session: Session, section_id: int, **given: Any) -> ElectrolyteSample:
    """An assay of the feed of copper electrowinning."""
    return _recorded(
        session,
        ElectrolyteSample,
        "electrolyte",
        {
            "section_id": section_id,
            "stream": "feed",
            "at_ms": NOW_MS,
            "metal_g_l": 45.0,
            "acid_g_l": 180.0,
            "temperature_degc": 45.0,
        }
        | given,
    )


def make_find(session: Session, section_id: int, cell_id: int, **given: Any) -> Find:
    """A short found on the first cathode of a cell."""
    return _recorded(
        session,
        Find,
        "finds",
        {
            "section_id": section_id,
            "cell_id": cell_id,
            "at_ms": NOW_MS,
            "cathode": 1,
            "found": "short",
            "action": "nodule knocked off",
        }
        | given,
    )


def make_held_row(session: Session, **given: Any) -> HeldRow:
    """A row of volts that was held because its voltage is no number."""
    if "delivery_id" not in given:
        given["delivery_id"] = make_delivery(session).id
    fields = {"at": "2024-03-05T06:00", "section": "EW1", "cell": "1", "volts": "2,o31"}
    row = HeldRow(
        **{
            "sheet": "volts",
            "line": 2,
            "column": "volts",
            "found": "2,o31",
            "expected": "a number in V",
            "reason": "volts is not a number",
            "fields": json.dumps(fields),
            "raw": ",".join(fields.values()),
        }
        | given
    )
    session.add(row)
    session.commit()
    return row


def make_suspicion(session: Session, section_id: int, cell_id: int, **given: Any) -> Suspicion:
    """A doubt about a stored reading: a slipped unit."""
    if "delivery_id" not in given:
        given["delivery_id"] = make_delivery(session).id
    row = Suspicion(
        **{
            "line": 2,
            "section_id": section_id,
            "cell_id": cell_id,
            "at_ms": NOW_MS,
            "revision": 0,
            "code": "unit",
            "reason": "a thousand times the cell's usual voltage",
            "found": "2031",
            "expected": "about 2.03 V",
            "suggested": "2.031",
        }
        | given
    )
    session.add(row)
    session.commit()
    return row


def make_flag(session: Session, section_id: int, cell_id: int, **given: Any) -> Flag:
    """An open flag: the cell drifts high."""
    raised_ms = given.get("raised_ms", NOW_MS - DAY_MS)
    flag = Flag(
        **{
            "cell_id": cell_id,
            "kind": "drift high",
            "raised_ms": raised_ms,
            "section_id": section_id,
            "tier": "look",
            "raised_by_ms": raised_ms,
            "volts": 2.19,
            "expected_volts": 2.03,
            "deviation_v": 0.16,
            "evidence": "2.190 V, above the section's limit of 2.150 V.",
        }
        | given
    )
    session.add(flag)
    session.commit()
    return flag


def make_flag_act(session: Session, flag: Flag, act: str, **given: Any) -> FlagAct:
    """Somebody did something about a flag, an hour after it was raised."""
    row = FlagAct(
        **{
            "cell_id": flag.cell_id,
            "kind": flag.kind,
            "raised_ms": flag.raised_ms,
            "at_ms": flag.raised_ms + HOUR_MS,
            "who": "tomas",
            "act": act,
            "reason": "",
        }
        | given
    )
    session.add(row)
    session.commit()
    return row


def make_person(session: Session, **given: Any) -> Person:
    """Someone who may do everything; the password hash fits no password."""
    person = Person(
        **{
            "name": f"person {next(_numbers)}",
            "role": "superintendent",
            "password_hash": "",
            "session_epoch": 0,
            "made_ms": NOW_MS,
            "made_by": "test",
        }
        | given
    )
    session.add(person)
    session.commit()
    return person


def make_token(session: Session, token_hash: str, **given: Any) -> Token:
    """A program's key; the hash is of the token that the test will send."""
    token = Token(
        **{
            "name": f"program {next(_numbers)}",
            "role": "superintendent",
            "token_hash": token_hash,
            "made_ms": NOW_MS,
            "made_by": "test",
        }
        | given
    )
    session.add(token)
    session.commit()
    return token


def keep_books(session: Session) -> None:
    """Work out everything that is derived from the records made so far, and commit."""
    for section in house(session).sections:
        for kind, (from_ms, to_ms) in record_span(session, section).items():
            mark(session, section.id, kind, from_ms, to_ms)
    assert catch_up(session, Settings()) == 0
    session.commit()


def _recorded(session: Session, table: Any, sheet: str, values: dict[str, Any]) -> Any:
    if "delivery_id" not in values:
        values["delivery_id"] = make_delivery(session, sheet=sheet).id
    row = table(**{"revision": 0, "is_void": 0} | values)
    session.add(row)
    session.commit()
    return row
