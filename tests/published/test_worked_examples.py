"""Worked examples with our own numbers, no printed source behind them.

Status: computed. Where a figure stands, it was computed in a library of reference values made apart
from this program; where "by hand" is written, the arithmetic stands in the test. "About 2000
kWh/t" for copper is looked up (IEEE Trans. Ind. Appl. 46 (2010) 1264; JOM 2024).
"""

import pytest

from server.science.constants import COBALT, COPPER, NICKEL
from server.science.faraday import (
    current_density_a_m2,
    current_efficiency,
    deposit_thickness_m,
    deposited_kg,
    specific_energy_from_volts_j_kg,
    specific_energy_j_kg,
)
from server.science.statistics.averages import hold_means
from server.science.stoichiometry import sulfuric_acid_made_kg
from server.science.units import kwh_t_from_j_kg

DAY_S = 86_400.0
# Ampere-hours per mole, F / 3600; and the equivalents in kg/kAh, by hand.
MOLE_AH = 26.8014811454
K_CU = 63.546 / (2 * MOLE_AH)
K_NI = 58.6934 / (2 * MOLE_AH)
K_CO = 58.933194 / (2 * MOLE_AH)
# 84 cathodes of two faces of 1.00 m2 at 320 A/m2.
HARVEST_AMPS = 84 * 2 * 1.00 * 320.0


def energy_kwh_t(volts, share, known):
    """kWh/t from volts and efficiency, as a plant quotes it."""
    return kwh_t_from_j_kg(specific_energy_from_volts_j_kg(volts, share, known))


def test_copper_winning_at_two_volts():
    assert energy_kwh_t(2.00, 0.92, COPPER) == pytest.approx(1833.76, abs=0.005)
    assert energy_kwh_t(2.00, 0.92, COPPER) == pytest.approx(2000, rel=0.10)


def test_efficiency_of_a_harvest():
    # By hand: 53.76 kA x 156 h x 1.1854942 kg/kAh = 9942.2 kg; 9250 of it.
    share = current_efficiency(9250.0, HARVEST_AMPS * 6.5 * DAY_S, COPPER)

    assert share == pytest.approx(9250 / (53.76 * 156 * K_CU), rel=1e-9)
    assert share == pytest.approx(0.930376, abs=5e-7)


def test_an_implausible_harvest_is_shown_above_one():
    share = current_efficiency(10_160.0, HARVEST_AMPS * 6.5 * DAY_S, COPPER)

    assert share * 100 == pytest.approx(102.19, abs=0.005)


def test_thickness_of_a_week():
    kg_m2 = 0.92 * deposited_kg(300.0 * 7 * DAY_S, COPPER)

    assert kg_m2 == pytest.approx(54.969, abs=0.0005)
    assert deposit_thickness_m(kg_m2, 1.0, COPPER) * 1000 == pytest.approx(6.1349, abs=5e-5)


def test_nickel_winning():
    # By hand: 3.6 V / (k x 0.95); 220 A/m2 x 80 m2 = 17.6 kA, x 24 h x k x 0.95.
    amps = 220.0 * 50 * 1.6

    assert energy_kwh_t(3.6, 0.95, NICKEL) == pytest.approx(1000 * 3.6 / (K_NI * 0.95), rel=1e-9)
    kg = 0.95 * deposited_kg(amps * DAY_S, NICKEL)
    assert kg == pytest.approx(17.6 * 24 * K_NI * 0.95, rel=1e-9)
    assert current_density_a_m2(amps, 50 * 1.6) == pytest.approx(220.0)


def test_cobalt_winning():
    # By hand: 3.8 V / (k x 0.92).
    assert energy_kwh_t(3.8, 0.92, COBALT) == pytest.approx(1000 * 3.8 / (K_CO * 0.92), rel=1e-9)


def test_a_current_in_steps_is_integrated():
    # By hand: 28.0 x 60 + 30.5 x 48 + 0 x 2 + 29.2 x 34 = 4136.8 kAh; 4760 / (k x 4136.8).
    hour_ms = 3_600_000
    at_ms = [0, 60 * hour_ms, 108 * hour_ms, 110 * hour_ms]
    amps = [28.0e3, 30.5e3, 0.0, 29.2e3]

    means = hold_means(at_ms, amps, [0, 144 * hour_ms], max_hold_ms=100 * hour_ms)

    charge_c = means.mean[0] * means.covered_ms[0] / 1000
    assert charge_c / 3.6e6 == pytest.approx(4136.8, rel=1e-12)
    share = current_efficiency(4760.0, charge_c, COPPER)
    assert share == pytest.approx(4760 / (K_CU * 4136.8), rel=1e-9)


def test_mean_current_times_calendar_would_be_wrong():
    # By hand: the mean of the three running currents, over the whole 144 h, is 1.76 % too much.
    by_mean = (28.0 + 30.5 + 29.2) / 3 * 144

    assert by_mean / 4136.8 == pytest.approx(1.0176, abs=5e-5)


def test_cells_string_and_rectifier_are_kept_apart():
    made_kg_s = 60 * 0.93 * deposited_kg(30e3, COPPER)
    cells_w, bars_w = 60 * 2.05 * 30e3, 12.0 * 30e3

    cells_kwh_t = kwh_t_from_j_kg(specific_energy_j_kg(cells_w, made_kg_s))
    mains_kwh_t = kwh_t_from_j_kg(specific_energy_j_kg((cells_w + bars_w) / 0.975, made_kg_s))

    assert cells_kwh_t == pytest.approx(1859.39, abs=0.005)
    assert mains_kwh_t == pytest.approx(2093.13, abs=0.005)


def test_what_the_electrolyte_loses_and_gains():
    kg_h = 80 * 0.92 * deposited_kg(30e3 * 3600, COPPER)

    assert kg_h == pytest.approx(2617.57, abs=0.005)
    assert kg_h / 400 == pytest.approx(6.54393, abs=5e-6)
    assert sulfuric_acid_made_kg(kg_h, COPPER) / 400 == pytest.approx(10.0994, abs=5e-5)


def test_copper_not_plated_because_of_a_short():
    # 1000 A for 24 h.
    assert deposited_kg(1000.0 * DAY_S, COPPER) == pytest.approx(28.4519, abs=5e-5)
