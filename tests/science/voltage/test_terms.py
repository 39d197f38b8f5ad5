"""The terms of a cell voltage: their sum, the meter, and what they answer to."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrolyte.conductivity import CONDUCTIVITIES, plant_conductivity
from server.science.equilibrium.tables import potential_table
from server.science.errors import OutOfRange, ScienceError, UnknownName
from server.science.processes import PROCESSES, process
from server.science.voltage.terms import (
    CELL_MODELS,
    VoltageTerms,
    bath_conductivity_s_m,
    cell_model,
    cell_terms,
    terms_without_model,
)

COPPER = cell_model("copper electrowinning")
REFINING = cell_model("copper electrorefining")
ZINC = cell_model("zinc electrowinning")
BATH = plant_conductivity(60.0, 318.15)
AT = (300.0, 318.15, 40.0, 180.0, 0.040)


def usual(model):
    """The usual conditions of a model, in the order of the terms' inputs."""
    at = model.usual
    return (at.current_density_a_m2, at.temperature_k, at.metal_g_l, at.acid_g_l, at.gap_m)


def test_the_sum_is_that_of_what_is_stated():
    whole = VoltageTerms(*(np.asarray(volts) for volts in (0.9, 0.5, 0.05, 0.3, 0.2)))
    part = replace(whole, anode_v=None, contacts_v=None)

    assert whole.total_v == pytest.approx(1.95)
    assert part.total_v == pytest.approx(1.25)
    assert list(part.stated()) == ["reversible_v", "cathode_v", "electrolyte_v"]


def test_contacts_that_are_not_stated_are_what_the_meter_has_left():
    terms = VoltageTerms(*(np.asarray([volts, volts]) for volts in (0.9, 0.5, 0.05, 0.3)))

    split = terms.against_meter([2.00, np.nan])

    assert split.terms.contacts_v[0] == pytest.approx(0.25)
    assert split.rest_v[0] == 0.0
    assert np.isnan(split.rest_v[1])


def test_stated_contacts_leave_a_rest_of_either_sign():
    terms = VoltageTerms(*(np.asarray(volts) for volts in (0.9, 0.5, 0.05, 0.3, 0.2)))

    assert terms.against_meter(2.00).rest_v == pytest.approx(0.05)
    assert terms.against_meter(1.90).rest_v == pytest.approx(-0.05)
    assert terms.against_meter(2.00).terms is terms


@pytest.mark.parametrize("model", CELL_MODELS.values(), ids=CELL_MODELS)
def test_terms_and_rest_add_up_to_the_meter(model):
    split = cell_terms(model, *usual(model)).against_meter(3.21)

    assert split.terms.total_v + split.rest_v == pytest.approx(3.21)


def test_electrolyte_and_contacts_by_hand():
    # Gas of 5 %: 60 x 0.95^1.5 = 55.557 S/m; 300 x 0.04 / 55.557 = 0.21600 V.
    # Contacts: the middle of 50 to 300 mV at 300 A/m2.
    terms = cell_terms(COPPER, *AT, conductivity=BATH)

    assert terms.electrolyte_v == pytest.approx(12.0 / (60.0 * 0.95**1.5), rel=1e-9)
    assert terms.contacts_v == pytest.approx(0.175, rel=1e-9)


def test_a_bag_belongs_to_the_electrolyte():
    nickel = cell_model("nickel electrowinning")
    at = list(usual(nickel))
    at[-1] = 0.0

    # Without a gap the bag's 1.5 mohm m2 are left: 0.33 V at 220 A/m2.
    assert cell_terms(nickel, *at).electrolyte_v == pytest.approx(220.0 * 1.5e-3)


def test_refining_has_no_reversible_voltage():
    terms = cell_terms(REFINING, *usual(REFINING))

    assert terms.reversible_v == 0.0


def test_another_table_moves_only_the_reversible_voltage():
    nickel = cell_model("nickel electrowinning")
    new = cell_terms(nickel, *usual(nickel))
    old = cell_terms(nickel, *usual(nickel), table=potential_table("crc 54th edition"))

    # -0.257 V in the recent table, -0.230 V in the older: 27 mV less to pay.
    assert old.reversible_v - new.reversible_v == pytest.approx(-0.027, abs=1e-9)
    assert old.total_v - new.total_v == pytest.approx(-0.027, abs=1e-9)


def test_a_kindred_electrolyte_counts_the_metal_mole_for_mole():
    cadmium = cell_model("cadmium electrowinning")
    zinc = replace(ZINC, gas_share=cadmium.gas_share)

    # 100 g/L cadmium are 100 x 65.38 / 112.414 = 58.16 g/L zinc.
    kindred = bath_conductivity_s_m(cadmium, 100.0, 100.0, 308.15)

    assert kindred == pytest.approx(
        bath_conductivity_s_m(zinc, 100.0 * 65.38 / 112.414, 100.0, 308.15)
    )


