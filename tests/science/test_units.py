"""Plant units go to SI and come back as they were."""

import numpy as np
import pytest

from server.science import electrical_units, energy_units, size_units, solution_units, units
from server.science.errors import OutOfRange

PAIRS = [
    ("amps_from_ka", "ka_from_amps", 28.5, 28_500.0),
    ("coulombs_from_kah", "kah_from_coulombs", 2.0, 7.2e6),
    ("joules_from_kwh", "kwh_from_joules", 3.0, 1.08e7),
    ("j_kg_from_kwh_t", "kwh_t_from_j_kg", 2000.0, 7.2e6),
    ("kg_c_from_kg_kah", "kg_kah_from_kg_c", 3.6, 1e-6),
    ("volts_from_millivolts", "millivolts_from_volts", 2031.0, 2.031),
    ("ohm_from_microohm", "microohm_from_ohm", 11.0, 11e-6),
    ("share_from_percent", "percent_from_share", 92.5, 0.925),
    ("kelvin_from_degc", "degc_from_kelvin", 45.0, 318.15),
    ("g_l_from_mg_l", "mg_l_from_g_l", 150.0, 0.15),
    ("m3_s_from_m3_h", "m3_h_from_m3_s", 400.0, 400.0 / 3600.0),
    ("kg_from_tonnes", "tonnes_from_kg", 2.5, 2500.0),
    ("seconds_from_hours", "hours_from_seconds", 6.5, 23_400.0),
    ("millimetres_from_metres", "metres_from_millimetres", 0.006, 6.0),
]


@pytest.mark.parametrize(("there", "back", "plant", "si"), PAIRS)
def test_a_number_goes_there_and_back(there, back, plant, si):
    assert getattr(units, there)(plant) == pytest.approx(si, rel=1e-15)
    assert getattr(units, back)(si) == pytest.approx(plant, rel=1e-15)


@pytest.mark.parametrize(("there", "back", "plant", "si"), PAIRS)
def test_an_array_goes_as_its_numbers_do(there, back, plant, si):
    numbers = np.array([plant, np.nan, 2 * plant])

    returned = getattr(units, back)(getattr(units, there)(numbers))

    np.testing.assert_allclose(returned, numbers, rtol=1e-14)


def test_every_conversion_of_the_four_files_is_gathered():
    files = (electrical_units, energy_units, size_units, solution_units)
    made = {
        name
        for file in files
        for name, member in vars(file).items()
        if callable(member) and getattr(member, "__module__", "") == file.__name__
    }

    assert made <= set(units.__all__)


def test_concentration_needs_the_molar_mass():
    assert units.mol_m3_from_g_l(40.0, 63.546e-3) == pytest.approx(629.465, rel=1e-6)
    assert units.g_l_from_mol_m3(629.465, 63.546e-3) == pytest.approx(40.0, rel=1e-6)


def test_a_price_per_kwh_is_paid_for_joules():
    price = units.price_per_j_from_price_per_kwh(0.082)

    assert price * units.joules_from_kwh(1000.0) == pytest.approx(82.0)


def test_stored_volts_are_whole_microvolts():
    assert units.microvolts_from_volts(2.0314) == 2_031_400
    assert units.microvolts_from_volts(np.array([0.3, -0.0000014])).tolist() == [300_000, -1]
    assert units.volts_from_microvolts(np.array([300_000, -1])).tolist() == [0.3, -1e-6]


def test_a_stored_voltage_comes_back_to_the_microvolt():
    volts = np.round(np.random.default_rng(seed=5).uniform(-5, 5, 1000), 6)

    np.testing.assert_allclose(
        units.volts_from_microvolts(units.microvolts_from_volts(volts)), volts, atol=1e-12
    )


@pytest.mark.parametrize("missing", [np.nan, np.inf])
def test_a_missing_voltage_cannot_be_stored(missing):
    with pytest.raises(OutOfRange, match="volts"):
        units.microvolts_from_volts(np.array([2.0, missing]))
