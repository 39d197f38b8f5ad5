"""Faraday's law and what follows from it."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.constants import COPPER, CUPROUS_COPPER, METALS, ZINC
from server.science.errors import OutOfRange
from server.science.faraday import (
    charge_for_c,
    current_density_a_m2,
    current_efficiency,
    deposit_thickness_m,
    deposited_kg,
    equivalent_kg_c,
    specific_energy_from_volts_j_kg,
    specific_energy_j_kg,
)


def test_half_the_electrons_make_twice_the_metal():
    assert equivalent_kg_c(CUPROUS_COPPER) == pytest.approx(2 * equivalent_kg_c(COPPER), rel=1e-15)


@pytest.mark.parametrize("known", METALS.values(), ids=METALS)
def test_charge_and_mass_are_inverse(known):
    assert deposited_kg(charge_for_c(123.4, known), known) == pytest.approx(123.4, rel=1e-14)


CHARGES_C = st.floats(0.0, 1e15)


@given(one_c=CHARGES_C, other_c=CHARGES_C, factor=st.floats(0.0, 1e3))
@pytest.mark.parametrize("known", METALS.values(), ids=METALS)
def test_mass_is_linear_in_charge(known, one_c, other_c, factor):
    both_kg = deposited_kg(one_c + other_c, known)
    parts_kg = deposited_kg(one_c, known) + deposited_kg(other_c, known)

    assert both_kg == pytest.approx(parts_kg, rel=1e-12, abs=1e-300)
    assert deposited_kg(factor * one_c, known) == pytest.approx(
        factor * deposited_kg(one_c, known), rel=1e-12, abs=1e-300
    )


@given(mass_kg=st.floats(0.0, 1e9))
@pytest.mark.parametrize("known", METALS.values(), ids=METALS)
def test_the_charge_of_any_mass_makes_it_again(known, mass_kg):
    assert deposited_kg(charge_for_c(mass_kg, known), known) == pytest.approx(mass_kg, rel=1e-14)


def test_masses_of_parts_add_up():
    parts = deposited_kg([1e6, 2e6, 3e6], COPPER)

    assert parts.sum() == pytest.approx(deposited_kg(6e6, COPPER), rel=1e-15)


def test_too_much_metal_is_reported_not_clipped():
    assert current_efficiency(2 * deposited_kg(1e7, COPPER), 1e7, COPPER) == pytest.approx(2)


def test_no_charge_gives_no_answer():
    assert np.isnan(current_efficiency(5.0, 0.0, COPPER))


def test_no_metal_from_much_charge_is_an_efficiency_of_zero():
    assert current_efficiency(0.0, 1e7, COPPER) == 0.0


@pytest.mark.parametrize(
    ("stripped_kg", "charge_c", "quantity"),
    [(-0.1, 1e7, "stripped_kg"), (5.0, [1e7, -1.0], "charge_c"), (np.inf, 1e7, "stripped_kg")],
)
def test_an_impossible_quantity_is_named(stripped_kg, charge_c, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        current_efficiency(stripped_kg, charge_c, COPPER)


def test_missing_stays_missing_and_leaves_the_others_alone():
    efficiency = current_efficiency([100.0, np.nan, 100.0], [1e9, 1e9, np.nan], ZINC)

    assert np.isnan(efficiency).tolist() == [False, True, True]


def test_shapes_are_broadcast():
    assert current_efficiency(np.ones((3, 1)), np.full(4, 1e7), COPPER).shape == (3, 4)


def test_energy_from_volts_is_energy_over_mass():
    charge_c, volts, efficiency = 30e3 * 86_400, 2.05, 0.93
    made_kg = efficiency * deposited_kg(charge_c, COPPER)

    by_integral = specific_energy_j_kg(volts * charge_c, made_kg)

    by_formula = specific_energy_from_volts_j_kg(volts, efficiency, COPPER)
    assert by_formula == pytest.approx(by_integral, rel=1e-14)


def test_no_metal_has_no_energy_per_kilogram():
    assert np.isnan(specific_energy_j_kg(1e9, 0.0))
    assert np.isnan(specific_energy_from_volts_j_kg(2.0, 0.0, COPPER))


@pytest.mark.parametrize(
    ("function", "arguments", "quantity"),
    [
        (deposited_kg, (-1.0, COPPER), "charge_c"),
        (charge_for_c, (-1.0, COPPER), "mass_kg"),
        (specific_energy_j_kg, (-1.0, 1.0), "energy_j"),
        (specific_energy_j_kg, (1.0, -1.0), "mass_kg"),
        (specific_energy_from_volts_j_kg, (-2.0, 0.9, COPPER), "volts"),
        (specific_energy_from_volts_j_kg, (2.0, -0.9, COPPER), "current_efficiency"),
        (deposit_thickness_m, (-1.0, 1.0, COPPER), "mass_kg"),
        (deposit_thickness_m, (1.0, 0.0, COPPER), "area_m2"),
        (current_density_a_m2, (-1.0, 1.0), "amps"),
        (current_density_a_m2, (1.0, 0.0), "area_m2"),
    ],
)
def test_every_function_names_what_it_refuses(function, arguments, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        function(*arguments)


def test_a_deposit_of_its_own_density_is_a_metre_thick():
    assert deposit_thickness_m(8960.0, 1.0, COPPER) == pytest.approx(1.0)
