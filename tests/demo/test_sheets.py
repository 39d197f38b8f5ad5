import csv
import tomllib
from datetime import datetime

import numpy as np
import pytest

from server.demo.house import truth_house
from server.demo.recipe import HOUR_MS
from server.demo.sheets import COLUMNS, plant_toml, sheet_rows, sheet_text, write_sheets
from server.demo.truth import account

MAX_HOLD_MS = 2 * HOUR_MS


def ms(text: str) -> int:
    assert text.endswith("Z")
    return round(datetime.fromisoformat(text).timestamp() * 1000)


def parsed(house, sheet):
    return list(csv.DictReader(sheet_text(house, sheet).splitlines()))


def cells_of(text: str) -> list[int]:
    numbers = []
    for run in text.split(";"):
        first, _, last = run.partition("-")
        numbers += range(int(first), int(last or first) + 1)
    return numbers


@pytest.fixture(scope="module")
def held(known):
    """Each section's current as logged: moments and amps, held to the end."""
    rows = parsed(known, "current.csv")
    logged = {}
    for section in known.sections:
        mine = [row for row in rows if row["section"] == section.recipe.name]
        logged[section.recipe.name] = (
            np.array([ms(row["at"]) for row in mine] + [known.end_ms]),
            np.array([float(row["current_ka"]) * 1000 for row in mine]),
        )
    return logged


def held_charge_c(logged, from_ms, to_ms):
    """Charge that the samples give when each holds until the next."""
    at_ms, amps = logged
    begins, ends = np.clip(at_ms[:-1], from_ms, to_ms), np.clip(at_ms[1:], from_ms, to_ms)
    return float((amps * (ends - begins)).sum() / 1000)


def test_the_plant_file_is_toml_and_says_what_was_built(demo):
    plant = tomllib.loads(plant_toml(demo))

    assert plant["tankhouse"]["time_zone"] == "America/Santiago"
    assert [shift["starts"] for shift in plant["shift"]] == ["06:00", "14:00", "22:00"]
    assert [section["cells"] for section in plant["section"]] == [60, 56, 40, 44]
    assert plant["section"][0]["rated_current_ka"] == 36.0
    assert plant["section"][2]["targets"]["cell_volts"] == [0.25, 0.33]


def test_every_sheet_has_its_columns_and_is_in_order_of_time(demo):
    for sheet, columns in COLUMNS.items():
        rows = parsed(demo, sheet)
        timed = columns[0] if columns[0] != "section" else "from"
        moments = [ms(row[timed]) for row in rows]

        assert list(rows[0]) == list(columns)
        assert moments == sorted(moments)


def test_volts_are_read_back_as_they_were_written(demo):
    for section in demo.sections:
        rounds = section.records.rounds
        name = section.recipe.name
        rows = [row for row in sheet_rows(demo, "volts.csv") if row[1] == name]
        at_ms = np.array([ms(row[0]) for row in rows])
        cells = np.array([int(row[2]) for row in rows]) - 1
        in_round = np.searchsorted(rounds.at_ms[:, 0], at_ms - cells * 20_000)

        assert len(rows) == np.isfinite(rounds.volts).sum()
        assert [float(row[3]) for row in rows] == rounds.volts[in_round, cells].tolist()


def test_no_row_is_written_twice(demo):
    keys = {
        "current.csv": slice(0, 2),
        "counter.csv": slice(0, 2),
        "volts.csv": slice(0, 3),
        "lots.csv": slice(1, 2),
        "electrolyte.csv": slice(0, 3),
        "finds.csv": slice(0, 4),
    }
    for sheet, key in keys.items():
        rows = [row[key] for row in sheet_rows(demo, sheet)]

        assert len(rows) == len(set(rows)), sheet


def test_rounding_is_as_fine_as_the_meter(demo):
    decimals = {
        name: {
            len(row[3].partition(".")[2])
            for row in sheet_rows(demo, "volts.csv")
            if row[1] == name and "." in row[3]
        }
        for name in ("EW1", "EW2", "ER1", "ZN1")
    }

    assert decimals == {"EW1": {3}, "EW2": {2}, "ER1": {3}, "ZN1": {2}}


def test_an_outage_that_goes_on_has_no_end(demo):
    rows = parsed(demo, "outages.csv")

    assert [(row["section"], row["cells"]) for row in rows if not row["to"]] == [("EW1", "17")]
    assert all(ms(row["from"]) < ms(row["to"]) for row in rows if row["to"])


def test_starter_sheets_hang_only_in_the_refinery(demo):
    rows = parsed(demo, "lots.csv")

    assert all((float(row["starter_kg"]) > 0) == (row["section"] == "ER1") for row in rows)
    assert all(len(cells_of(row["cells"])) == 1 for row in rows if row["section"] == "ER1")
    assert {len(cells_of(row["cells"])) for row in rows if row["section"] == "EW1"} == {5}


