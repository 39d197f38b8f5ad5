"""Which cathodes hung since when, and what each crop received."""

import numpy as np
import pytest

from server.accounts.account import metal_of, section_account
from server.accounts.crops import Hung, hanging
from server.accounts.lots import cell_crops, lot_results
from server.accounts.stock import stock_at
from server.science.faraday import deposited_kg
from server.storage.plant import house
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_lot,
    make_section,
)

START_MS = NOW_MS - 30 * DAY_MS


@pytest.fixture
def section(session):
    """Ten cells of sixty cathodes, thirty days at 36 kA."""
    section = make_section(session, name="EW1")
    hours = np.arange(START_MS, NOW_MS, HOUR_MS)
    make_current(session, section.id, hours.tolist(), [36_000.0] * len(hours))
    return section


def ideal_kg(section, days):
    return float(deposited_kg(36_000.0 * days * 86_400, metal_of(section)))


def test_a_lot_is_judged_by_the_charge_of_its_own_cathodes(session, section):
    make_lot(
        session,
        section.id,
        cells="1-3",
        started_ms=START_MS,
        pulled_ms=START_MS + 7 * DAY_MS,
        net_kg=0.93 * 3 * ideal_kg(section, 7),
    )
    keep_books(session)

    (lot,) = lot_results(session, house(session), "EW1", START_MS, NOW_MS)

    assert lot.current_efficiency == pytest.approx(0.93)
    assert not lot.is_impossible


def test_half_of_the_cathodes_received_half_of_the_charge(session, section):
    make_lot(
        session,
        section.id,
        started_ms=START_MS,
        pulled_ms=START_MS + 7 * DAY_MS,
        cathodes_per_cell=30,
        net_kg=0.93 * ideal_kg(section, 7) / 2,
    )
    keep_books(session)

    (lot,) = lot_results(session, house(session), "EW1", START_MS, NOW_MS)

    assert lot.current_efficiency == pytest.approx(0.93)


def test_starter_sheets_are_no_metal_made(session, section):
    make_lot(
        session,
        section.id,
        started_ms=START_MS,
        pulled_ms=START_MS + 7 * DAY_MS,
        net_kg=0.93 * ideal_kg(section, 7) + 300,
        starter_kg=300.0,
    )
    keep_books(session)

    (lot,) = lot_results(session, house(session), "EW1", START_MS, NOW_MS)

    assert lot.current_efficiency == pytest.approx(0.93)


def test_more_metal_than_the_charge_could_make_is_marked_and_not_clipped(session, section):
    make_lot(
        session,
        section.id,
        started_ms=START_MS,
        pulled_ms=START_MS + 7 * DAY_MS,
        net_kg=1.05 * ideal_kg(section, 7),
    )
    keep_books(session)

    (lot,) = lot_results(session, house(session), "EW1", START_MS, NOW_MS)

    assert lot.current_efficiency == pytest.approx(1.05)
    assert lot.is_impossible


def test_without_a_start_cathodes_hang_since_the_former_pull(session, section):
    for day in (7, 13):
        make_lot(session, section.id, pulled_ms=START_MS + day * DAY_MS, started_ms=None)
    keep_books(session)

    second, first = cell_crops(session, house(session), "EW1", 1, START_MS, NOW_MS)

    assert first.started_ms == 0
    assert first.charge_c == pytest.approx(36_000 * 7 * 86_400)
    assert second.started_ms == START_MS + 7 * DAY_MS


def test_a_corrected_lot_stands_in_place_of_the_former(session, section):
    given = {"name": "L", "started_ms": START_MS, "pulled_ms": START_MS + 7 * DAY_MS}
    make_lot(session, section.id, **given, net_kg=1000.0)
    make_lot(session, section.id, **given, net_kg=2000.0, revision=1)
    keep_books(session)

    lots = lot_results(session, house(session), "EW1", START_MS, NOW_MS)

    assert [lot.net_kg for lot in lots] == [2000.0]


def crops(*rows):
    return np.array(list(rows), [("started_ms", "i8"), ("pulled_ms", "i8"), ("cathodes", "i8")])


