"""The account against a tankhouse whose truth is known: noisy, stepped current, outages, bypasses.

The truth is worked out minute by minute by the demo's physics, which shares no code with the
accounts; the books see only what the sheets say.
"""

import math

import pytest

from server.accounts.account import metal_of, section_account
from server.accounts.results import Account
from server.accounts.short_charge import shorts_account
from server.accounts.stock import stock_at
from server.demo.truth import AccountTruth, account
from tests.accounts.conftest import KeptHouse

DAY_MS = 86_400_000
SECTIONS = ("EW1", "ER1", "ZN1")
LEAST_SHARE = 0.002
"""Of the charge through shorts, below which most come and go between two rounds."""

WINDOWS = {"all of it": (0, 60), "a month": (20, 50), "a cut week": (30.3, 37.7)}


@pytest.fixture(params=SECTIONS)
def section_name(request: pytest.FixtureRequest) -> str:
    return str(request.param)


@pytest.fixture(params=WINDOWS)
def window(request: pytest.FixtureRequest, truth: KeptHouse) -> tuple[int, int]:
    first, last = WINDOWS[request.param]
    start_ms = truth.made_up.start_ms
    return start_ms + round(first * DAY_MS), start_ms + round(last * DAY_MS)


@pytest.fixture
def pair(
    truth: KeptHouse, section_name: str, window: tuple[int, int]
) -> tuple[Account, AccountTruth]:
    """What the books say, and what was so."""
    return (
        section_account(truth.session, truth.house, section_name, *window),
        account(truth.made_up.truth(section_name), *window),
    )


def test_cell_charge_agrees_within_a_tenth_of_a_per_cent(pair):
    books, truth = pair

    assert books.charge.cell_c == pytest.approx(truth.cell_charge_c, rel=1e-3)


def test_the_efficiency_of_crops_agrees_within_15_hundredths_of_a_point(pair):
    books, truth = pair

    assert books.crops.lots == truth.lots
    assert books.crops.current_efficiency == pytest.approx(
        truth.crops_current_efficiency, abs=0.0015
    )


def test_the_stock_agrees_within_one_per_cent(pair):
    books, truth = pair

    assert books.period.stock_end_kg == pytest.approx(truth.stock_end_kg, rel=0.01)


def test_the_energy_agrees_within_three_tenths_of_a_per_cent(pair):
    books, truth = pair

    assert books.energy.dc_j == pytest.approx(truth.dc_energy_j, rel=3e-3)


def test_stated_uncertainties_cover_the_errors(pair):
    books, truth = pair

    for found, true, u in (
        (
            books.crops.current_efficiency,
            truth.crops_current_efficiency,
            books.crops.u_current_efficiency,
        ),
        (
            books.period.current_efficiency,
            truth.period_current_efficiency,
            books.period.u_current_efficiency,
        ),
        (books.period.stock_end_kg, truth.stock_end_kg, books.period.u_stock_end_kg),
        (books.energy.dc_j, truth.dc_energy_j, books.energy.u_dc_j),
        (
            books.energy.specific_energy_j_kg,
            truth.specific_energy_j_kg,
            books.energy.u_specific_energy_j_kg,
        ),
    ):
        assert found is not None
        assert u is not None
        assert abs(found - true) <= 2 * u


def test_stated_uncertainties_are_not_idle(pair):
    books, _ = pair

    assert books.crops.u_current_efficiency < 0.01
    assert books.energy.u_dc_j < 0.01 * books.energy.dc_j


def test_the_ledger_and_the_waterfall_close(pair):
    books, _ = pair

    assert sum(item.share for item in books.ledger) == pytest.approx(1.0, rel=1e-12)
    assert sum(item.charge_c for item in books.ledger) == pytest.approx(
        books.charge.cell_c, rel=1e-12
    )
    dc_items = [item.j_kg for item in books.waterfall if item.item != "conversion"]
    assert sum(dc_items) == pytest.approx(books.energy.specific_energy_j_kg, rel=1e-12)
    assert sum(item.j_kg for item in books.waterfall) == pytest.approx(
        books.energy.ac_j / books.period.made_kg, rel=1e-12
    )