def test_the_solution_loses_what_the_cathodes_gain(demo):
    rows = [row for row in parsed(demo, "electrolyte.csv") if row["section"] == "ZN1"]
    feeds = [row for row in rows if row["stream"] == "feed"]
    spents = [row for row in rows if row["stream"] == "spent"]
    lost_kg_h = [
        float(feed["flow_m3_h"]) * (float(feed["metal_g_l"]) - float(spent["metal_g_l"]))
        for feed, spent in zip(feeds, spents, strict=True)
    ]
    found = account(demo.truth("ZN1"), demo.start_ms, demo.end_ms)

    hours = (demo.end_ms - demo.start_ms) / HOUR_MS
    assert np.mean(lost_kg_h) == pytest.approx(found.made_kg / hours, rel=0.03)


def test_files_are_written_only_for_sheets_with_rows(tmp_path):
    files = write_sheets(truth_house(days=3), tmp_path / "plant")

    names = [file.name for file in files]
    assert names[0] == "plant.toml"
    assert "counter.csv" not in names
    assert sorted(names) == sorted(path.name for path in (tmp_path / "plant").iterdir())
    first = (tmp_path / "plant" / "volts.csv").read_bytes().split(b"\n")[0]
    assert first == b"at,section,cell,volts\r"


@pytest.mark.parametrize("name", ["EW1", "ER1", "ZN1"])
def test_the_logged_current_gives_every_cells_charge_back_to_a_thousandth(known, held, name):
    truth = known.truth(name)
    whole_c = held_charge_c(held[name], known.start_ms, known.end_ms)
    found_c = np.full(truth.cells, whole_c)
    for bypass in truth.events.bypasses:
        to_ms = known.end_ms if bypass.to_ms is None else bypass.to_ms
        found_c[bypass.cell - 1] -= held_charge_c(held[name], bypass.from_ms, to_ms)

    assert np.diff(held[name][0]).max() <= MAX_HOLD_MS
    assert found_c == pytest.approx(truth.cell_charge_c(known.start_ms, known.end_ms), rel=1e-3)
    # It is a meter and a clock, all the same: the samples are not the truth itself.
    assert abs(whole_c / truth.section_charge_c(known.start_ms, known.end_ms) - 1) > 1e-7


@pytest.mark.parametrize("name", ["EW1", "ER1", "ZN1"])
def test_the_sheets_give_the_crops_efficiency_back(known, held, name):
    truth = known.truth(name)
    bypasses = truth.events.bypasses
    weighed_kg = charge_c = 0.0
    for row in parsed(known, "lots.csv"):
        if row["section"] != name:
            continue
        weighed_kg += float(row["net_kg"]) - float(row["starter_kg"])
        from_ms, to_ms = ms(row["started_at"]), ms(row["pulled_at"])
        for cell in cells_of(row["cells"]):
            charge_c += held_charge_c(held[name], from_ms, to_ms)
            for bypass in (b for b in bypasses if b.cell == cell):
                end_ms = known.end_ms if bypass.to_ms is None else bypass.to_ms
                charge_c -= (
                    held_charge_c(
                        held[name], max(from_ms, bypass.from_ms), max(min(to_ms, end_ms), from_ms)
                    )
                    if bypass.from_ms < to_ms
                    else 0.0
                )

    found = account(truth, known.start_ms, known.end_ms)
    efficiency = weighed_kg / (truth.kg_per_c * charge_c)
    assert efficiency == pytest.approx(found.crops_current_efficiency, abs=0.0015)


@pytest.mark.parametrize("name", ["EW1", "ER1", "ZN1"])
def test_the_sheets_give_the_energy_back(known, held, name):
    """Readings referred to a common current, joined in time, and turned back."""
    section = known.section(name)
    rounds, ohm = section.records.rounds, section.recipe.resistance_ohm
    at_ms, amps = held[name]
    middle_ms = (at_ms[:-1] + at_ms[1:]) // 2
    seconds = np.diff(at_ms) / 1000
    joules = 0.0
    for cell in range(1, section.recipe.cells + 1):
        is_read = ~np.isnan(rounds.volts[:, cell - 1])
        read_ms, volts = rounds.at_ms[is_read, cell - 1], rounds.volts[is_read, cell - 1]
        amps_then = amps[np.searchsorted(at_ms, read_ms, side="right") - 1]
        without_current = np.interp(middle_ms, read_ms, volts - ohm * amps_then)
        is_on = section.truth.in_service_at(middle_ms, cell)
        joules += (((without_current + ohm * amps) * amps * seconds)[is_on]).sum()

    found = account(section.truth, known.start_ms, known.end_ms)
    assert joules == pytest.approx(found.dc_energy_j, rel=0.003)
