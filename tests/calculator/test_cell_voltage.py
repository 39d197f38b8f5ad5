import math

import pytest

from server.calculator.basis import chosen_basis
from server.calculator.inputs import InputsWrong
from server.calculator.sum import NotServed
from server.calculator.sums import sum_named
from server.calculator.work_out import put_in, worked
from server.science.electrolyte.conductivity import CONDUCTIVITIES, conductivity_s_m
from server.storage.plant import house
from tests.factories import NOW_MS, make_section

CELL_VOLTAGE = sum_named("cell-voltage")


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


def answer(session, given=(), **asked):
    """Results by key, and the whole, of a section or process with what was typed."""
    basis = chosen_basis(session, house(session), CELL_VOLTAGE, asked, NOW_MS)
    inputs, faults = put_in(CELL_VOLTAGE, basis, dict(given))
    assert faults == []
    found = worked(CELL_VOLTAGE, basis, inputs)
    return {result.output.key: result for result in found.results}, found


@pytest.fixture(autouse=True)
def section(session):
    return make_section(session, name="A")


def test_the_terms_add_up_to_the_voltage(session):
    found, _ = answer(session, section="A")

    parts = [result.value for result in found.values() if result.output.place == "part"]
    assert len(parts) == 5
    assert sum(parts) == pytest.approx(found["total_v"].value)


@pytest.mark.parametrize(
    ("process", "low", "high"),
    [
        ("copper electrowinning", 1.8, 2.2),
        ("copper electrorefining", 0.25, 0.40),
        ("zinc electrowinning", 3.3, 3.5),
    ],
)
def test_a_usual_cell_has_a_voltage_of_the_trade(session, process, low, high):
    found, _ = answer(session, process=process)

    total = found["total_v"]
    assert low <= total.value <= high
    assert 0 < total.u < (high - low)


def test_refining_has_no_reversible_voltage(session):
    found, _ = answer(session, process="copper electrorefining")

    assert found["reversible_v"].value == pytest.approx(0, abs=1e-12)


def test_the_electrolyte_takes_what_ohm_says(session):
    """300 A/m2 over 40 mm of 60 S/m with 5 % of gas."""
    given = {"current_density_a_m2": "300", "gap_mm": "40", "conductivity_s_m": "60"}

    found, _ = answer(session, given, process="copper electrowinning")

    assert found["electrolyte_v"].value == pytest.approx(300 * 0.040 / (60 * 0.95**1.5), rel=1e-6)


def test_a_decade_of_current_costs_a_slope_at_the_anode(session):
    low, _ = answer(session, {"current_density_a_m2": "60"}, process="copper electrowinning")
    high, _ = answer(session, {"current_density_a_m2": "600"}, process="copper electrowinning")

    slope_v = high["anode_v"].value - low["anode_v"].value
    assert 0.08 < slope_v < 0.16


def test_one_more_millimetre_is_what_the_sum_gives_for_it(session):
    here, _ = answer(session, {"gap_mm": "40"}, process="zinc electrowinning")
    wider, _ = answer(session, {"gap_mm": "41"}, process="zinc electrowinning")

    moved_mv = 1000 * (wider["total_v"].value - here["total_v"].value)
    assert here["per_mm_mv"].value == pytest.approx(moved_mv, rel=1e-6)


def test_warmth_and_acid_lower_the_voltage_and_current_raises_it(session):
    found, _ = answer(session, section="A")

    assert found["per_degc_mv"].value < 0
    assert found["per_10_acid_g_l_mv"].value < 0
    assert found["per_100_a_m2_mv"].value > 0
    assert found["per_mm_mv"].value > 0


def test_coated_anodes_are_chosen(session):
    lead, _ = answer(session, section="A")
    coated, whole = answer(session, section="A", anodes="coated")

    assert lead["anode_v"].value - coated["anode_v"].value == pytest.approx(0.35, abs=0.05)
    assert whole.basis.choice == "coated"


def test_anodes_that_are_not_known_are_refused(session):
    with pytest.raises(InputsWrong):
        answer(session, section="A", anodes="gold")
    with pytest.raises(InputsWrong):
        answer(session, process="zinc electrowinning", anodes="coated")


def test_a_process_without_a_model_is_told(session):
    with pytest.raises(NotServed) as told:
        answer(session, process="lead electrorefining")

    assert "copper electrowinning" in told.value.served


def test_the_doubt_is_that_of_its_budget(session):
    found, whole = answer(session, process="copper electrowinning")

    total = found["total_v"]
    assert sum(total.shares.values()) == pytest.approx(1)
    labels = {doubt.key for doubt in whole.model_doubts}
    assert set(list(total.shares)[:2]) <= labels


def test_a_conductivity_outside_its_range_is_said(session):
    _, inside = answer(session, {"temperature_degc": "60"}, process="copper electrowinning")
    _, outside = answer(session, {"temperature_degc": "35"}, process="copper electrowinning")

    assert inside.remarks == ()
    assert [remark.kind for remark in outside.remarks] == ["range"]


def test_the_plant_s_own_line_of_conductivity_counts(session):
    make_section(
        session,
        name="B",
        conductivity_s_m=62.0,
        conductivity_at_k=318.15,
        conductivity_per_k=0.4,
        conductivity_accuracy=0.03,
    )
    given = {"temperature_degc": "50"}

    found, whole = answer(session, given, section="B")

    assert found["between_plates_s_m"].value == pytest.approx((62 + 5 * 0.4) * 0.95**1.5)
    factor = next(doubt for doubt in whole.model_doubts if doubt.key == "conductivity_factor")
    assert factor.u == pytest.approx(0.03 / math.sqrt(3))


def test_without_an_own_line_the_correlation_counts(session):
    found, _ = answer(session, section="A")

    clear = conductivity_s_m(CONDUCTIVITIES["Cu"], 40.0, 180.0, 318.15)
    assert found["between_plates_s_m"].value == pytest.approx(float(clear) * 0.95**1.5)


def test_the_meter_is_set_against_the_terms(session):
    found, whole = answer(session, {"volts": "2.6"}, section="A")

    assert found["rest_v"].value == pytest.approx(2.6 - found["total_v"].value)
    assert whole.remarks[-1].kind == "note"


def test_the_resistance_of_a_cell_follows_from_the_slopes(session):
    found, _ = answer(session, section="A")

    by_hand = found["per_100_a_m2_mv"].value / 1000 / 100 / (60 * 2.0)
    assert found["differential_resistance_uohm"].value == pytest.approx(by_hand * 1e6)
