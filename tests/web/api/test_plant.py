"""Sections and cells as they are now."""

import pytest

from tests.factories import (
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_flag,
    make_lot,
    make_outage,
    make_readings,
    make_section,
    make_terms,
)


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def test_a_section_has_the_names_and_units_of_the_plant_file(section, client):
    found = client.get("/api/v1/sections").json()

    assert found["tankhouse"] == "North House"
    assert found["energy_price_per_kwh"] == 0.09
    (a,) = found["sections"]
    assert a["section"] == "A"
    assert a["rated_current_ka"] == pytest.approx(36.0)
    assert a["differential_resistance_uohm"] == pytest.approx(11.0)
    assert a["rectifier_efficiency_pct"] == pytest.approx(97.0)
    assert a["meter_accuracy_mv"] == pytest.approx(2.0)
    assert a["targets"] == {
        "current_efficiency_pct": pytest.approx(93.0),
        "specific_energy_kwh_t": pytest.approx(1950.0),
        "cell_volts": [1.85, 2.15],
    }
    assert a["since"] is None


def test_terms_of_an_earlier_moment_can_be_asked_for(session, section, client):
    make_terms(session, section.id, from_ms=NOW_MS - HOUR_MS, rated_amps=30_000.0)

    now = client.get("/api/v1/sections").json()["sections"][0]
    then = client.get("/api/v1/sections", params={"at": "2024-03-01"}).json()["sections"][0]

    assert (now["rated_current_ka"], now["since"]) == (30.0, "2024-03-05T11:00:00Z")
    assert then["rated_current_ka"] == 36.0


def test_a_cell_is_told_as_it_is_now(session, section, client):
    at_ms = [NOW_MS - n * HOUR_MS for n in range(200, 0, -1)]
    make_current(session, section.id, at_ms, [36_000.0] * 200)
    make_readings(session, section.cell_ids[0], [NOW_MS - HOUR_MS], [2.034])
    make_lot(session, section.id, pulled_ms=NOW_MS - 24 * HOUR_MS, weighed_ms=NOW_MS)
    make_outage(session, section.id, cells="2", to_ms=None, state="bypassed")
    keep_books(session)
    make_flag(session, section.id, section.cell_ids[0])

    cells = client.get("/api/v1/cells", params={"section": "A"}).json()["cells"]

    assert [cell["cell"] for cell in cells] == list(range(1, 11))
    first = cells[0]
    assert first["volts"] == 2.034
    assert first["read_at"] == "2024-03-05T11:00:00Z"
    assert first["deposit_started_at"] == "2024-03-04T12:00:00Z"
    assert first["deposit_kg"] > 0
    assert first["flag_kind"] == "drift high"
    assert [cell["state"] for cell in cells[:3]] == ["in service", "bypassed", "in service"]


def test_cells_of_a_section_that_does_not_exist_are_not_found(section, client):
    assert client.get("/api/v1/cells", params={"section": "Z"}).status_code == 404


def test_cells_without_a_section_are_refused(section, client):
    assert client.get("/api/v1/cells").status_code == 422


def test_lots_are_told_with_their_efficiency(session, section, client):
    at_ms = [NOW_MS - n * HOUR_MS for n in range(200, 0, -1)]
    make_current(session, section.id, at_ms, [36_000.0] * 200)
    make_lot(session, section.id, name="L1", pulled_ms=NOW_MS - HOUR_MS, weighed_ms=NOW_MS)
    keep_books(session)

    found = client.get(
        "/api/v1/lots", params={"section": "A", "from": "2024-03-05", "to": "2024-03-06"}
    ).json()

    (lot,) = found["lots"]
    assert lot["lot"] == "L1"
    assert lot["pulled_at"] == "2024-03-05T11:00:00Z"
    assert lot["current_efficiency_pct"] == pytest.approx(
        100 * lot["metal_kg"] / lot["theoretical_kg"]
    )
