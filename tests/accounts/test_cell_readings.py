import pytest

from server.accounts.cell_readings import cell_readings
from server.storage.plant import house
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_delivery,
    make_readings,
    make_section,
    make_suspicion,
)

FIRST_MS = NOW_MS - 4 * HOUR_MS


@pytest.fixture
def section(session):
    """One cell read every hour for four hours, the first reading corrected afterwards."""
    section = make_section(session, name="EW1", differential_resistance_ohm=10e-6)
    make_current(session, section.id, [FIRST_MS, NOW_MS], [35_000.0, 35_000.0])
    cell_id = section.cell_ids[0]
    at_ms = [FIRST_MS + hour * HOUR_MS for hour in range(4)]
    first = make_delivery(session, sender="ana", source="round.csv")
    make_readings(session, cell_id, at_ms, [2.0, 2.01, 2.02, 2.03], delivery=first)
    later = make_delivery(
        session, sender="sofia", reason="misread", received_ms=NOW_MS + DAY_MS, source="form"
    )
    make_readings(session, cell_id, at_ms[:1], [2.05], revision=1, delivery=later)
    keep_books(session)
    return section


def page_of(session, limit=100, **given):
    return cell_readings(
        session, house(session), "EW1", 1, FIRST_MS - 1, NOW_MS + 1, limit, **given
    )


def test_the_newest_reading_comes_first_and_at_rated_current(session, section):
    found = page_of(session).readings

    assert [told.volts for told in found] == [2.03, 2.02, 2.01, 2.05]
    assert found[0].referred_v == pytest.approx(2.03 + 10e-6 * 1000)


def test_a_corrected_reading_keeps_its_former_value_with_who_when_and_why(session, section):
    now, before = page_of(session).readings[-1].history

    assert (now.volts, now.sender, now.reason) == (2.05, "sofia", "misread")
    assert (before.volts, before.sender, before.source) == (2.0, "ana", "round.csv")


def test_what_came_later_is_not_known_before(session, section):
    first = page_of(session, known_ms=NOW_MS).readings[-1]

    assert (first.volts, len(first.history)) == (2.0, 1)


def test_pages_follow_each_other_without_losing_a_reading(session, section):
    first = page_of(session, limit=2)
    rest = cell_readings(
        session, house(session), "EW1", 1, FIRST_MS - 1, first.before_ms, limit=100
    )

    moments = [told.at_ms for told in (*first.readings, *rest.readings)]
    assert moments == [FIRST_MS + hour * HOUR_MS for hour in (3, 2, 1, 0)]
    assert rest.before_ms is None


def test_a_doubted_reading_tells_the_doubt_to_decide_on(session, section):
    cell_id = section.cell_ids[1]
    make_readings(session, cell_id, [NOW_MS], [2031.0], suspect=1)
    doubt = make_suspicion(session, section.id, cell_id)

    told = cell_readings(session, house(session), "EW1", 2, NOW_MS, NOW_MS + 1, limit=10).readings[
        0
    ]

    assert (told.is_doubted, told.doubt_id) == (True, doubt.id)
    assert told.doubt == doubt.reason


def test_a_reading_without_load_has_no_voltage_at_rated_current(session):
    section = make_section(session, name="EW1")
    make_current(session, section.id, [FIRST_MS, NOW_MS], [500.0, 500.0])
    make_readings(session, section.cell_ids[0], [FIRST_MS + HOUR_MS], [1.2])
    keep_books(session)

    assert page_of(session).readings[0].referred_v is None
