"""What holds for every sum."""

import re

import pytest

from server.calculator.plant_values import section_basis
from server.calculator.sums import SUMS, sum_named
from server.calculator.work_out import given, missing, put_in, worked
from server.storage.errors import NotFound
from server.storage.plant import house
from tests.factories import NOW_MS
from tests.web.pages.running import running_section

UNITS = re.compile(
    r"_(ka|kah|h|pct|mv|v|uohm|mm|m2|kg|kg_m3|g_l|degc|a_m2|um2_s|s_m|per_kwh|per_kg)$"
    r"|^(hours|cells|cathodes|volts)$"
)


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


def answer(session, name, **typed):
    """The sum worked out for a section that runs."""
    running_section(session)
    a_sum = sum_named(name)
    there = house(session)
    basis = section_basis(session, there, there.section("EW1"), NOW_MS, a_sum.needs)
    inputs, faults = put_in(a_sum, basis, typed)
    assert faults == []
    assert missing(inputs) == []
    return worked(a_sum, basis, inputs)


@pytest.mark.parametrize("name", SUMS)
def test_every_input_ends_in_its_unit(name):
    assert [each.key for each in SUMS[name].inputs if not UNITS.search(each.key)] == []


@pytest.mark.parametrize("name", SUMS)
def test_what_an_input_replaces_is_an_input_too(name):
    keys = {each.key for each in SUMS[name].inputs}

    assert {key for each in SUMS[name].inputs for key in each.replaces} <= keys


@pytest.mark.parametrize("name", SUMS)
def test_every_result_is_promised_in_the_list(session, name):
    found = [result.output.key for result in answer(session, name).results]

    assert set(found) <= set(SUMS[name].results)
    assert found[0] == SUMS[name].results[0]


@pytest.mark.parametrize("name", SUMS)
def test_every_number_of_a_working_has_its_place(session, name):
    for result in answer(session, name).results:
        numbers = result.output.numbers
        assert numbers.text % dict.fromkeys(numbers.parts, "1")


@pytest.mark.parametrize("name", SUMS)
def test_the_shares_of_a_budget_add_up(session, name):
    for result in answer(session, name).results:
        if result.u > 0:
            assert sum(result.shares.values()) == pytest.approx(1, abs=1e-6)


@pytest.mark.parametrize("name", SUMS)
def test_nothing_is_typed_until_somebody_types(session, name):
    assert given(answer(session, name).inputs) == {}


@pytest.mark.parametrize("name", SUMS)
def test_every_sum_names_its_sources(name):
    assert SUMS[name].sources
    assert all(source.strip() == source for source in SUMS[name].sources)


def test_a_sum_of_another_name_is_not_found():
    with pytest.raises(NotFound, match="near it: time-to-weight"):
        sum_named("time-to-wait")


def test_a_typed_value_wins_over_the_plant_s_own(session):
    found = answer(session, "charge-to-mass", current_ka="30", u_current_ka="0.3")

    current = next(put for put in found.inputs if put.input.key == "current_ka")
    assert (current.value, current.u, current.filled) == (30.0, 0.3, 36.0)
    assert given(found.inputs) == {"current_ka": 30.0, "u_current_ka": 0.3}


def test_the_doubt_of_a_current_follows_what_is_typed(session):
    found = answer(session, "charge-to-mass", current_ka="18")

    current = next(put for put in found.inputs if put.input.key == "current_ka")
    assert current.u == pytest.approx(0.005 / 3**0.5 * 18, rel=2e-3)


def test_a_charge_that_is_typed_takes_the_place_of_current_and_time(session):
    found = answer(session, "charge-to-mass", charge_kah="864")

    left_out = {put.input.key for put in found.inputs if put.value is None}
    assert left_out == {"current_ka", "hours"}
    assert found.results[2].value == pytest.approx(8640)
