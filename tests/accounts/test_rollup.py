"""Derived figures are the same to the last bit, however their records arrived."""

import itertools
from dataclasses import dataclass

import numpy as np
import pytest
from sqlalchemy.orm import Session

from server.accounts import rollup
from server.jobs import catch_up, recompute
from server.settings import Settings
from server.storage.current import keep_bypasses
from server.storage.database import Database
from server.storage.direct import fetch_rows
from server.storage.plant import SectionPlan, house
from server.storage.stale import mark, pending
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    make_counter,
    make_current,
    make_delivery,
    make_house,
    make_lot,
    make_outage,
    make_readings,
    make_section,
)

START_MS = 1_709_251_200_000
DAYS = 12
DERIVED = (
    "charge_day",
    "charge_knot",
    "energy_day",
    "summary",
    "latest_reading",
    "crop",
    "flag",
    "short_day",
)


@dataclass(frozen=True)
class Record:
    """One record that may arrive at any time: its kind, its moment and what it says."""

    kind: str
    at_ms: int
    values: tuple[object, ...]


def made_up_records(seed: int) -> list[Record]:
    """Twelve days of four cells, in the order of time."""
    rng = np.random.default_rng(seed)
    records = []
    for hour in range(0, DAYS * 24, 3):
        at_ms = START_MS + hour * HOUR_MS
        if hour % 98 in (39, 42, 45):
            continue
        amps = 36_000.0 * (0.7 if hour % 24 > 19 else 1.0) + float(rng.normal(0, 100))
        records.append(Record("current", at_ms, (amps,)))
    for day, cell in itertools.product(range(DAYS), range(4)):
        for shift in (3, 16):
            volts = 2.0 + 0.02 * cell + float(rng.normal(0, 0.008))
            if cell == 2 and 5 <= day < 9:
                volts -= 0.22
            suspect = 1 if rng.random() < 0.05 else 0
            at_ms = START_MS + day * DAY_MS + shift * HOUR_MS + cell * 20_000
            records.append(Record("volts", at_ms, (cell, round(volts, 3), suspect)))
    for n, day in enumerate((4, 5, 8, 9, 10, 11)):
        cells = "1-2" if n % 2 == 0 else "3-4"
        records.append(
            Record("lot", START_MS + day * DAY_MS + 9 * HOUR_MS, (cells, 9000.0 + 40 * n))
        )
    records.append(Record("counter", START_MS + 2 * DAY_MS, (1e9,)))
    records.append(Record("counter", START_MS + 9 * DAY_MS + HOUR_MS, (1e9 + 2.05e10,)))
    records.append(Record("outage", START_MS + 8 * DAY_MS + 7 * HOUR_MS, ("", 5 * HOUR_MS)))
    records.append(Record("outage", START_MS + 9 * DAY_MS, ("2", 30 * HOUR_MS)))
    return sorted(records, key=lambda r: r.at_ms)


def arrive(session: Session, section: SectionPlan, record: Record) -> None:
    """Store one record and mark what it makes stale, as the intake does."""
    delivery = make_delivery(session)
    at_ms, values = record.at_ms, record.values
    if record.kind == "current":
        make_current(session, section.id, [at_ms], [float(values[0])], delivery=delivery)
        mark(session, section.id, "charge", at_ms, at_ms + 1)
    elif record.kind == "counter":
        make_counter(session, section.id, [at_ms], [float(values[0])], delivery=delivery)
        mark(session, section.id, "charge", at_ms, at_ms + 1)
    elif record.kind == "volts":
        cell, volts, suspect = values
        make_readings(
            session,
            section.cell_ids[cell],
            [at_ms],
            [volts],
            suspect=suspect,
            delivery=delivery,
        )
        mark(session, section.id, "readings", at_ms, at_ms + 1)
    elif record.kind == "lot":
        make_lot(
            session,
            section.id,
            name=f"L{at_ms}",
            cells=values[0],
            pulled_ms=at_ms,
            started_ms=None,
            net_kg=values[1],
            delivery_id=delivery.id,
        )
        mark(session, section.id, "lots", at_ms, at_ms + 1)
    else:
        cells, lasts_ms = values
        make_outage(
            session,
            section.id,
            cells=cells,
            from_ms=at_ms,
            to_ms=at_ms + lasts_ms,
            state="bypassed" if cells else "off",
            delivery_id=delivery.id,
        )
        if cells:
            place = int(cells) - 1
            keep_bypasses(
                session,
                section.cell_ids,
                [(section.cell_ids[place], at_ms, at_ms + lasts_ms)],
            )
        mark(session, section.id, "charge", at_ms, at_ms + lasts_ms)
    session.commit()


