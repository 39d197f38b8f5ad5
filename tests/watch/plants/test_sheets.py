"""Sheets of made-up plants, as the program takes them in."""

import csv
from dataclasses import replace

import numpy as np

from tests.bench.measure import Books
from tests.watch.plants.making import make
from tests.watch.plants.scenarios import SCENARIOS
from tests.watch.plants.sheets import write_sheets


def test_the_program_takes_every_row_in(tmp_path):
    names = ("ew slips of the pen", "er all pulled at once", "zn re-hung and bypassed")
    plants = [make(replace(s, days=16), 1) for s in SCENARIOS if s.name in names]
    files = write_sheets(plants, tmp_path / "sheets")
    books = Books(tmp_path)

    books.command("init", "--plant", files[0])
    books.command("import", tmp_path / "sheets")  # fails where a row is held

    assert [file.name for file in files] == [
        "plant.toml",
        "current.csv",
        "outages.csv",
        "lots.csv",
        "volts.csv",
        "finds.csv",
    ]


def test_a_row_stands_for_every_reading(tmp_path):
    plant = make(replace(SCENARIOS[0], days=4), 1)
    write_sheets([plant], tmp_path)

    with (tmp_path / "volts.csv").open(encoding="utf-8") as sheet:
        rows = list(csv.DictReader(sheet))

    assert len(rows) == np.isfinite(plant.volts).sum()
    assert [row["at"] for row in rows] == sorted(row["at"] for row in rows)
