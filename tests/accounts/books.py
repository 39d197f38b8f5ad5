"""A made-up tankhouse's sheets written straight into the tables, past the intake."""

import tomllib
from collections import defaultdict
from collections.abc import Iterable, Mapping
from datetime import datetime

from sqlalchemy.orm import Session

from server.storage.current import keep_bypasses
from server.storage.plant import House, house
from tests.factories import (
    keep_books,
    make_current,
    make_house,
    make_lot,
    make_outage,
    make_readings,
    make_section,
)

METALS = {
    "copper electrowinning": ("Cu", 2),
    "copper electrorefining": ("Cu", 2),
    "zinc electrowinning": ("Zn", 2),
}
Sheets = Mapping[str, Iterable[Mapping[str, str]]]


def moment_ms(text: str) -> int:
    """Milliseconds of an ISO time with its offset."""
    return round(datetime.fromisoformat(text).timestamp() * 1000)


def keep(session: Session, plant_toml: str, sheets: Sheets) -> House:
    """Found the plant, store the sheets' rows and work out everything derived."""
    plant = tomllib.loads(plant_toml)
    make_house(
        session,
        time_zone=plant["tankhouse"]["time_zone"],
        energy_price_per_kwh=plant["tankhouse"]["energy_price_per_kwh"],
    )
    for section in plant["section"]:
        metal, electrons = METALS[section["process"]]
        low, high = section["targets"]["cell_volts"]
        ohm = section.get("differential_resistance_uohm")
        make_section(
            session,
            name=section["name"],
            process=section["process"],
            metal=metal,
            electrons=electrons,
            cells=section["cells"],
            rows=section["rows"],
            cathodes_per_cell=section["cathodes_per_cell"],
            cathode_area_m2=section["cathode_area_m2"],
            rated_amps=section["rated_current_ka"] * 1000,
            differential_resistance_ohm=None if ohm is None else ohm / 1e6,
            target_current_efficiency=section["targets"]["current_efficiency_pct"] / 100,
            low_volts=low,
            high_volts=high,
        )
    held = house(session)
    _keep_current(session, held, sheets["current.csv"])
    _keep_outages(session, held, sheets["outages.csv"])
    for row in sheets["lots.csv"]:
        make_lot(
            session,
            held.section(row["section"]).id,
            name=row["lot"],
            cells=row["cells"],
            weighed_ms=moment_ms(row["weighed_at"]),
            pulled_ms=moment_ms(row["pulled_at"]),
            started_ms=moment_ms(row["started_at"]) if row["started_at"] else None,
            cathodes_per_cell=int(row["cathodes_per_cell"]),
            net_kg=float(row["net_kg"]),
            starter_kg=float(row["starter_kg"]),
        )
    volts: dict[int, list[tuple[int, float]]] = defaultdict(list)
    for row in sheets["volts.csv"]:
        cell_id = held.section(row["section"]).cell_id(int(row["cell"]))
        volts[cell_id].append((moment_ms(row["at"]), float(row["volts"])))
    for cell_id, readings in sorted(volts.items()):
        readings.sort()
        make_readings(session, cell_id, [r[0] for r in readings], [r[1] for r in readings])
    keep_books(session)
    return held


def _keep_current(session: Session, held: House, rows: Iterable[Mapping[str, str]]) -> None:
    current: dict[str, list[tuple[int, float]]] = defaultdict(list)
    for row in rows:
        current[row["section"]].append((moment_ms(row["at"]), float(row["current_ka"]) * 1000))
    for name, sampled in current.items():
        make_current(
            session, held.section(name).id, [s[0] for s in sampled], [s[1] for s in sampled]
        )


def _keep_outages(session: Session, held: House, rows: Iterable[Mapping[str, str]]) -> None:
    bypasses: dict[str, list[tuple[int, int, int]]] = defaultdict(list)
    for row in rows:
        section = held.section(row["section"])
        end_ms = moment_ms(row["to"]) if row["to"] else None
        make_outage(
            session,
            section.id,
            cells=row["cells"],
            from_ms=moment_ms(row["from"]),
            to_ms=end_ms,
            state=row["state"],
        )
        if row["cells"]:
            cell_id = section.cell_id(int(row["cells"]))
            bypasses[section.name].append((cell_id, moment_ms(row["from"]), end_ms or 2**53))
    for name, times in bypasses.items():
        keep_bypasses(session, held.section(name).cell_ids, sorted(times))
    session.commit()
