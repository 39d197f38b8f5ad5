"""Plants printed as a real tankhouse would hand them in: plant.toml and the sheets."""

import csv
from collections.abc import Iterable, Iterator, Sequence
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from tests.watch.plants.cathodes import weighed_ms
from tests.watch.plants.plant import Plant, Pull
from tests.watch.plants.scenario import DAY_MS, START_MS, STEP_MS

Row = tuple[str, ...]
Timed = tuple[int, Row]

_HOUSE = """\
[tankhouse]
name = "Made-up House"
time_zone = "UTC"
currency = "USD"
energy_price_per_kwh = 0.09

[[shift]]
name = "night"
starts = "00:00"

[[shift]]
name = "day"
starts = "08:00"

[[shift]]
name = "evening"
starts = "16:00"
"""


def plant_toml(plants: Sequence[Plant]) -> str:
    """The plant file of a house with these sections."""
    return "\n".join([_HOUSE, *(_section(plant) for plant in plants)])


def write_sheets(plants: Sequence[Plant], folder: Path) -> tuple[Path, ...]:
    """Write plant.toml and the sheets of these sections into a folder, in order of time."""
    folder.mkdir(parents=True, exist_ok=True)
    files = [folder / "plant.toml"]
    files[0].write_text(plant_toml(plants), encoding="utf-8")
    for name, (columns, rows_of) in _SHEETS.items():
        rows = [row for plant in plants for row in rows_of(plant)]
        if not rows:
            continue
        rows.sort(key=lambda timed: timed[0])
        files.append(folder / name)
        with files[-1].open("w", encoding="utf-8", newline="") as sheet:
            writer = csv.writer(sheet)
            writer.writerow(columns)
            writer.writerows(row for _, row in rows)
    return tuple(files)


def _section(plant: Plant) -> str:
    scenario = plant.scenario
    trade = scenario.trade
    low, high = trade.limits_v
    micro_ohm = trade.resistive_v / trade.rated_amps * 1e6
    stated = f"differential_resistance_uohm = {micro_ohm:.2f}\n"
    return f"""
[[section]]
name = "{plant.name}"
process = "{trade.process}"
cells = {plant.cells}
rows = 2
cathodes_per_cell = {trade.cathodes}
cathode_area_m2 = {trade.cathode_area_m2}
rated_current_ka = {trade.rated_amps / 1000}
metal_value_per_kg = {trade.value_per_kg}
{stated if scenario.states_resistance else ""}[section.targets]
current_efficiency_pct = {trade.efficiency * 100:g}
specific_energy_kwh_t = {trade.target_kwh_t}
cell_volts = [{low}, {high}]
"""


def _iso(at_ms: Iterable[int] | NDArray[np.int64]) -> list[str]:
    """Moments as ISO 8601 in UTC, to the second."""
    seconds = np.asarray(list(at_ms), dtype=np.int64) // 1000
    return [f"{text}Z" for text in np.datetime_as_string(seconds.astype("datetime64[s]"))]


def _current(plant: Plant) -> Iterator[Timed]:
    moments = plant.logged_ms.tolist()
    for at_ms, text, amps in zip(moments, _iso(moments), plant.logged_amps.tolist(), strict=True):
        yield at_ms, (text, plant.name, f"{amps / 1000:.3f}")


def _volts(plant: Plant) -> Iterator[Timed]:
    is_written = np.isfinite(plant.volts)
    at_ms = plant.at_ms[is_written]
    cells = (np.nonzero(is_written)[1] + 1).tolist()
    volts = plant.volts[is_written].tolist()
    for moment_ms, text, cell, read in zip(at_ms.tolist(), _iso(at_ms), cells, volts, strict=True):
        yield moment_ms, (text, plant.name, str(cell), f"{read:.6g}")


def _lots(plant: Plant) -> Iterator[Timed]:
    sums = np.zeros((plant.kg.shape[0] + 1, plant.cells))
    np.cumsum(plant.kg, axis=0, dtype=np.float64, out=sums[1:])
    for pull in plant.pulls:
        at_ms = weighed_ms(pull)
        if at_ms >= plant.end_ms:
            continue
        weighed, pulled, hung = _iso([at_ms, pull.pulled_ms, pull.hung_ms])
        yield (
            at_ms,
            (
                weighed,
                f"{plant.name} {pull.lot}",
                plant.name,
                ";".join(map(str, pull.cells)),
                pulled,
                hung,
                str(plant.scenario.trade.cathodes),
                f"{_grown_kg(plant, pull, sums):.0f}",
                "0",
            ),
        )


def _grown_kg(plant: Plant, pull: Pull, sums: NDArray[np.float64]) -> float:
    """Metal of a load; before the record as much grew as at rated current."""
    trade = plant.scenario.trade
    before_a_ms = trade.rated_amps * trade.efficiency * trade.metal_kg_per_ah / (DAY_MS / 24)
    end = (pull.pulled_ms - START_MS) // STEP_MS
    begin = max((pull.hung_ms - START_MS) // STEP_MS, 0)
    cells = np.array(pull.cells) - 1
    before_kg = max(START_MS - pull.hung_ms, 0) * before_a_ms
    return float((sums[end, cells] - sums[begin, cells] + before_kg).sum())


def _outages(plant: Plant) -> Iterator[Timed]:
    for span in plant.outages:
        yield span.from_ms, (plant.name, "", *_iso([span.from_ms, span.to_ms]), "off")
    for one in plant.bypasses:
        cell = str(one.cell)
        yield one.from_ms, (plant.name, cell, *_iso([one.from_ms, one.to_ms]), "bypassed")


def _finds(plant: Plant) -> Iterator[Timed]:
    for find in plant.finds:
        cathode = str(find.cell * 7 % plant.scenario.trade.cathodes + 1)
        action = "straightened" if find.found == "short" else ""
        row = (_iso([find.at_ms])[0], plant.name, str(find.cell), cathode, find.found, action)
        yield find.at_ms, row


_SHEETS = {
    "current.csv": (("at", "section", "current_ka"), _current),
    "outages.csv": (("section", "cells", "from", "to", "state"), _outages),
    "lots.csv": (
        (
            "weighed_at",
            "lot",
            "section",
            "cells",
            "pulled_at",
            "started_at",
            "cathodes_per_cell",
            "net_kg",
            "starter_kg",
        ),
        _lots,
    ),
    "volts.csv": (("at", "section", "cell", "volts"), _volts),
    "finds.csv": (("at", "section", "cell", "cathode", "found", "action"), _finds),
}
"""The sheets in the order in which a plant would take them in, with their columns and rows."""
