"""Worked examples through the API, against numbers worked out by hand."""

import pytest

from tests.factories import make_section

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
        net_kg=4850,
        u_net_kg=5,
        starter_kg=0,
        u_starter_kg=0,
        current_ka=30,
        u_current_ka=0.15,
        hours=144,
        u_hours=0.25,
        cells=1,
    )

    efficiency = found["current_efficiency_pct"]
    parts = {"net_kg": 5 / 4850, "current_ka": 0.15 / 30, "hours": 0.25 / 144}
    whole = sum(part**2 for part in parts.values())
    assert efficiency["value"] == pytest.approx(4850 / (30 * 144 * K_CU) * 100, rel=1e-6)
    assert efficiency["u"] == pytest.approx(efficiency["value"] * whole**0.5, rel=1e-3)
    shares = {share["key"]: share["share_pct"] for share in efficiency["budget"]}
    assert list(shares) == ["current_ka", "hours", "net_kg"]
    assert shares["current_ka"] == pytest.approx(100 * parts["current_ka"] ** 2 / whole, rel=1e-3)


@pytest.mark.parametrize(
    ("process", "volts", "efficiency_pct", "kwh_t"),
    [
        ("copper electrowinning", 2.00, 92, 1833.76),
        ("zinc electrowinning", 3.3, 92, 2940.83),
        ("zinc electrowinning", 3.5, 89, 3224.20),
        ("silver electrorefining", 2.3, 95, 601.55),
        ("aluminium electrolysis", 4.15, 94, 2979.9799 * 4.15 / 0.94),
        ("cobalt electrowinning", 3.8, 92, 909.5547 * 3.8 / 0.92),
    ],
)
def test_energy_of_other_metals(client, section, process, volts, efficiency_pct, kwh_t):
    found, _ = asked(
        client,
        "energy-per-tonne",
        process=process,
        volts=volts,
        current_efficiency_pct=efficiency_pct,
    )

    assert found["cells_kwh_t"]["value"] == pytest.approx(kwh_t, rel=1e-5)


def test_winning_leaves_acid_for_metal(client, section):
    """80 cells at 30 kA and 92 % for an hour, into 400 m3: 10.0994 g/L of acid."""
    found, _ = asked(
        client, "charge-to-mass", current_ka=30, hours=1, cells=80, current_efficiency_pct=92
    )

    assert found["made_kg"]["value"] == pytest.approx(2617.57, rel=1e-5)
    assert found["acid_kg"]["value"] / 400 == pytest.approx(10.0994, rel=1e-5)


def test_time_to_half_a_gram_of_silver(client, section):
    found, _ = asked(
        client,
        "time-to-weight",
        process="silver electrorefining",
        target_kg=0.0005,
        cathodes=1,
        current_ka=0.00075,
        current_efficiency_pct=100,
    )

    assert found["hours"]["value"] == pytest.approx(0.5 / (0.75 * K_AG), rel=1e-6)


def test_a_hard_short_in_refining(client, section):
    """50 cathodes, 30 kA, 0.300 V all resistive, a short of 0.25 milliohm: 1153.85 A."""
    found, _ = asked(
        client,
        "short-current",
        process="copper electrorefining",
        deviation_mv=-11.5385,
        differential_resistance_uohm=10,
        current_ka=30,
        volts=0.3,
        current_efficiency_pct=100,
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
        deviation_mv=-16.53,
        differential_resistance_uohm=833.3333 / 50,
        current_ka=30,
        volts=2.0,
        current_efficiency_pct=100,
    )

    assert found["short_ka"]["value"] == pytest.approx(0.991736, rel=1e-3)
    assert found["energy_pct"]["value"] == pytest.approx(2.564, rel=1e-3)
    assert "procedure" in told["cautions"][0]


def test_a_film_of_a_fifth_of_a_millimetre(client, section):
    found, _ = asked(
        client,
        "limiting-current",
        metal_g_l=45,
        diffusivity_um2_s=700,
        film_mm=0.2,
        current_density_a_m2=300,
    )

    by_hand = 2 * FARADAY_C_MOL * 7.0e-10 * (45_000 / 63.546) / 0.2e-3
    assert found["limiting_a_m2"]["value"] == pytest.approx(by_hand, rel=1e-6)
    assert found["share_pct"]["value"] == pytest.approx(100 * 300 / by_hand, rel=1e-6)
