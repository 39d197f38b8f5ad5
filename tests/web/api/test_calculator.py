import json

import pytest

from server.calculator.sums import SUMS
from tests.factories import make_section
from tests.web.api.against_schema import faults
from tests.web.pages.running import running_section

# Faraday constant of the SI (exact by its two constants) and IUPAC atomic weights, by hand.
FARADAY_C_MOL = 96485.33212331
K_CU = 63.546 / (2 * FARADAY_C_MOL) * 3600
K_NI = 58.6934 / (2 * FARADAY_C_MOL) * 3600
K_AG = 107.8682 / FARADAY_C_MOL * 3600
"""Grams for each ampere-hour, the same number in kg/kAh."""


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def asked(client, name, **params):
    """The results of a sum by their keys, and the whole answer."""
    answer = client.get(f"/api/v1/calculator/{name}", params=params)
    assert answer.status_code == 200, answer.text
    told = answer.json()
    return {result["key"]: result for result in told["results"]}, told


def refused(client, name, **params):
    answer = client.get(f"/api/v1/calculator/{name}", params=params)
    assert answer.status_code == 422, answer.text
    return answer.json()["errors"]


def test_the_list_tells_every_sum_with_its_inputs_and_sources(client, section):
    told = client.get("/api/v1/calculator").json()["sums"]

    assert [found["name"] for found in told] == list(SUMS)
    for found in told:
        assert found["formula"]
        assert found["sources"]
        assert found["results"]
        assert {each["key"] for each in found["inputs"]}


def test_a_section_of_forty_cells_and_its_ampere_hours(client, section):
    found, _ = asked(client, "charge-to-mass", charge_kah=8400, cells=40)

    assert found["theoretical_kg"]["value"] == pytest.approx(40 * 8400 * K_CU, rel=1e-6)


def test_a_cell_is_judged_by_what_the_scale_says(client, section):
    """84 cathodes of 1 m2 a face at 320 A/m2 for 6.5 days, 9250 kg."""
    params = {"current_ka": 84 * 2 * 320 / 1000, "hours": 6.5 * 24, "cells": 1, "net_kg": 9250}

    found, told = asked(client, "efficiency-from-weight", **params, starter_kg=0)

    by_hand = 9250 / (53.76 * 156 * K_CU) * 100
    assert found["current_efficiency_pct"]["value"] == pytest.approx(by_hand, rel=1e-6)
    assert told["remarks"] == []


def test_more_metal_than_the_charge_could_make_is_shown_and_flagged(client, section):
    params = {"current_ka": 53.76, "hours": 156, "cells": 1, "net_kg": 10_160, "starter_kg": 0}

    found, told = asked(client, "efficiency-from-weight", **params)

    assert found["current_efficiency_pct"]["value"] == pytest.approx(102.19, rel=1e-4)
    assert [remark["kind"] for remark in told["remarks"]] == ["warning"]


def test_thickness_of_a_week_of_copper(client, section):
    found, _ = asked(
        client,
        "deposit-thickness",
        process="copper electrowinning",
        current_density_a_m2=300,
        hours=168,
        current_efficiency_pct=92,
        density_kg_m3=8960,
    )

    assert found["kg_m2"]["value"] == pytest.approx(54.969, rel=1e-4)
    assert found["thickness_mm"]["value"] == pytest.approx(6.1349, rel=1e-4)


def test_nickel_at_220_amperes_a_square_metre(client, section):
    of_nickel = {"process": "nickel electrowinning", "current_efficiency_pct": 95}

    energy, _ = asked(client, "energy-per-tonne", **of_nickel, volts=3.6)
    mass, _ = asked(
        client, "charge-to-mass", **of_nickel, current_ka=0.22 * 50 * 1.6, hours=24, cells=1
    )

    assert energy["cells_kwh_t"]["value"] == pytest.approx(3600 / (K_NI * 0.95), rel=1e-6)
    assert mass["made_kg"]["value"] == pytest.approx(17.6 * 24 * K_NI * 0.95, rel=1e-6)


def test_a_current_in_steps_counts_by_its_charge(client, section):
    charge_kah = 28.0 * 60 + 30.5 * 48 + 0 * 2 + 29.2 * 34

    found, told = asked(
        client, "efficiency-from-weight", charge_kah=charge_kah, cells=1, net_kg=4760, starter_kg=0
    )

    by_hand = 4760 / (charge_kah * K_CU) * 100
    assert found["current_efficiency_pct"]["value"] == pytest.approx(by_hand, rel=1e-6)
    assert {put["key"]: put["value"] for put in told["inputs"]}["current_ka"] is None


def test_cells_and_bars_and_rectifier_are_kept_apart(client, section):
    found, _ = asked(
        client,
        "energy-per-tonne",
        volts=2.05,
        current_efficiency_pct=93,
        cells=60,
        bars_v=12,
        rectifier_efficiency_pct=97.5,
        energy_price_per_kwh=0.1,
    )

    assert found["cells_kwh_t"]["value"] == pytest.approx(1859.39, rel=1e-5)
    assert found["ac_kwh_t"]["value"] == pytest.approx(2093.13, rel=1e-5)
    assert found["cost_per_t"]["value"] == pytest.approx(209.313, rel=1e-5)
    assert found["cost_per_t"]["unit"] == "USD/t"


