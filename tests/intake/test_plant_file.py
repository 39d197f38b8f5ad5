import tomllib

import pytest

from server.intake.plant_file import PlantFileWrong, found_plant, read_plant
from server.storage.errors import Conflict
from server.storage.plant import house, tankhouse
from tests.factories import NOW_MS
from tests.source import ROOT
from tests.test_documents import examples

PLANT = """
[tankhouse]
name = "North House"
time_zone = "America/Santiago"
currency = "USD"
energy_price_per_kwh = 0.09

[[shift]]
name = "day"
starts = "07:30"

[[shift]]
name = "night"
starts = "19:30"

[[section]]
name = "EW1"
process = "copper electrowinning"
cells = 48
rows = 2
cathodes_per_cell = 60
cathode_area_m2 = 2.0
rated_current_ka = 36.0
metal_value_per_kg = 9.2
rectifier_efficiency_pct = 97
differential_resistance_uohm = 11
walk_order = "1-24;48-25"
[section.targets]
current_efficiency_pct = 92.0
specific_energy_kwh_t = 1950.0
cell_volts = [1.818, 2.222]

[[section]]
name = "CR1"
process = "other"
metal = "Cr"
electrons = 3
cells = 10
rows = 1
cathodes_per_cell = 20
cathode_area_m2 = 1.5
rated_current_ka = 5.0
metal_value_per_kg = 7.0
[section.targets]
current_efficiency_pct = 45
specific_energy_kwh_t = 18500
cell_volts = [4.0, 5.0]
"""


def faults(text):
    with pytest.raises(PlantFileWrong) as wrong:
        read_plant(text, "plant.toml")
    return {fault.key: (fault.found, fault.expected) for fault in wrong.value.faults}


def test_a_plant_file_founds_the_books(database):
    with database.write() as session:
        found_plant(session, read_plant(PLANT), NOW_MS, "ana")

    with database.read() as session:
        row, plant = tankhouse(session), house(session)
    assert (plant.name, plant.time_zone, plant.currency) == (
        "North House",
        "America/Santiago",
        "USD",
    )
    assert len(row.signing_key) >= 48
    assert plant.shifts_at(NOW_MS) == ((450, "day"), (1170, "night"))
    first, second = plant.sections
    assert (first.name, first.process, first.metal, first.electrons) == (
        "EW1",
        "copper electrowinning",
        "Cu",
        2,
    )
    assert (second.process, second.metal, second.electrons) == ("other", "Cr", 3)
    assert [len(section.cell_ids) for section in plant.sections] == [48, 10]


def test_terms_are_kept_in_si_units_and_shares(database):
    with database.write() as session:
        found_plant(session, read_plant(PLANT), NOW_MS, "ana")

    with database.read() as session:
        first, second = (section.terms_at(NOW_MS) for section in house(session).sections)
    assert first.rated_amps == 36_000
    assert first.rectifier_efficiency == pytest.approx(0.97)
    assert first.differential_resistance_ohm == pytest.approx(11e-6)
    assert first.target_current_efficiency == pytest.approx(0.92)
    assert first.target_specific_energy_j_kg == pytest.approx(1950 * 3600)
    assert (first.low_volts, first.high_volts) == (1.818, 2.222)
    assert (first.changed_by, first.from_ms) == ("ana", 0)
    assert second.rectifier_efficiency is None
    assert second.differential_resistance_ohm is None
    assert second.meter_accuracy_v == pytest.approx(0.002)
    assert second.current_accuracy == pytest.approx(0.005)
    assert second.scale_accuracy == pytest.approx(0.002)


def test_books_that_have_a_plant_are_not_founded_anew(database):
    with database.write() as session:
        found_plant(session, read_plant(PLANT), NOW_MS, "ana")

    with database.write() as session, pytest.raises(Conflict, match="already"):
        found_plant(session, read_plant(PLANT), NOW_MS, "ana")


def test_the_example_in_the_readme_is_a_plant_file():
    assert read_plant(examples()["plant.toml"]).section


