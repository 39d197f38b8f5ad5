"""Large made-up plants, written straight into the tables and brought up to date."""

import time
from pathlib import Path

import numpy as np
from sqlalchemy.orm import Session

from server.jobs import catch_up_fully
from server.settings import Settings
from server.storage import readings, samples
from server.storage.database import Database
from server.storage.deliveries import Delivery
from server.storage.plant import SectionPlan, house
from server.storage.rebuild import record_span
from server.storage.records import Lot
from server.storage.stale import mark
from tests.factories import DAY_MS, HOUR_MS, make_house, make_section

SECTIONS = 25
CELLS = 60
ROUNDS_A_DAY = 3
CROP_DAYS = 7
END_MS = 1_764_547_200_000
"""2025-12-01T00:00Z."""


def reading_moments(days: float, cell: int) -> np.ndarray:
    """Moments at which one cell was read, three times a day, twenty seconds a cell."""
    rounds = round(days * ROUNDS_A_DAY)
    start_ms = END_MS - rounds * (DAY_MS // ROUNDS_A_DAY)
    return start_ms + np.arange(rounds) * (DAY_MS // ROUNDS_A_DAY) + HOUR_MS * 2 + 20_000 * cell


def reading_volts(rng: np.random.Generator, count: int, cell: int) -> np.ndarray:
    """Voltages of one copper cell in microvolts: a level of its own, and noise."""
    volts = 2.0 + 0.002 * (cell % 15) + rng.normal(0, 0.008, count)
    return np.rint(volts * 1000).astype(np.int64) * 1000


def build(path: Path, days: float) -> float:
    """A plant of 1,500 cells with that many days of records; answers the seconds it took."""
    began = time.perf_counter()
    database = Database(f"sqlite:///{path}")
    database.upgrade()
    with database.write() as session:
        make_house(session)
    with Session(database.engine) as session:
        for number in range(SECTIONS):
            make_section(session, name=f"S{number + 1:02d}", cells=CELLS, rows=4)
        plans = house(session).sections
    for plan in plans:
        with database.write() as session:
            _record(session, plan, days)
    catch_up_fully(database, Settings())
    database.close()
    return time.perf_counter() - began


def _record(session: Session, plan: SectionPlan, days: float) -> None:
    """One section's readings, hourly current and weekly lots, marked as stale."""
    rng = np.random.default_rng(plan.id)
    delivery = make_delivery_in(session)
    for cell, cell_id in enumerate(plan.cell_ids):
        at_ms = reading_moments(days, cell)
        count = len(at_ms)
        readings.store(
            session,
            np.full(count, cell_id),
            at_ms,
            np.zeros(count, np.int64),
            reading_volts(rng, count, cell),
            np.zeros(count, np.int64),
            delivery,
        )
    start_ms = round(END_MS - days * DAY_MS)
    hours = np.arange(start_ms, END_MS, HOUR_MS)
    amps = 36_000 + rng.normal(0, 150, len(hours))
    rows = [(plan.id, at, 0, float(a)) for at, a in zip(hours.tolist(), amps.tolist(), strict=True)]
    samples.add_samples(session, "current_sample", rows, delivery)
    for first in range(1, CELLS + 1, 6):
        pulled_ms = start_ms + (first % CROP_DAYS + 1) * DAY_MS + 9 * HOUR_MS
        number = 0
        while pulled_ms < END_MS:
            session.add(
                Lot(
                    section_id=plan.id,
                    name=f"{plan.name}-{first}-{number}",
                    revision=0,
                    is_void=0,
                    cells=f"{first}-{first + 5}",
                    weighed_ms=pulled_ms + HOUR_MS,
                    pulled_ms=pulled_ms,
                    started_ms=None,
                    cathodes_per_cell=60,
                    net_kg=6 * 6669.0 + float(rng.normal(0, 100)),
                    starter_kg=0.0,
                    delivery_id=delivery,
                )
            )
            number += 1
            pulled_ms += CROP_DAYS * DAY_MS
    session.flush()
    for kind, (from_ms, to_ms) in record_span(session, plan).items():
        mark(session, plan.id, kind, from_ms, to_ms)


def make_delivery_in(session: Session) -> int:
    """Id of a delivery, in the session's own transaction."""
    delivery = Delivery(sheet="volts", source="bench", sender="bench", received_ms=END_MS)
    session.add(delivery)
    session.flush()
    return int(delivery.id)