def test_a_plants_own_correlation_takes_the_metal_as_it_is():
    cadmium = cell_model("cadmium electrowinning")
    own = CONDUCTIVITIES["Zn"]

    stated = bath_conductivity_s_m(cadmium, 100.0, 100.0, 308.15, own)
    kindred = bath_conductivity_s_m(cadmium, 100.0, 100.0, 308.15)

    # 41.84 g/L less zinc at 0.30 S/m each, with 5 % of gas.
    moles = 100.0 - 100.0 * 65.38 / 112.414
    assert kindred - stated == pytest.approx(0.30 * moles * 0.95**1.5)


def test_further_metals_take_from_the_conductivity():
    pure = cell_terms(REFINING, *usual(REFINING))
    nickel = cell_terms(REFINING, *usual(REFINING), others_g_l={"Ni": 15.0})

    assert nickel.electrolyte_v > 1.05 * pure.electrolyte_v


def test_a_limit_of_supply_moves_only_the_cathode():
    free, held = cell_terms(COPPER, *AT), cell_terms(COPPER, *AT, limiting_a_m2=850.0)

    assert held.cathode_v > free.cathode_v + 0.005
    assert held.total_v - free.total_v == pytest.approx(held.cathode_v - free.cathode_v)


def test_a_missing_input_is_missing_where_it_is_asked_for():
    terms = cell_terms(COPPER, 300.0, 318.15, [40.0, np.nan], 180.0, [[0.04], [np.nan]])

    assert terms.total_v.shape == (2, 2)
    assert np.isnan(terms.total_v).tolist() == [[False, True], [True, True]]
    assert not np.isnan(terms.anode_v).any()


def test_a_cell_without_current_has_no_overpotentials_to_state():
    terms = cell_terms(COPPER, [0.0, 300.0], *AT[1:])

    assert np.isnan([terms.anode_v[0], terms.cathode_v[0]]).all()
    assert terms.electrolyte_v[0] == 0.0
    assert np.isfinite(terms.total_v[1])


@pytest.mark.parametrize(
    ("place", "value", "quantity"),
    [
        (0, -1.0, "current"),
        (1, 0.0, "temperature_k"),
        (2, 0.0, "metal_g_l"),
        (3, 0.0, "acid_g_l"),
        (4, -0.01, "gap_m"),
    ],
)
def test_an_impossible_input_is_named(place, value, quantity):
    at = list(AT)
    at[place] = value

    with pytest.raises(OutOfRange, match=quantity):
        cell_terms(COPPER, *at)


CONDITIONS = {
    "temperature_k": st.floats(303.15, 333.15),
    "metal_g_l": st.floats(25.0, 70.0),
    "acid_g_l": st.floats(100.0, 220.0),
    "gap_m": st.floats(0.02, 0.06),
}


@given(
    one=st.floats(50.0, 800.0), other=st.floats(50.0, 800.0), at=st.fixed_dictionaries(CONDITIONS)
)
@pytest.mark.parametrize("model", [COPPER, REFINING, ZINC], ids=lambda model: model.title)
def test_the_voltage_rises_with_the_current(model, one, other, at):
    low, high = sorted((one, other))

    volts = cell_terms(model, np.array([low, high]), **at).total_v

    assert volts[0] <= volts[1]
    assert volts[0] < volts[1] or high - low < 1e-6


@given(amps_m2=st.floats(100.0, 700.0), at=st.fixed_dictionaries(CONDITIONS))
@pytest.mark.parametrize("model", [COPPER, REFINING, ZINC], ids=lambda model: model.title)
def test_no_term_is_negative(model, amps_m2, at):
    terms = cell_terms(model, amps_m2, **at).stated()

    assert all(volts >= 0.0 for volts in terms.values())


def test_aluminium_is_its_reversible_voltage_and_the_rest():
    terms = terms_without_model(process("aluminium electrolysis"), [8000.0, 9000.0], 1233.15)

    split = terms.against_meter(4.2)

    assert split.terms.reversible_v.tolist() == pytest.approx([1.19, 1.19], abs=0.005)
    assert (split.rest_v + split.terms.total_v).tolist() == pytest.approx([4.2, 4.2])
    assert split.terms.contacts_v is None


@pytest.mark.parametrize("name", [name for name in PROCESSES if "refining" in name])
def test_refining_without_a_model_is_electrolyte_and_the_rest(name):
    terms = terms_without_model(PROCESSES[name], 200.0, 308.15, 0.03, [20.0, np.nan])

    assert terms.reversible_v[0] == 0.0
    assert terms.electrolyte_v[0] == pytest.approx(0.3)
    assert np.isnan(terms.total_v[1])


def test_winning_asks_for_its_solution():
    with pytest.raises(ScienceError, match="process"):
        terms_without_model(process("zinc electrowinning"), 500.0, 311.15)


def test_an_unknown_further_metal_is_refused():
    with pytest.raises(UnknownName, match="further metal"):
        cell_terms(COPPER, *AT, others_g_l={"Zn": 5.0})