@pytest.mark.parametrize(
    ("before", "after", "key", "found", "expected"),
    [
        ("cells = 48", 'cells = "48"', "section EW1: cells", "“48”", "number of cells"),
        ("cells = 48", "cells = 48.5", "section EW1: cells", "48.5", "number of cells"),
        ("cells = 48", "cells = 0", "section EW1: cells", "0", "1 or more"),
        ("cells = 48", "cells = true", "section EW1: cells", "True", "number of cells"),
        ("cells = 48\n", "", "section EW1: cells", "", "number of cells"),
        ("cells = 48", "cell = 48", "section EW1: cell", "not known", "“cells”"),
        ("rows = 2", "rows = 49", "section EW1: rows", "49", "no more rows than cells"),
        ("2.0\nrated", "-2.0\nrated", "section EW1: cathode_area_m2", "-2.0", "above 0"),
        ("9.2", "nan", "section EW1: metal_value_per_kg", "nan", "zero or more"),
        ("36.0", "inf", "section EW1: rated_current_ka", "inf", "kiloamperes"),
        ("92.0", "920", "section EW1: targets.current_efficiency_pct", "920", "up to 100"),
        ("[1.818, 2.222]", "[2.2, 1.8]", "section EW1: targets.cell_volts", "[2.2", "lower one"),
        ("[1.818, 2.222]", "[1.8]", "section EW1: targets.cell_volts", "[1.8]", "two voltages"),
        ("copper elec", "coper elec", "section EW1: process", "“coper elec", "copper electrowin"),
        ('metal = "Cr"\n', "", "section CR1: metal", "None", "symbol"),
        ('"Cr"', '"Xx"', "section CR1: metal", "“Xx”", ""),
        ("electrons = 3", "electrons = 9", "section CR1: electrons", "9", "1 to 8"),
        ("1-24;48-25", "1-24;48-20", "section EW1: walk_order", "48-20", "each cell once"),
        ("07:30", "24:30", "shift day: starts", "“24:30”", "time of day"),
        ("19:30", "07:30", "shift.starts", "07:30", "once"),
        ('"CR1"', '"ew1"', "section.name", "EW1, ew1", "once"),
        ("America/Santiago", "Chile/Santiago", "tankhouse.time_zone", "“Chile", "Santiago"),
        ("USD", "XQZ", "tankhouse.currency", "“XQZ”", "ISO 4217"),
        ("0.09", "-0.09", "tankhouse.energy_price_per_kwh", "-0.09", "zero or more"),
        ("[tankhouse]", "[tankhouses]", "tankhouses", "not known", "“tankhouse”"),
    ],
)
def test_what_is_wrong_is_named_with_what_was_expected(before, after, key, found, expected):
    assert before in PLANT

    told = faults(PLANT.replace(before, after, 1))

    assert key in told
    assert found in told[key][0]
    assert expected in told[key][1]


def test_every_fault_is_told_at_once():
    text = PLANT.replace("cells = 48", "cells = 0").replace("USD", "x").replace("07:30", "7")

    assert set(faults(text)) == {"section EW1: cells", "tankhouse.currency", "shift day: starts"}


def test_targets_belong_to_the_section_above_them():
    lines = PLANT.split("[section.targets]")
    without = lines[0] + lines[1].split("\n", 4)[4] + "[section.targets]" + lines[2]

    assert "section EW1: targets" in faults(without)


def test_what_is_not_toml_says_where():
    (fault,) = faults("a = 3\nb = [").items()

    assert fault[0] == "the file"
    assert "TOML" in fault[1][1]


def test_a_file_that_is_not_there_is_told(tmp_path):
    with pytest.raises(PlantFileWrong, match=r"no\.toml"):
        read_plant(tmp_path / "no.toml")


def test_a_file_that_is_not_text_is_told(tmp_path):
    path = tmp_path / "plant.toml"
    path.write_bytes(b"\xff\xfe\x00")

    with pytest.raises(PlantFileWrong, match="UTF-8"):
        read_plant(path)


def test_a_byte_order_mark_does_no_harm(tmp_path):
    path = tmp_path / "plant.toml"
    path.write_bytes(b"\xef\xbb\xbf" + PLANT.encode())

    assert read_plant(path).tankhouse.name == "North House"


def test_every_key_of_the_contract_is_known():
    from server.intake.plant_model import PlantSection, PlantTargets

    example = tomllib.loads(examples()["plant.toml"])
    keys = set(example["section"][0]) | set(example["section"][0]["targets"])

    assert keys <= set(PlantSection.model_fields) | set(PlantTargets.model_fields)
    assert (ROOT / "README.md").is_file()
