import pytest

from server.calculator.plant_values import section_basis
from server.calculator.texts import Day, Word
from server.storage.plant import house
from tests.factories import DAY_MS, NOW_MS, make_assay, make_section
from tests.web.pages.running import running_section


def basis_of(session, name, *needs):
    there = house(session)
    return section_basis(session, there, there.section(name), NOW_MS, frozenset(needs))


def test_the_set_up_fills_in_what_it_says(session):
    make_section(session, name="A")

    filled = basis_of(session, "A").filled

    assert {key: filled[key].value for key in ("current_ka", "cells", "cathodes")} == {
        "current_ka": 36.0,
        "cells": 10.0,
        "cathodes": 60.0,
    }
    assert filled["cathode_area_m2"].value == 2.0
    assert filled["differential_resistance_uohm"].value == 11.0
    assert filled["rectifier_efficiency_pct"].value == 97.0
    assert filled["energy_price_per_kwh"].value == 0.09
    assert filled["current_efficiency_pct"].origin.text == "target, set-up"


def test_a_resistance_that_nobody_stated_is_the_process_s_share(session):
    make_section(session, name="A", differential_resistance_ohm=None)

    basis = basis_of(session, "A")

    found = basis.filled["differential_resistance_uohm"]
    assert found.value == pytest.approx(0.20 * 2.0 / 36_000 * 1e6, rel=1e-3)
    assert "share" in found.origin.text
    # A half-width of 0.10 on a share of 0.20 is known to 0.29 of itself.
    assert basis.doubts["differential_resistance_uohm"].share == pytest.approx(0.5 / 3**0.5)


def test_the_efficiency_is_that_of_the_lots_pulled_lately(session):
    running_section(session)

    found = basis_of(session, "EW1", "efficiency").filled["current_efficiency_pct"]

    assert found.value == pytest.approx(93.01, abs=0.01)
    assert found.origin.parts == {"days": 30}


def test_without_lots_the_target_stands(session):
    make_section(session, name="A")

    found = basis_of(session, "A", "efficiency", "lot", "volts", "deviation", "assay").filled

    assert found["current_efficiency_pct"].value == 93.0
    assert found["volts"].value == 2.0
    assert found["metal_g_l"].origin.text == "typical of the process"
    assert {"net_kg", "deviation_mv"}.isdisjoint(found)


def test_the_last_lot_brings_its_weight_and_the_charge_of_its_cathodes(session):
    running_section(session)

    found = basis_of(session, "EW1", "lot").filled

    assert found["net_kg"].value == 6669.0
    assert (found["hours"].value, found["cells"].value) == (168.0, 1.0)
    assert found["current_ka"].value == pytest.approx(36.0)
    assert found["net_kg"].origin.parts["lot"] == "L-2"
    assert found["net_kg"].origin.parts["day"] == Day(NOW_MS - DAY_MS - 3_600_000)


def test_a_target_is_what_a_cathode_of_the_last_lot_weighed(session):
    running_section(session)

    assert basis_of(session, "EW1", "target").filled["target_kg"].value == 111.0


def test_without_a_lot_the_target_is_the_usual_growth(session):
    make_section(session, name="A")

    found = basis_of(session, "A", "target").filled["target_kg"]

    by_hand = 63.546 / (2 * 96485.33212331) * 3600 * 36 * 6 * 24 * 0.93 / 60
    assert found.value == pytest.approx(by_hand, rel=1e-2)


def test_the_voltage_is_the_middle_of_the_cells(session):
    running_section(session)

    assert basis_of(session, "EW1", "volts").filled["volts"].value == pytest.approx(2.03, abs=0.002)


def test_the_deviation_is_that_of_the_lowest_cell(session):
    running_section(session, low=(4,))

    basis = basis_of(session, "EW1", "deviation")

    found = basis.filled["deviation_mv"]
    assert found.value == pytest.approx(-240, abs=10)
    assert found.origin.parts["cell"] == 4
    assert basis.doubts["deviation_mv"].of(-240) > 1


def test_the_newest_assay_of_the_spent_electrolyte_counts(session):
    section = make_section(session, name="A")
    day = [NOW_MS - days * DAY_MS for days in range(4)]
    make_assay(session, section.id, stream="feed", at_ms=day[0], metal_g_l=48.0)
    make_assay(
        session, section.id, stream="spent", at_ms=day[1], metal_g_l=38.0, temperature_degc=None
    )
    make_assay(
        session, section.id, stream="spent", at_ms=day[2], metal_g_l=36.0, temperature_degc=46.0
    )

    found = basis_of(session, "A", "assay").filled

    assert found["metal_g_l"].value == 38.0
    assert found["metal_g_l"].origin.parts == {"stream": Word("spent"), "day": Day(day[1])}
    assert found["temperature_degc"].value == 46.0


def test_a_withdrawn_assay_does_not_count(session):
    section = make_section(session, name="A")
    make_assay(session, section.id, at_ms=NOW_MS, metal_g_l=38.0)
    make_assay(session, section.id, at_ms=NOW_MS, metal_g_l=38.0, revision=1, is_void=1)

    found = basis_of(session, "A", "assay").filled["metal_g_l"]
    assert found.origin.text == "typical of the process"


def test_the_gap_is_the_plant_s_where_it_states_one(session):
    make_section(session, name="A", electrode_gap_m=0.038)

    found = basis_of(session, "A").filled["gap_mm"]

    assert (found.value, found.origin.text) == (38.0, "gap, set-up")
