"""Which cathodes hung since when, and what each crop received."""

import numpy as np
import pytest

from server.accounts.account import metal_of
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
