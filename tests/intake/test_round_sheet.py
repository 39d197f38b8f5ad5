import pytest

from server.intake.round_sheet import round_sheet
from tests.factories import (
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_outage,
    make_readings,
    make_section,
)

HOLD_MS = 2 * HOUR_MS
ROUNDS = range(NOW_MS - 80 * HOUR_MS, NOW_MS - 8 * HOUR_MS + 1, 8 * HOUR_MS)


def volts_about(level):
    return [level + 0.003 * (place % 3 - 1) for place in range(len(ROUNDS))]


def test_the_cells_come_in_the_order_in_which_they_are_walked(session):
    section = make_section(session, cells=6, rows=2, walk_order="snake")

    sheet = round_sheet(session, section, NOW_MS, HOLD_MS)

    assert [[cell.number for cell in stretch] for stretch in sheet.stretches] == [
        [1, 2, 3],
        [6, 5, 4],
    ]
    assert [cell.row for cell in sheet.cells] == [1, 1, 1, 2, 2, 2]


def test_without_history_there_is_no_last_reading_and_no_usual_range(session):
    section = make_section(session)

    cell = round_sheet(session, section, NOW_MS, HOLD_MS).cells[0]

    assert (cell.last_volts, cell.last_ms) == (None, None)
    assert (cell.low_volts, cell.high_volts) == (None, None)


def test_the_usual_range_lies_about_the_cells_own_level(session):
    section = make_section(session)
    for number, cell_id in enumerate(section.cell_ids):
        make_readings(session, cell_id, ROUNDS, volts_about(2.00 + 0.01 * number))
    keep_books(session)

    cells = round_sheet(session, section, NOW_MS, HOLD_MS).cells

    assert cells[3].last_ms == ROUNDS[-1]
    assert cells[3].last_volts == pytest.approx(2.03 + 0.003 * ((len(ROUNDS) - 1) % 3 - 1))
    assert 2.010 < cells[3].low_volts < 2.027
    assert 2.033 < cells[3].high_volts < 2.050
    middle = (cells[7].low_volts + cells[7].high_volts) / 2
    assert middle == pytest.approx(2.07, abs=0.002)


def test_the_usual_range_follows_the_current(session):
    section = make_section(session, differential_resistance_ohm=10e-6)
    make_readings(session, section.cell_ids[0], ROUNDS, volts_about(2.0))
    for at_ms in ROUNDS:
        make_current(session, section.id, [at_ms], [36_000.0])
    make_current(session, section.id, [NOW_MS - 1], [30_000.0])
    keep_books(session)

    cell = round_sheet(session, section, NOW_MS, HOLD_MS).cells[0]

    assert (cell.low_volts + cell.high_volts) / 2 == pytest.approx(2.0 - 0.06, abs=0.001)


def test_readings_taken_while_the_section_idled_tell_nothing(session):
    section = make_section(session)
    make_readings(session, section.cell_ids[0], ROUNDS, volts_about(0.9))
    for at_ms in ROUNDS:
        make_current(session, section.id, [at_ms], [500.0])
    keep_books(session)

    cell = round_sheet(session, section, NOW_MS, HOLD_MS).cells[0]

    assert cell.low_volts is None


def test_who_is_bypassed_and_what_is_off_is_told_since_when(session):
    section = make_section(session)
    lasts = {"to_ms": None}
    since_ms = NOW_MS - 5 * HOUR_MS
    make_outage(session, section.id, cells="2-3", from_ms=since_ms, state="bypassed", **lasts)
    make_outage(session, section.id, **lasts)

    sheet = round_sheet(session, section, NOW_MS, HOLD_MS)

    assert sheet.off_since_ms == NOW_MS - HOUR_MS
    assert [cell.bypassed_since_ms for cell in sheet.cells[:4]] == [
        None,
        since_ms,
        since_ms,
        None,
    ]


def test_the_last_current_is_told_with_its_moment(session):
    section = make_section(session)
    make_current(session, section.id, [NOW_MS - 9 * HOUR_MS], [35_500.0])

    sheet = round_sheet(session, section, NOW_MS, HOLD_MS)

    assert (sheet.last_amps, sheet.last_amps_ms) == (35_500.0, NOW_MS - 9 * HOUR_MS)


def test_nothing_later_than_the_moment_is_used(session):
    section = make_section(session)
    make_readings(session, section.cell_ids[0], ROUNDS, volts_about(2.0))

    sheet = round_sheet(session, section, ROUNDS[1], HOLD_MS)

    assert sheet.cells[0].low_volts is None
