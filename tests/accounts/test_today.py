from dataclasses import replace

import pytest

from server.accounts.account import section_account
from server.accounts.today import house_today, is_efficiency_low, is_energy_high, totals
from server.storage.plant import house
from tests.factories import DAY_MS, HOUR_MS, NOW_MS, make_section
from tests.web.pages.running import running_section

HOLD_MS = 2 * HOUR_MS


@pytest.fixture
def account(session):
    running_section(session)
    return section_account(session, house(session), "EW1", NOW_MS - 7 * DAY_MS, NOW_MS)


@pytest.mark.parametrize(("efficiency", "is_low"), [(0.929, False), (0.925, False), (0.923, True)])
def test_an_efficiency_is_low_when_twice_its_doubt_does_not_reach_the_target(
    account, efficiency, is_low
):
    crops = replace(account.crops, current_efficiency=efficiency, u_current_efficiency=0.003)

    assert is_efficiency_low(replace(account, crops=crops)) == is_low


@pytest.mark.parametrize(("kwh_t", "is_high"), [(1950, False), (1985, False), (1995, True)])
def test_energy_is_high_when_twice_its_doubt_does_not_reach_the_target(account, kwh_t, is_high):
    energy = replace(
        account.energy,
        specific_energy_j_kg=kwh_t * 3600.0,
        u_specific_energy_j_kg=20 * 3600.0,
    )

    assert is_energy_high(replace(account, energy=energy)) == is_high


def test_metals_are_not_added_up_with_each_other(account):
    zinc = replace(account, metal="Zn")

    made = totals([account, account, zinc]).made_kg

    assert made == (
        ("Cu", pytest.approx(2 * account.period.made_kg)),
        ("Zn", account.period.made_kg),
    )


def test_one_unknown_energy_makes_the_total_unknown(account):
    unknown = replace(account, energy=replace(account.energy, dc_j=None))

    assert totals([account, unknown]).dc_j is None


def test_a_section_that_never_ran_adds_nothing_to_the_totals(session, account):
    make_section(session, name="EW2")

    found = house_today(session, house(session), NOW_MS, HOLD_MS)

    assert [section.week_kg is None for section in found.sections] == [False, True]
    assert found.week.dc_j == found.sections[0].state.recent.energy.dc_j


def test_a_house_without_records_has_no_newest_one(session):
    make_section(session)

    assert house_today(session, house(session), NOW_MS, HOLD_MS).last_recorded_ms is None
