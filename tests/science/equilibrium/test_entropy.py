"""How standard potentials move with temperature."""

import numpy as np
import pytest

from server.science.constants import CUPROUS_COPPER, GOLD, ZINC, metal
from server.science.equilibrium.entropy import (
    COEFFICIENT_RANGE,
    COUPLE_MOLES,
    ENTROPIES_J_MOL_K,
    couple_coefficient_v_k,
    metal_coefficient_v_k,
    standard_at_v,
    temperature_coefficient_v_k,
)
from server.science.equilibrium.tables import DEFAULT_TABLE
from server.science.errors import OutOfRange, UnknownName


def test_the_hydrogen_electrode_stays_at_nothing():
    assert couple_coefficient_v_k("H+/H2") == 0.0


def test_a_couple_of_two_ions_takes_half_a_hydrogen():
    # By hand: (-137.7 + 315.9 - 130.684 / 2) / F.
    by_hand = (-137.7 + 315.9 - 65.342) / 96485.33212

    assert couple_coefficient_v_k("Fe3+/Fe2+") == pytest.approx(by_hand, rel=1e-9)


def test_steps_of_copper_add_up_to_the_whole():
    whole = 2 * metal_coefficient_v_k(metal("Cu"))
    steps = couple_coefficient_v_k("Cu2+/Cu+") + metal_coefficient_v_k(CUPROUS_COPPER)

    assert steps == pytest.approx(whole, abs=1e-12)


def test_lead_and_its_sulfate_add_up():
    # PbO2 to PbSO4 to Pb is PbO2 + 4 H+ + 4 e = Pb + 2 H2O; by hand from the entropies of those.
    by_hand = (64.81 + 2 * 69.91 - 68.6 - 2 * 130.684) / (4 * 96485.33212)

    both = (couple_coefficient_v_k("PbO2/PbSO4") + couple_coefficient_v_k("PbSO4/Pb")) / 2

    assert both == pytest.approx(by_hand, rel=1e-9)


def test_every_couple_here_is_in_the_default_table():
    assert COUPLE_MOLES.keys() <= DEFAULT_TABLE.couples.keys()


def test_every_species_of_a_couple_has_its_entropy():
    named = {species for _, moles in COUPLE_MOLES.values() for species in moles}

    assert named <= ENTROPIES_J_MOL_K.keys()


def test_a_straight_line_through_the_table():
    volts = standard_at_v(1.229, -0.8e-3, [273.15, 298.15, 323.15, np.nan])

    np.testing.assert_allclose(volts, [1.249, 1.229, 1.209, np.nan], rtol=1e-12)


def test_where_the_line_may_be_used():
    assert COEFFICIENT_RANGE.outside([260.0, 330.0, 380.0]).tolist() == [True, False, True]


def test_what_is_not_held_is_refused():
    with pytest.raises(UnknownName, match="Ce4"):
        couple_coefficient_v_k("Ce4+/Ce3+")
    with pytest.raises(UnknownName, match="Au"):
        metal_coefficient_v_k(GOLD)


def test_no_electrons_are_refused():
    with pytest.raises(OutOfRange, match="electrons"):
        temperature_coefficient_v_k(10.0, 0)


def test_zinc_by_hand():
    by_hand = (41.63 + 112.1 - 130.684) / (2 * 96485.33212)

    assert metal_coefficient_v_k(ZINC) == pytest.approx(by_hand, rel=1e-9)
