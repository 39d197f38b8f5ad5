"""Flags and the work list, in the units and with the names of the contract."""

import pytest

from tests.factories import DAY_MS, NOW_MS, make_flag, make_section

NAMES = [
    "section", "cell", "kind", "tier", "raised_at", "ended_at", "raised_by", "volts",
    "expected_volts", "deviation_mv", "short_ka", "u_short_ka", "lost_kg_per_day",
    "lost_value_per_day", "evidence", "state", "shelved_until", "seen_by", "assigned_to",
    "ended_by", "verdict", "probability",
]  # fmt: skip
WEEK = {"from": "2024-02-28", "to": "2024-03-06"}


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def flags(client, **given):
    answer = client.get("/api/v1/flags", params=WEEK | given)
    assert answer.status_code == 200, answer.text
    return answer.json()["flags"]


def test_a_flag_has_the_names_and_units_of_the_contract(session, section, client):
    make_flag(
        session,
        section.id,
        section.cell_ids[6],
        kind="short",
        tier="act",
        deviation_v=-0.16,
        short_amps=900.0,
        u_short_amps=200.0,
        lost_kg_per_day=24.0,
        lost_value_per_day=220.0,
    )

    (flag,) = flags(client)

    assert list(flag) == NAMES
    assert flag["section"] == "A"
    assert flag["cell"] == 7
    assert flag["raised_at"] == "2024-03-04T12:00:00Z"
    assert flag["ended_at"] is None
    assert flag["deviation_mv"] == pytest.approx(-160.0)
    assert flag["short_ka"] == pytest.approx(0.9)
    assert flag["u_short_ka"] == pytest.approx(0.2)


@pytest.fixture
def three_flags(session, section):
    """One that ended, one to look at, one to act on."""
    first, second, third = section.cell_ids[:3]
    make_flag(session, section.id, first, raised_ms=NOW_MS - 3 * DAY_MS, ended_ms=NOW_MS - DAY_MS)
    make_flag(session, section.id, second, lost_value_per_day=5.0)
    make_flag(session, section.id, third, tier="act", lost_value_per_day=1.0)


@pytest.mark.parametrize(
    ("given", "cells"),
    [
        ({}, [1, 2, 3]),
        ({"open": "true"}, [2, 3]),
        ({"tier": "act"}, [3]),
        ({"section": "A", "open": "1", "tier": "look"}, [2]),
        ({"from": "2024-03-05", "to": "2024-03-06"}, [2, 3]),
        ({"from": "2024-02-01", "to": "2024-02-20"}, []),
    ],
)
def test_flags_are_asked_for_by_their_life(three_flags, client, given, cells):
    assert sorted(flag["cell"] for flag in flags(client, **given)) == cells


def test_a_section_that_does_not_exist_is_not_found(section, client):
    answer = client.get("/api/v1/flags", params=WEEK | {"section": "Z"})

    assert answer.status_code == 404
    assert "the sections are A" in answer.json()["detail"]


def test_the_list_puts_first_what_to_act_on(three_flags, client):
    items = client.get("/api/v1/worklist").json()["items"]

    assert list(items[0]) == [*NAMES, "rank", "walk", "newest"]
    assert [(item["cell"], item["rank"], item["walk"]) for item in items] == [(3, 1, 3), (2, 2, 2)]


def test_the_list_of_an_earlier_moment_can_be_asked_for(three_flags, client):
    items = client.get("/api/v1/worklist", params={"at": "2024-03-03"}).json()["items"]

    assert [item["cell"] for item in items] == [1]
