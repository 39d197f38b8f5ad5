"""The books of a copper refinery: anodes, slimes, copper in solution and the bleed.

Status: computed from balances, in a library of reference values made apart from this program;
tonnages, assays and limits are typical, not measured. From memory: usual scrap and slimes
(textbooks and surveys). Looked up: where arsenic goes, in a technology supplier's note.
"""

import math

import pytest

from server.science.refining.anodes import (
    USUAL_SCRAP_SHARES,
    anode_life_s,
    anodic_efficiency,
    crop_cathode_kg,
    crops_per_anode,
    dissolved_kg,
    scrap_share,
)
from server.science.refining.bleed import (
    USUAL_ARSENIC_SHARES,
    bleed_m3_s,
    concentration_after_g_l,
    governing_impurity,
    impurity_to_solution_kg_s,
    time_to_limit_s,
)
from server.science.refining.copper_balance import copper_build_up_kg_s, liberator_cells
from server.science.refining.slimes import USUAL_SLIMES_SHARES, slimes_kg

DAY_S = 86_400
# 63.546 / (2 x 26.8014811454), kg/kAh.
KG_KAH = 1.18549420


def test_mass_given_up_by_an_anode():
    assert dissolved_kg(370.0, 0.15) == pytest.approx(314.5, rel=1e-12)


def test_life_of_an_anode():
    days = anode_life_s(370.0, 0.15, 620.0, 0.99) / DAY_S

    assert days == pytest.approx(18.0087, abs=5e-5)
    assert days == pytest.approx(314.5 / (KG_KAH * 0.620 * 0.99) / 24, rel=1e-7)


def test_scrap_after_seventeen_days():
    found = scrap_share(370.0, 620.0, 0.99, 17 * DAY_S)

    assert 100 * found == pytest.approx(19.761, abs=5e-4)
    assert anodic_efficiency(370.0, 370.0 * found, 620.0 * 17 * DAY_S) == pytest.approx(0.99)


def test_a_cathode_of_ten_days():
    assert crop_cathode_kg(620.0, 10 * DAY_S, 0.96) == pytest.approx(169.345, abs=5e-4)


def test_two_crops_of_nine_days_fit():
    assert crops_per_anode(18.0087 * DAY_S, 9 * DAY_S) == pytest.approx(2.0, abs=0.005)


def test_copper_that_piles_up():
    kg_day = copper_build_up_kg_s(30e3, 1000, 0.990, 0.965, 3000 / DAY_S) * DAY_S

    assert kg_day == pytest.approx(24_338.9, abs=0.05)
    assert kg_day == pytest.approx(KG_KAH * 24 * 30 * 1000 * 0.025 + 3000, rel=1e-7)


def test_liberators_that_take_it_out():
    found = liberator_cells(24_338.9 / DAY_S, 25e3, 0.90)

    assert found == pytest.approx(38.02, abs=0.005)
    assert math.ceil(found) == 39


def test_bleed_for_nickel():
    comes = impurity_to_solution_kg_s(900e3 / DAY_S, 0.0018, 0.97)

    assert comes * DAY_S == pytest.approx(1571.4, abs=0.05)
    assert bleed_m3_s(comes, 15.0) * DAY_S == pytest.approx(104.76, abs=0.005)


def test_bleed_for_arsenic():
    comes = impurity_to_solution_kg_s(900e3 / DAY_S, 0.0012, 0.70)

    assert bleed_m3_s(comes, 10.0, 20 / DAY_S) * DAY_S == pytest.approx(73.6, abs=0.05)


def test_nickel_governs():
    assert governing_impurity({"As": 73.6 / DAY_S, "Ni": 104.76 / DAY_S}).name == "Ni"


@pytest.mark.parametrize(("bleed_m3_day", "g_l"), [(0.0, 21.4284), (104.76, 13.3999)])
def test_nickel_after_thirty_days(bleed_m3_day, g_l):
    after = (12.0, 1571.4 / DAY_S, bleed_m3_day / DAY_S, 5000.0, 30 * DAY_S)

    assert concentration_after_g_l(*after) == pytest.approx(g_l, abs=5e-5)


def test_the_way_back_from_that_concentration():
    days = time_to_limit_s(12.0, 13.3999, 1571.4 / DAY_S, 104.76 / DAY_S, 5000.0) / DAY_S

    # 0.00005 g/L of the printed figure is 0.0015 days at the slope there.
    assert days == pytest.approx(30.0, abs=0.002)


def test_slimes_of_a_day():
    assert slimes_kg(900e3, 0.0065) == pytest.approx(5850.0, rel=1e-12)


def test_usual_slimes_and_scrap_are_those_of_memory():
    assert [1000 * share for share in USUAL_SLIMES_SHARES] == [1.0, 10.0]
    assert USUAL_SCRAP_SHARES == (0.12, 0.20)
    assert USUAL_SLIMES_SHARES[0] < 0.0065 < USUAL_SLIMES_SHARES[1]


def test_where_arsenic_goes_is_as_the_note_has_it():
    assert USUAL_ARSENIC_SHARES == {
        "slimes": (0.20, 0.30),
        "liberator product": (0.20, 0.50),
        "bleed": (0.20, 0.50),
    }
