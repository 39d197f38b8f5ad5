import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.constants import LEAD
from server.science.errors import OutOfRange
from server.science.refining.anodes import (
    anode_life_s,
    anodic_efficiency,
    crop_cathode_kg,
    crops_per_anode,
    dissolved_kg,
    scrap_share,
)

DAY_S = 86_400


@given(st.floats(50.0, 600.0), st.floats(0.05, 0.5), st.floats(50.0, 1000.0), st.floats(0.9, 1.02))
def test_after_its_life_an_anode_is_its_scrap(anode, scrap, amps, efficiency):
    life = anode_life_s(anode, scrap, amps, efficiency)

    assert scrap_share(anode, amps, efficiency, life) == pytest.approx(scrap, rel=1e-9)


def test_scrap_and_mass_given_up_make_the_anode():
    assert dissolved_kg(400.0, [0.0, 0.2, 1.0]) == pytest.approx([400.0, 320.0, 0.0])


def test_an_anode_eaten_through_is_shown_not_clipped():
    assert scrap_share(370.0, 620.0, 0.99, 30 * DAY_S) < 0.0


def test_a_heavier_metal_wears_faster():
    copper = anode_life_s(300.0, 0.2, 600.0, 1.0)
    lead = anode_life_s(300.0, 0.2, 600.0, 1.0, LEAD)

    assert copper / lead == pytest.approx(207.2 / 63.546, rel=1e-9)


def test_efficiency_is_found_again_from_the_weights():
    left = scrap_share(370.0, 620.0, 0.985, 15 * DAY_S)

    found = anodic_efficiency(370.0, 370.0 * left, 620.0 * 15 * DAY_S)

    assert found == pytest.approx(0.985, rel=1e-12)


def test_no_charge_gives_no_efficiency():
    assert np.isnan(anodic_efficiency(370.0, 370.0, 0.0))


def test_crops_are_not_rounded():
    assert crops_per_anode(18 * DAY_S, [6 * DAY_S, 10 * DAY_S]) == pytest.approx([3.0, 1.8])


def test_a_cathode_grows_with_current_time_and_efficiency():
    once = crop_cathode_kg(300.0, 5 * DAY_S, 0.5)

    assert crop_cathode_kg(600.0, 10 * DAY_S, 1.0) == pytest.approx(8 * float(once))


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    assert list(np.isnan(anode_life_s([370.0, np.nan], 0.15, 620.0, 0.99))) == [False, True]
    assert list(np.isnan(scrap_share(370.0, [620.0, np.nan], 0.99, DAY_S))) == [False, True]
    assert list(np.isnan(crops_per_anode([1.0, np.nan], 1.0))) == [False, True]
    assert list(np.isnan(anodic_efficiency([370.0, np.nan], 60.0, 1e9))) == [False, True]


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: dissolved_kg(-1.0, 0.1), "anode_kg"),
        (lambda: dissolved_kg(370.0, 1.1), "scrap_share"),
        (lambda: anode_life_s(370.0, 0.1, 0.0, 0.99), "amps"),
        (lambda: anode_life_s(370.0, 0.1, 620.0, 0.0), "anodic_efficiency"),
        (lambda: scrap_share(0.0, 620.0, 0.99, 1.0), "anode_kg"),
        (lambda: crops_per_anode(1.0, 0.0), "crop_s"),
        (lambda: crop_cathode_kg(-1.0, 1.0, 0.9), "amps"),
        (lambda: anodic_efficiency(370.0, -1.0, 1.0), "scrap_kg"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
