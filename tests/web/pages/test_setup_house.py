import pytest

from server.storage.plant import house
from tests.factories import NOW_MS, make_section
from tests.web.pages.running import words_of

SHOWN = {
    "name": "North House",
    "currency": "USD",
    "energy_price_per_kwh": "0.09",
    "shift-0": "night",
    "starts-0": "00:00",
    "shift-1": "day",
    "starts-1": "08:00",
    "shift-2": "evening",
    "starts-2": "16:00",
    "shift-3": "",
    "starts-3": "",
    "from": "2024-03-05T00:00",
    "why": "new contract",
}


@pytest.fixture(autouse=True)
def section(session):
    return make_section(session)


def now(session):
    session.rollback()
    return house(session)


def test_the_price_of_energy_changes_from_a_date(client, session):
    answer = client.post("/setup/house", data=SHOWN | {"energy_price_per_kwh": "0,11"})

    plan = now(session)
    assert answer.status_code == 303
    assert plan.terms_at(NOW_MS).energy_price_per_kwh == 0.11
    assert plan.terms_at(NOW_MS - 86_400_000).energy_price_per_kwh == 0.09
    assert "Price of energy: 0.09 → 0.11 new contract" in words_of(client.get("/setup/house"))


def test_shifts_change_and_may_be_fewer(client, session):
    changed = {"shift-1": "day", "starts-1": "12:00", "shift-2": "", "starts-2": ""}

    client.post("/setup/house", data=SHOWN | changed)

    assert now(session).shifts_at(NOW_MS) == ((0, "night"), (720, "day"))
    assert len(now(session).shifts_at(NOW_MS - 86_400_000)) == 3


def test_name_and_currency_change_for_all_time(client, session):
    client.post("/setup/house", data=SHOWN | {"name": "South House", "currency": "clp"})

    assert (now(session).name, now(session).currency) == ("South House", "CLP")


@pytest.mark.parametrize(
    ("changed", "sentence"),
    [
        ({"energy_price_per_kwh": "-1"}, "Expected a price of zero or more."),
        ({"currency": "XQQ"}, "Expected a currency code"),
        ({"name": ""}, "Expected a name."),
        ({"starts-1": "00:00"}, "Shifts: Expected each of them once."),
        ({"starts-1": "25:00"}, "Shifts: Expected a time of day"),
        ({"shift-0": "", "starts-0": "", "shift-1": "", "starts-1": "", "shift-2": "",
          "starts-2": ""}, "Expected at least one shift"),
        ({"energy_price_per_kwh": "0.1", "why": ""}, "Say why it changes."),
        ({"energy_price_per_kwh": "0.1", "from": "soon"}, "is not a time"),
        ({}, "Nothing differs from what holds now."),
    ],
)  # fmt: skip
def test_what_is_wrong_is_said_and_nothing_changes(client, session, changed, sentence):
    page = client.post("/setup/house", data=SHOWN | changed)

    assert page.status_code == 422
    assert sentence in words_of(page)
    assert len(now(session).terms) == 1
    assert now(session).currency == "USD"


def test_a_reader_sees_and_changes_nothing(client_of):
    client = client_of("reader")

    assert "night 00:00 · day 08:00" in words_of(client.get("/setup/house"))
    assert client.post("/setup/house", data=SHOWN).status_code == 403


def test_another_table_of_potentials_is_chosen_from_a_date_on(client, session):
    answer = client.post("/setup/house", data=SHOWN | {"standard_potentials": "bard 1985"})

    plan = now(session)
    assert answer.status_code == 303
    assert plan.terms_at(NOW_MS).standard_potentials == "bard 1985"
    assert plan.terms_at(NOW_MS - 86_400_000).standard_potentials is None
    assert "Table of standard potentials: none → bard 1985" in words_of(client.get("/setup/house"))


def test_a_reader_sees_which_table_of_potentials_holds(client_of):
    assert "CRC Handbook, recent editions" in words_of(client_of("reader").get("/setup/house"))