def test_before_the_first_lot_all_cathodes_hang_since_the_start():
    assert hanging(60, crops()) == [Hung(0, 60)]


def test_halves_that_are_pulled_in_turn_hang_since_their_own_pulls():
    halves = crops((0, 10, 30), (0, 20, 30), (10, 30, 30))

    assert hanging(60, halves) == [Hung(20, 30), Hung(30, 30)]


def test_a_pull_that_names_no_known_start_takes_those_that_hung_longest():
    assert hanging(60, crops((0, 10, 30), (5, 20, 30))) == [Hung(10, 30), Hung(20, 30)]


def test_stock_is_charge_since_hung_times_what_recent_crops_showed(session, section):
    for day in (7, 14, 21):
        make_lot(
            session,
            section.id,
            cells="1-10",
            started_ms=START_MS + (day - 7) * DAY_MS,
            pulled_ms=START_MS + day * DAY_MS,
            net_kg=0.91 * 10 * ideal_kg(section, 7),
        )
    keep_books(session)

    stock = stock_at(session, section, metal_of(section), START_MS + 25 * DAY_MS)

    assert stock.kg == pytest.approx([0.91 * ideal_kg(section, 4)] * 10)


def test_metal_that_was_weighed_later_is_known_in_hindsight(session, section):
    make_lot(
        session,
        section.id,
        started_ms=START_MS,
        pulled_ms=START_MS + 8 * DAY_MS,
        net_kg=0.5 * ideal_kg(section, 8),
    )
    keep_books(session)

    stock = stock_at(session, section, metal_of(section), START_MS + 2 * DAY_MS)

    assert stock.kg[0] == pytest.approx(0.5 * ideal_kg(section, 2))
    assert stock.kg[1] == pytest.approx(0.93 * ideal_kg(section, 2))


def test_what_is_pulled_at_a_moment_hangs_at_that_moment(session, section):
    pulled_ms = START_MS + 7 * DAY_MS
    make_lot(
        session,
        section.id,
        started_ms=START_MS,
        pulled_ms=pulled_ms,
        net_kg=0.9 * ideal_kg(section, 7),
    )
    keep_books(session)

    hung, gone = (
        stock_at(session, section, metal_of(section), at_ms) for at_ms in (pulled_ms, pulled_ms + 1)
    )

    assert hung.kg[0] == pytest.approx(0.9 * ideal_kg(section, 7))
    assert gone.kg[0] == pytest.approx(0.0, abs=1.0)


def test_a_lot_pulled_at_midnight_leaves_both_days_efficient(session, section):
    midnight_ms = START_MS + 7 * DAY_MS
    make_lot(
        session,
        section.id,
        cells="1-10",
        started_ms=START_MS,
        pulled_ms=midnight_ms,
        net_kg=0.9 * 10 * ideal_kg(section, 7),
    )
    keep_books(session)

    for from_ms in (midnight_ms - DAY_MS, midnight_ms):
        account = section_account(session, house(session), "EW1", from_ms, from_ms + DAY_MS)

        assert account.period.current_efficiency == pytest.approx(0.9)


def test_a_short_period_is_as_sure_as_the_judgement_of_what_grew_in_it(session, section):
    for day in (7, 14):
        make_lot(
            session,
            section.id,
            cells="1-10",
            started_ms=START_MS + (day - 7) * DAY_MS,
            pulled_ms=START_MS + day * DAY_MS,
            net_kg=0.9 * 10 * ideal_kg(section, 7),
        )
    keep_books(session)
    from_ms = START_MS + 19 * DAY_MS

    account = section_account(session, house(session), "EW1", from_ms, from_ms + DAY_MS)

    assert 0.015 < account.period.u_current_efficiency < 0.025


def test_a_cell_without_recent_crops_shows_no_efficiency(session, section):
    keep_books(session)

    stock = stock_at(session, section, metal_of(section), NOW_MS)

    assert np.isnan(stock.shown_efficiency).all()
    assert stock.kg[0] == pytest.approx(0.93 * ideal_kg(section, 30))
