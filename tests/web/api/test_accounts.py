"""The account as the contract words it, and as the books have it."""

import pytest

from server.accounts.account import section_account
from server.storage.plant import house
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_lot,
    make_readings,
    make_section,
)

PERIOD = {"from": "2024-02-27T12:00:00Z", "to": "2024-03-05T12:00:00Z"}
NAMES = {
    "": "section from to process metal electrons kg_per_kah charge crops period energy ledger"
    " waterfall working remarks targets",
    "charge": "section_kah cell_kah estimated_share_pct recorded_to",
    "crops": "lots weighed_kg theoretical_kg current_efficiency_pct u_current_efficiency_pct"
    " estimated_share_pct",
    "period": "theoretical_kg harvested_kg stock_start_kg stock_end_kg u_stock_end_kg made_kg"
    " u_made_kg current_efficiency_pct u_current_efficiency_pct",
    "energy": "dc_kwh u_dc_kwh ac_kwh mean_cell_volts specific_energy_kwh_t"
    " u_specific_energy_kwh_t cost read_share_pct",
}


@pytest.fixture
def section(session):
    """Ten days at 36 kA and 2.0 V, and a lot of cell 1 that grew a week."""
    section = make_section(session, name="A")
    at_ms = [NOW_MS - 10 * DAY_MS + n * HOUR_MS for n in range(241)]
    make_current(session, section.id, at_ms, [36_000.0] * len(at_ms))
    for cell_id in section.cell_ids:
        make_readings(session, cell_id, at_ms[::8], [2.0] * 31)
    make_lot(session, section.id, pulled_ms=NOW_MS - HOUR_MS, weighed_ms=NOW_MS)
    keep_books(session)
    return section


def account(client, **given):
    answer = client.get("/api/v1/accounts", params={"section": "A"} | PERIOD | given)
    assert answer.status_code == 200, answer.text
    return answer.json()


def test_an_account_has_the_names_of_the_contract(section, client):
    found = account(client)

    for part, names in NAMES.items():
        assert list(found[part] if part else found) == names.split()
    assert list(found["ledger"][0]) == ["item", "kah", "share_pct", "u_share_pct", "basis"]
    assert list(found["waterfall"][0]) == ["item", "kwh_t"]
    assert list(found["working"][0]) == ["figure", "formula", "inputs", "value", "unit"]
    assert list(found["working"][0]["inputs"][0]) == ["name", "value", "unit", "source"]


def test_an_account_is_that_of_the_books_in_plant_units(section, client, session):
    books = section_account(session, house(session), "A", NOW_MS - 7 * DAY_MS, NOW_MS)

    found = account(client)

    assert found["from"] == PERIOD["from"]
    assert found["to"] == PERIOD["to"]
    assert found["charge"]["section_kah"] == pytest.approx(36.0 * 7 * 24)
    assert found["charge"]["cell_kah"] == pytest.approx(36.0 * 7 * 24 * 10)
    assert found["kg_per_kah"] == pytest.approx(1.18549, rel=1e-5)
    assert found["energy"]["dc_kwh"] == pytest.approx(36.0 * 7 * 24 * 10 * 2.0)
    assert found["period"]["made_kg"] == pytest.approx(books.period.made_kg)
    assert found["crops"]["current_efficiency_pct"] == pytest.approx(
        100 * books.crops.current_efficiency
    )


def test_the_ledger_closes(section, client):
    found = account(client)

    assert sum(item["share_pct"] for item in found["ledger"]) == pytest.approx(100.0)
    assert sum(item["kah"] for item in found["ledger"]) == pytest.approx(
        found["charge"]["cell_kah"]
    )


def test_each_working_is_of_a_figure_of_the_account(section, client):
    found = account(client)

    for working in found["working"]:
        value = found
        for step in working["figure"].split("."):
            if isinstance(value, list):
                [value] = [item for item in value if item["item"] == step]
            else:
                value = value[step]
        assert working["value"] == pytest.approx(value), working["figure"]


def test_without_a_section_the_house_is_answered(section, client):
    found = client.get("/api/v1/accounts", params=PERIOD).json()

    assert [part["section"] for part in found["sections"]] == ["A"]
    assert found["dc_kwh"] == pytest.approx(found["sections"][0]["energy"]["dc_kwh"])
    assert found["made"][0]["metal"] == "Cu"


def test_a_period_without_records_is_answered_with_nothing_known(section, client):
    found = account(client, **{"from": "2020-01-01", "to": "2020-02-01"})

    assert found["charge"]["section_kah"] == 0
    assert found["crops"]["current_efficiency_pct"] is None
    assert found["energy"]["dc_kwh"] is None


@pytest.mark.parametrize(
    ("given", "where"),
    [
        ({"from": "2024-03-06"}, "query.to"),
        ({"from": "last week"}, "query.from"),
        ({"to": ""}, "query.to"),
    ],
)
def test_a_period_that_cannot_be_is_refused(section, client, given, where):
    answer = client.get("/api/v1/accounts", params={"section": "A"} | PERIOD | given)

    assert answer.status_code == 422
    assert [fault["where"] for fault in answer.json()["errors"]] == [where]


def test_a_period_left_out_is_refused(section, client):
    answer = client.get("/api/v1/accounts")

    assert {fault["where"] for fault in answer.json()["errors"]} == {"query.from", "query.to"}
