"""A made-up tankhouse printed as a real one would hand it in: plant.toml and the sheets."""

import csv
import io
from collections.abc import Callable, Iterable, Iterator
from pathlib import Path

import numpy as np

from server.demo.house import House, HouseSection
from server.science.arrays import Moments, Numbers

Row = tuple[str, ...]

ASSAYED = (
    "metal_g_l",
    "acid_g_l",
    "iron_g_l",
    "ferric_g_l",
    "chloride_mg_l",
    "nickel_g_l",
    "arsenic_g_l",
    "antimony_mg_l",
    "bismuth_mg_l",
    "cobalt_mg_l",
    "manganese_g_l",
    "temperature_c",
    "flow_m3_h",
)
# The sheets in the order in which a plant would take them in, with their columns.
COLUMNS: dict[str, Row] = {
    "current.csv": ("at", "section", "current_ka"),
    "counter.csv": ("at", "section", "counter_kah"),
    "outages.csv": ("section", "cells", "from", "to", "state"),
    "lots.csv": (
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
    "volts.csv": ("at", "section", "cell", "volts"),
    "electrolyte.csv": ("at", "section", "stream", *ASSAYED),
    "finds.csv": ("at", "section", "cell", "cathode", "found", "action"),
}
# A reading above this was written in millivolts by mistake, and has no decimals.
MILLIVOLTS_FROM = 50.0


def plant_toml(house: House) -> str:
    """The plant file of a made-up tankhouse."""
    lines = [
        "[tankhouse]",
        f'name = "{house.name}"',
        f'time_zone = "{house.time_zone}"',
        f'currency = "{house.currency}"',
        f"energy_price_per_kwh = {house.energy_price_per_kwh}",
    ]
    for shift in house.shifts:
        lines += ["", "[[shift]]", f'name = "{shift.name}"', f'starts = "{shift.starts}"']
    for recipe in (section.recipe for section in house.sections):
        low, high = recipe.target_volts
        lines += [
            "",
            "[[section]]",
            f'name = "{recipe.name}"',
            f'process = "{recipe.process}"',
            f"cells = {recipe.cells}",
            f"rows = {recipe.rows}",
            f"cathodes_per_cell = {recipe.cathodes_per_cell}",
            f"cathode_area_m2 = {recipe.cathode_area_m2}",
            f"rated_current_ka = {recipe.rated_amps / 1000}",
            f"metal_value_per_kg = {recipe.metal_value_per_kg}",
            *(f"{fact} = {value}" for fact, value in recipe.optional_facts),
            "[section.targets]",
            f"current_efficiency_pct = {recipe.target_efficiency * 100:g}",
            f"specific_energy_kwh_t = {recipe.target_kwh_t}",
            f"cell_volts = [{low}, {high}]",
        ]
    return "\n".join(lines) + "\n"


def sheet_rows(house: House, sheet: str) -> Iterator[Row]:
    """The rows of one sheet as text, in order of time over all sections, without the header."""
    timed = [pair for section in house.sections for pair in WRITERS[sheet](section)]
    timed.sort(key=lambda pair: pair[0])
    return (row for _, row in timed)


def sheet_text(house: House, sheet: str) -> str:
    """One sheet as CSV with its header; lines end as RFC 4180 wants them."""
    text = io.StringIO()
    writer = csv.writer(text)
    writer.writerow(COLUMNS[sheet])
    writer.writerows(sheet_rows(house, sheet))
    return text.getvalue()


def write_sheets(house: House, folder: Path) -> tuple[Path, ...]:
    """Write plant.toml and every sheet that has rows into a folder; the files, in that order."""
    folder.mkdir(parents=True, exist_ok=True)
    plant = folder / "plant.toml"
    plant.write_text(plant_toml(house), encoding="utf-8")
    files = [plant]
    for sheet in COLUMNS:
        text = sheet_text(house, sheet)
        if text.count("\n") > 1:
            file = folder / sheet
            file.write_text(text, encoding="utf-8", newline="")
            files.append(file)
    return tuple(files)


def _iso(at_ms: Iterable[int] | Moments) -> list[str]:
    """Moments as ISO 8601 in UTC, to the second."""
    seconds = np.asarray(list(at_ms), dtype=np.int64) // 1000
    return [f"{text}Z" for text in np.datetime_as_string(seconds.astype("datetime64[s]"))]


def _moment(at_ms: int | None) -> str:
    return "" if at_ms is None else _iso([at_ms])[0]


def _cell_numbers(cells: tuple[int, ...]) -> str:
    """Cell numbers as on a lot's ticket, such as 1-5;9."""
    runs: list[list[int]] = []
    for cell in sorted(cells):
        if runs and runs[-1][-1] == cell - 1:
            runs[-1].append(cell)
        else:
            runs.append([cell])
    return ";".join(f"{run[0]}-{run[-1]}" if len(run) > 1 else f"{run[0]}" for run in runs)


def _current(section: HouseSection) -> Iterator[tuple[int, Row]]:
    record, name = section.records.current, section.recipe.name
    for at_ms, text, amps in zip(
        record.at_ms.tolist(), _iso(record.at_ms), record.amps.tolist(), strict=True
    ):
        yield at_ms, (text, name, f"{amps / 1000:.3f}")


def _counter(section: HouseSection) -> Iterator[tuple[int, Row]]:
    for reading in section.records.counter:
        row = (_moment(reading.at_ms), section.recipe.name, f"{reading.kah:.1f}")
        yield reading.at_ms, row


def _volts(section: HouseSection) -> Iterator[tuple[int, Row]]:
    rounds, recipe = section.records.rounds, section.recipe
    is_written = ~np.isnan(rounds.volts)
    at_ms: Moments = rounds.at_ms[is_written]
    volts: Numbers = rounds.volts[is_written]
    cells = np.nonzero(is_written)[1] + 1
    numbers = [str(cell) for cell in range(recipe.cells + 1)]
    for moment_ms, text, cell, read in zip(
        at_ms.tolist(), _iso(at_ms), cells.tolist(), volts.tolist(), strict=True
    ):
        decimals = recipe.pen.decimals if read < MILLIVOLTS_FROM else 0
        yield moment_ms, (text, recipe.name, numbers[cell], f"{read:.{decimals}f}")


def _lots(section: HouseSection) -> Iterator[tuple[int, Row]]:
    for lot in section.records.lots:
        yield (
            lot.weighed_at_ms,
            (
                _moment(lot.weighed_at_ms),
                lot.lot,
                section.recipe.name,
                _cell_numbers(lot.cells),
                _moment(lot.pulled_at_ms),
                _moment(lot.started_at_ms),
                str(section.recipe.cathodes_per_cell),
                f"{lot.net_kg:.1f}",
                f"{lot.starter_kg:g}",
            ),
        )


def _outages(section: HouseSection) -> Iterator[tuple[int, Row]]:
    for note in section.records.outages:
        cells = "" if note.cell is None else str(note.cell)
        times = (_moment(note.from_ms), _moment(note.to_ms))
        yield note.from_ms, (section.recipe.name, cells, *times, note.state)


def _electrolyte(section: HouseSection) -> Iterator[tuple[int, Row]]:
    for assay in section.records.assays:
        found = (f"{assay.values[name]:.4g}" if name in assay.values else "" for name in ASSAYED)
        yield assay.at_ms, (_moment(assay.at_ms), section.recipe.name, assay.stream, *found)


def _finds(section: HouseSection) -> Iterator[tuple[int, Row]]:
    for find in section.records.finds:
        what = (str(find.cell), str(find.cathode), find.found, find.action)
        yield find.at_ms, (_moment(find.at_ms), section.recipe.name, *what)


WRITERS: dict[str, Callable[[HouseSection], Iterator[tuple[int, Row]]]] = {
    "current.csv": _current,
    "counter.csv": _counter,
    "outages.csv": _outages,
    "lots.csv": _lots,
    "volts.csv": _volts,
    "electrolyte.csv": _electrolyte,
    "finds.csv": _finds,
}