def test_the_doubt_of_an_efficiency_has_its_budget(client, section):
    """4850 kg (5), 30.00 kA (0.15), 144 h (0.25), one cell: relative parts in quadrature."""
    found, _ = asked(
        client,
        "efficiency-from-weight",
        net_kg=4850, u_net_kg=5, starter_kg=0, u_starter_kg=0,
        current_ka=30, u_current_ka=0.15, hours=144, u_hours=0.25, cells=1,
    )

    efficiency = found["current_efficiency_pct"]
    parts = {"net_kg": 5 / 4850, "current_ka": 0.15 / 30, "hours": 0.25 / 144}
    whole = sum(part**2 for part in parts.values())
    assert efficiency["value"] == pytest.approx(4850 / (30 * 144 * K_CU) * 100, rel=1e-6)
    assert efficiency["u"] == pytest.approx(efficiency["value"] * whole**0.5, rel=1e-3)
    shares = {share["key"]: share["share_pct"] for share in efficiency["budget"]}
    assert list(shares) == ["current_ka", "hours", "net_kg"]
    assert shares["current_ka"] == pytest.approx(100 * parts["current_ka"] ** 2 / whole, rel=1e-3)


def test_time_to_half_a_gram_of_silver(client, section):
    found, _ = asked(
        client,
        "time-to-weight",
        process="silver electrorefining",
        target_kg=0.0005, cathodes=1,
        current_ka=0.00075, current_efficiency_pct=100,
    )

    assert found["hours"]["value"] == pytest.approx(0.5 / (0.75 * K_AG), rel=1e-6)


def test_a_hard_short_in_refining(client, section):
    """50 cathodes, 30 kA, 0.300 V all resistive, a short of 0.25 milliohm: 1153.85 A."""
    found, _ = asked(
        client,
        "short-current",
        process="copper electrorefining",
        deviation_mv=-11.5385, differential_resistance_uohm=10, current_ka=30,
        volts=0.3, current_efficiency_pct=100,
    )

    assert found["short_ka"]["value"] == pytest.approx(1.15385, rel=1e-5)
    assert found["loss_pct"]["value"] == pytest.approx(3.8462, rel=1e-4)
    assert found["heat_w"]["value"] == pytest.approx(1153.85 * 0.2884615, rel=1e-5)
    assert found["energy_pct"]["value"] == pytest.approx(0, abs=1e-9)
    assert found["lost_kg_per_day"]["value"] == pytest.approx(1.15385 * 24 * K_CU, rel=1e-5)


def test_a_hard_short_in_winning_costs_energy_too(client, section):
    found, told = asked(
        client,
        "short-current",
        deviation_mv=-16.53, differential_resistance_uohm=833.3333 / 50,
        current_ka=30, volts=2.0, current_efficiency_pct=100,
    )

    assert found["short_ka"]["value"] == pytest.approx(0.991736, rel=1e-3)
    assert found["energy_pct"]["value"] == pytest.approx(2.564, rel=1e-3)
    assert "procedure" in told["cautions"][0]


def test_a_film_of_a_fifth_of_a_millimetre(client, section):
    found, _ = asked(
        client,
        "limiting-current",
        metal_g_l=45, diffusivity_um2_s=700, film_mm=0.2,
        current_density_a_m2=300,
    )

    by_hand = 2 * FARADAY_C_MOL * 7.0e-10 * (45_000 / 63.546) / 0.2e-3
    assert found["limiting_a_m2"]["value"] == pytest.approx(by_hand, rel=1e-6)
    assert found["share_pct"]["value"] == pytest.approx(100 * 300 / by_hand, rel=1e-6)


def test_what_is_not_given_is_the_plant_s_own(client, session):
    running_section(session)

    found, told = asked(client, "charge-to-mass", section="EW1")

    origins = {put["key"]: put["origin"] for put in told["inputs"] if put["value"] is not None}
    assert origins == {
        "current_ka": "rated current, set-up",
        "hours": "a day",
        "cells": "cells of the section, set-up",
        "current_efficiency_pct": "lots of the last 30 days",
    }
    assert (told["section"], told["process"]) == ("EW1", "copper electrowinning")
    assert found["made_kg"]["value"] == pytest.approx(36 * 24 * 10 * K_CU * 0.9301, rel=1e-4)


def test_the_working_can_be_followed_by_hand(client, section):
    found, _ = asked(
        client, "charge-to-mass", current_ka=30, hours=24, cells=60, current_efficiency_pct=92
    )

    assert found["made_kg"]["formula"] == "m = K · I · t · N · η"
    assert found["made_kg"]["working"] == (
        "1.18549 kg/kAh × 30 kA × 24 h × 60 × 0.92 = 47\u2009116.3\u202fkg"
    )


def test_a_process_stands_in_for_a_section(client, section):
    _, told = asked(client, "energy-per-tonne", process="zinc electrowinning")

    origins = {put["key"]: put["origin"] for put in told["inputs"]}
    assert told["section"] is None
    assert told["metal"] == "Zn"
    assert origins["volts"] == "typical of the process"


