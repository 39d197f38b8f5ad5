"""What a plant says of its electrolyte, its gap and its table of standard potentials."""

import pytest

from server.intake.plant_change import change_house, change_section, plant_toml
from server.intake.plant_faults import PlantFileWrong
from server.intake.plant_file import found_plant, read_plant
from server.storage.plant import house
from tests.factories import NOW_MS

PLANT = """
[tankhouse]
name = "North House"
time_zone = "America/Santiago"
currency = "USD"
energy_price_per_kwh = 0.09
standard_potentials = "crc 54th edition"

[[shift]]
name = "day"
starts = "07:30"

[[section]]
name = "EW1"
process = "copper electrowinning"
cells = 48
rows = 2
cathodes_per_cell = 60
cathode_area_m2 = 2.0
rated_current_ka = 36.0
metal_value_per_kg = 9.2
electrode_gap_mm = 42
conductivity_s_m = 13.4
conductivity_at_c = 0
conductivity_per_c = 0.426
conductivity_per_metal_g_l = -0.356
conductivity_per_acid_g_l = 0.249
conductivity_accuracy_pct = 8
[section.targets]
current_efficiency_pct = 92.0
specific_energy_kwh_t = 1950.0
cell_volts = [1.8, 2.2]
"""


@pytest.fixture
def founded(database):
    with database.write() as session:
        found_plant(session, read_plant(PLANT), NOW_MS, "ana")
    return database


def plan(database):
    with database.read() as session:
        return house(session)


def test_a_correlation_is_kept_in_si_units(founded):
    terms = plan(founded).sections[0].terms_at(NOW_MS)

    assert terms.electrode_gap_m == pytest.approx(0.042)
    assert (terms.conductivity_s_m, terms.conductivity_per_k) == (13.4, 0.426)
    assert terms.conductivity_at_k == pytest.approx(273.15)
    assert terms.conductivity_per_metal_g_l == -0.356
    assert terms.conductivity_per_acid_g_l == 0.249
    assert terms.conductivity_accuracy == pytest.approx(0.08)
    assert plan(founded).terms_at(NOW_MS).standard_potentials == "crc 54th edition"


def test_what_is_not_said_is_none(database):
    text = "\n".join(
        line
        for line in PLANT.splitlines()
        if not line.startswith(("electrode_gap", "conductivity", "standard_potentials"))
    )
    with database.write() as session:
        found_plant(session, read_plant(text), NOW_MS, "ana")

    terms = plan(database).sections[0].terms_at(NOW_MS)
    assert (terms.electrode_gap_m, terms.conductivity_s_m, terms.conductivity_accuracy) == (
        None,
        None,
        None,
    )
    assert plan(database).terms_at(NOW_MS).standard_potentials is None


def test_the_plant_file_that_comes_out_is_the_one_that_went_in(founded):
    with founded.read() as session:
        text = plant_toml(session, NOW_MS)

    assert read_plant(text) == read_plant(PLANT)


@pytest.mark.parametrize(
    ("line", "instead", "key", "expected"),
    [
        ("conductivity_s_m = 13.4", "", "conductivity_at_c", "conductivity_s_m beside it"),
        ("conductivity_at_c = 0", "", "conductivity_at_c", "the temperature of"),
        ("electrode_gap_mm = 42", "electrode_gap_mm = 0", "electrode_gap_mm", "above 0"),
        (
            "conductivity_per_acid_g_l = 0.249",
            "conductivity_per_acid_g_l = 24.9",
            "conductivity_per_acid_g_l",
            "-10 to 10",
        ),
        ('"crc 54th edition"', '"crc 1954"', "standard_potentials", "one of crc recent"),
    ],
)
def test_what_is_wrong_is_said_by_its_key(line, instead, key, expected):
    with pytest.raises(PlantFileWrong) as wrong:
        read_plant(PLANT.replace(line, instead), "plant.toml")

    [fault] = wrong.value.faults
    assert key in fault.key
    assert expected in fault.expected


def test_a_measured_value_of_nothing_is_refused():
    text = PLANT.replace("conductivity_s_m = 13.4", "conductivity_s_m = 0")
    text = text.replace("conductivity_per_metal_g_l = -0.356", "").replace(
        "conductivity_per_acid_g_l = 0.249", ""
    )

    with pytest.raises(PlantFileWrong, match="S/m above 0"):
        read_plant(text)


def test_a_new_measurement_holds_from_its_date(founded):
    changes = {
        "conductivity_s_m": 57.0,
        "conductivity_at_c": 45.0,
        "conductivity_per_metal_g_l": None,
        "conductivity_per_acid_g_l": None,
    }
    with founded.write() as session:
        change_section(session, "EW1", changes, NOW_MS, "ines", "measured anew", NOW_MS)

    [section] = plan(founded).sections
    before, after = section.terms_at(NOW_MS - 1), section.terms_at(NOW_MS)
    assert (before.conductivity_s_m, after.conductivity_s_m) == (13.4, 57.0)
    assert after.conductivity_at_k == pytest.approx(318.15)
    assert after.conductivity_per_metal_g_l is None
    assert after.electrode_gap_m == before.electrode_gap_m


def test_another_table_of_potentials_holds_from_its_date(founded):
    with founded.write() as session:
        changes = {"standard_potentials": "crc recent"}
        change_house(session, changes, NOW_MS, "ines", "one table for all sites", NOW_MS)

    found = [plan(founded).terms_at(at).standard_potentials for at in (NOW_MS - 1, NOW_MS)]
    assert found == ["crc 54th edition", "crc recent"]