def test_the_parts_of_a_period_add_up_to_it(truth, section_name):
    start_ms = truth.made_up.start_ms
    cuts = [start_ms + round(day * DAY_MS) for day in (10, 17.21, 31.5, 44)]

    whole = section_account(truth.session, truth.house, section_name, cuts[0], cuts[-1])
    parts = [
        section_account(truth.session, truth.house, section_name, a, b)
        for a, b in zip(cuts, cuts[1:], strict=False)
    ]

    assert math.fsum(p.charge.cell_c for p in parts) == pytest.approx(whole.charge.cell_c, rel=1e-9)
    assert math.fsum(p.energy.dc_j for p in parts) == pytest.approx(whole.energy.dc_j, rel=1e-9)
    assert math.fsum(p.crops.weighed_kg for p in parts) == pytest.approx(whole.crops.weighed_kg)
    assert math.fsum(p.period.made_kg for p in parts) == pytest.approx(whole.period.made_kg)


def test_each_cell_holds_the_stock_that_its_charge_could_have_made(truth, section_name):
    section = truth.house.section(section_name)
    at_ms = truth.made_up.start_ms + 40 * DAY_MS

    stock = stock_at(truth.session, section, metal_of(section), at_ms)

    true_kg = truth.made_up.truth(section_name).stock_kg(at_ms)
    assert stock.kg == pytest.approx(true_kg, rel=0.08, abs=0.02 * true_kg.max())


def test_shorts_agree_within_a_fifth_over_sixty_days_where_they_matter(truth, section_name):
    made_up = truth.made_up.truth(section_name)
    span = made_up.start_ms, made_up.start_ms + 60 * DAY_MS
    true = account(made_up, *span)

    found = shorts_account(truth.session, truth.house.section(section_name), *span)

    assert found is not None
    if true.short_charge_c > LEAST_SHARE * true.cell_charge_c:
        assert found.charge_c == pytest.approx(true.short_charge_c, rel=0.2)
        assert abs(found.charge_c - true.short_charge_c) < 2 * found.u_charge_c
        assert found.u_charge_c < 0.2 * found.charge_c
    else:
        assert section_name == "ZN1"
        assert 0 <= found.charge_c < LEAST_SHARE * true.cell_charge_c


def test_shorts_are_an_item_of_their_own_and_leave_less_unexplained(pair):
    books, _ = pair

    items = {item.item: item for item in books.ledger}
    assert list(items) == ["metal", "shorts", "not explained"]
    assert items["shorts"].charge_c >= 0
    assert items["shorts"].u_share > 0
    assert "% of the charge" in items["shorts"].basis
    assert items["not explained"].u_share >= items["metal"].u_share
    working = next(w for w in books.working if w.figure == "ledger.shorts.kah")
    assert working.value == pytest.approx(items["shorts"].charge_c / 3.6e6)


def test_shorts_of_the_parts_of_a_period_add_up(truth, section_name):
    section = truth.house.section(section_name)
    start_ms = truth.made_up.start_ms
    cuts = [start_ms + round(day * DAY_MS) for day in (10, 10.3, 17.21, 31.5, 44)]

    whole = shorts_account(truth.session, section, cuts[0], cuts[-1])
    parts = [
        shorts_account(truth.session, section, a, b) for a, b in zip(cuts, cuts[1:], strict=False)
    ]

    assert sum(p.charge_c for p in parts) == pytest.approx(whole.charge_c, rel=1e-9)
    assert sum(p.watched_c for p in parts) == pytest.approx(whole.watched_c, rel=1e-9)


def test_where_no_cell_was_read_there_is_no_item_of_shorts(truth, section_name):
    start_ms = truth.made_up.start_ms

    before = section_account(truth.session, truth.house, section_name, start_ms - DAY_MS, start_ms)
    first_hour = section_account(
        truth.session, truth.house, section_name, start_ms, start_ms + DAY_MS // 96
    )

    assert before.ledger == ()
    assert "shorts" not in {item.item for item in first_hour.ledger}
    assert first_hour.ledger[-1].basis.endswith("no cell was read")