def derived(session: Session) -> dict[str, list[tuple[object, ...]]]:
    """Every derived row; lots by name, since their ids follow the order of arrival."""
    tables = {
        table: sorted(map(tuple, fetch_rows(session, f"SELECT * FROM {table}")), key=repr)
        for table in DERIVED
        if table != "crop"
    }
    tables["crop"] = fetch_rows(
        session,
        "SELECT l.name, c.cell_id, c.pulled_ms, c.started_ms, c.cathodes, c.share, c.charge_c,"
        " c.estimated_c, c.metal_kg, c.is_shared FROM crop c JOIN lot l ON l.id = c.lot_id"
        " ORDER BY l.name, c.cell_id",
    )
    tables["lot_figure"] = fetch_rows(
        session,
        "SELECT l.name, f.metal_kg, f.net_kg, f.charge_c, f.estimated_c, f.cathodes"
        " FROM lot_figure f JOIN lot l ON l.id = f.lot_id ORDER BY l.name",
    )
    return tables


def plant(session: Session) -> SectionPlan:
    make_house(session, time_zone="America/Santiago")
    make_section(session, name="EW1", cells=4)
    return house(session).sections[0]


@pytest.fixture
def short_blocks(monkeypatch: pytest.MonkeyPatch) -> None:
    """Work in blocks of five days, so that a few weeks are many of them."""
    monkeypatch.setattr(rollup, "BLOCK_MS", 5 * DAY_MS)


def in_one_go(session: Session, records: list[Record]) -> dict[str, list[tuple[object, ...]]]:
    section = plant(session)
    for record in records:
        arrive(session, section, record)
    assert catch_up(session, Settings()) == 0
    session.commit()
    return derived(session)


@pytest.mark.parametrize("order", ["in time", "backwards", "shuffled"])
def test_records_that_arrive_one_by_one_give_the_same_as_all_at_once(
    session, sqlite_template, tmp_path, order, short_blocks
):
    records = made_up_records(seed=5)
    arrivals = list(records)
    if order == "backwards":
        arrivals.reverse()
    elif order == "shuffled":
        np.random.default_rng(7).shuffle(arrivals)
    other = Database(f"sqlite:///{tmp_path / 'other.db'}")
    other.upgrade()
    with Session(other.engine) as whole:
        expected = in_one_go(whole, records)
    other.close()

    section = plant(session)
    for n, record in enumerate(arrivals):
        arrive(session, section, record)
        if n % 9 == 0:
            catch_up(session, Settings())
            session.commit()
    assert catch_up(session, Settings()) == 0
    session.commit()

    found = derived(session)
    for table, rows in expected.items():
        assert found[table] == rows, table


def test_a_rebuild_gives_the_same_to_the_last_bit(database, session, short_blocks):
    expected = in_one_go(session, made_up_records(seed=6))

    recompute(database, Settings())

    with Session(database.engine) as after:
        assert derived(after) == expected


def test_the_records_of_the_test_reach_every_derived_table(session):
    found = in_one_go(session, made_up_records(seed=6))

    assert all(found[table] for table in (*DERIVED, "lot_figure"))
    assert {row[1] for row in found["flag"]} >= {"short", "suspect reading"}


def test_work_that_was_interrupted_goes_on_where_it_stopped(session, short_blocks):
    section = plant(session)
    for record in made_up_records(seed=8):
        arrive(session, section, record)

    left = catch_up(session, Settings(), budget_s=0.0)

    assert 0 < left == len(pending(session))
    assert catch_up(session, Settings()) == 0