def test_any_metal_goes_with_process_other(client, section):
    found, told = asked(
        client,
        "charge-to-mass",
        process="other", metal="Cr", electrons=3,
        current_ka=1, hours=1, cells=1, current_efficiency_pct=100,
    )

    by_hand = 51.9961 / (3 * FARADAY_C_MOL) * 3600
    assert found["made_kg"]["value"] == pytest.approx(by_hand, rel=1e-6)
    assert told["link"].endswith(
        "?process=other&metal=Cr&electrons=3&current_ka=1&hours=1&current_efficiency_pct=100"
    )


def test_the_link_carries_what_differs_from_the_plant_s_values(client, section):
    _, told = asked(client, "charge-to-mass", section="A", current_ka="36", hours="48,5")

    assert told["link"] == "/calculator/charge-to-mass?section=A&hours=48.5"


def test_what_is_unusual_is_said(client, section):
    _, told = asked(client, "energy-per-tonne", volts=2.6, current_efficiency_pct=80)

    assert [remark["kind"] for remark in told["remarks"]] == ["range", "range"]
    assert told["remarks"][0]["text"] == (
        "Cell voltage: 2.6 V lies outside what is usual here, 1.85 to 2.15 V."
    )


def test_an_unknown_sum_is_not_found_and_near_ones_are_named(client, section):
    answer = client.get("/api/v1/calculator/charge-to-mas")

    assert answer.status_code == 404
    assert "charge-to-mass" in answer.json()["detail"]


def test_an_unknown_section_is_not_found(client, section):
    assert client.get("/api/v1/calculator/charge-to-mass?section=Z").status_code == 404


def test_an_unknown_parameter_is_refused_by_name(client, section):
    (fault,) = refused(client, "charge-to-mass", currant_ka=30)

    assert fault["where"] == "query.currant_ka"
    assert fault["found"] == "30"
    assert "current_ka" in fault["expected"]


@pytest.mark.parametrize(
    ("key", "text", "expected"),
    [
        ("current_ka", "thirty", "a number above 0, up to 1\u2009000 kA"),
        ("current_ka", "0", "a number above 0, up to 1\u2009000 kA"),
        ("hours", "1e9", "a number above 0, up to 20\u2009000 h"),
        ("cells", "1,234.5", "a number above 0, up to 10\u2009000 "),
        ("u_current_ka", "-1", "a standard uncertainty from 0 to 1\u2009000 kA"),
    ],
)
def test_what_cannot_be_is_refused_with_what_was_expected(client, section, key, text, expected):
    (fault,) = refused(client, "charge-to-mass", **{key: text})

    assert fault["where"] == f"query.{key}"
    assert fault["found"] == text
    assert fault["expected"] == expected


def test_every_fault_is_told_at_once(client, section):
    told = refused(client, "charge-to-mass", current_ka="a", hours="b", wat="c")

    assert {fault["where"] for fault in told} == {"query.current_ka", "query.hours", "query.wat"}


def test_what_is_missing_is_named(client, section):
    told = refused(client, "charge-to-mass", process="zinc electrowinning")

    assert [fault["where"] for fault in told] == ["query.current_ka"]


@pytest.mark.parametrize(
    ("params", "where"),
    [
        ({"process": "copper electrowining"}, "query.process"),
        ({"process": "other"}, "query.metal"),
        ({"process": "other", "metal": "Xx", "electrons": 2}, "query.metal"),
        ({"process": "other", "metal": "Cr", "electrons": 99}, "query.electrons"),
        ({"process": "zinc electrowinning", "electrons": 3}, "query.electrons"),
        ({"process": "zinc electrowinning", "section": "A"}, "query.process"),
    ],
)
def test_a_process_that_cannot_be_is_refused(client, section, params, where):
    (fault,) = refused(client, "charge-to-mass", **params)

    assert fault["where"] == where
    assert fault["what"]


def test_a_parameter_stands_once_in_an_address(client, section):
    answer = client.get("/api/v1/calculator/charge-to-mass?hours=1&hours=2")

    assert answer.status_code == 422
    assert answer.json()["errors"][0]["where"] == "query.hours"


@pytest.mark.parametrize("name", SUMS)
def test_every_sum_answers_as_the_document_promises(client, app, session, name):
    running_section(session)

    _, told = asked(client, name, section="EW1")

    document = app.openapi()
    schema = document["components"]["schemas"]["CalculatorAnswer"]
    assert faults(told, schema, document) == []
    assert set(SUMS[name].results) >= {found["key"] for found in told["results"]}
    assert json.dumps(told).count("%(") == 0


def test_the_document_names_every_parameter(client, app, section):
    operation = app.openapi()["paths"]["/api/v1/calculator/{name}"]["get"]

    named = {parameter["name"] for parameter in operation["parameters"]}
    wanted = {each.key for found in SUMS.values() for each in found.inputs}
    assert wanted | {"name", "section", "process", "metal", "electrons"} <= named


def test_a_reader_may_ask(client_of, section):
    assert client_of("reader").get("/api/v1/calculator").status_code == 200
