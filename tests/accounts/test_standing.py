import pytest

from server.accounts.results import RoundState
from server.accounts.standing import is_current_old, is_round_late, section_standing
from server.storage.plant import house
from tests.factories import HOUR_MS, NOW_MS, keep_books, make_current, make_readings, make_section

HOLD_MS = 2 * HOUR_MS


def walked(cells_read, to_ms=NOW_MS + HOUR_MS // 2):
    return RoundState("day", to_ms - 8 * HOUR_MS, to_ms, cells_read, 10, None)


def test_a_section_stands_with_its_current_and_its_round(session):
    section = make_section(session, name="EW1")
    make_current(session, section.id, [NOW_MS - HOUR_MS], [36_000.0])
    for cell_id in section.cell_ids[:4]:
        make_readings(session, cell_id, [NOW_MS - 2 * HOUR_MS], [2.03])
    keep_books(session)

    found = section_standing(session, house(session), "EW1", NOW_MS, HOLD_MS)

    assert (found.amps, found.amps_at_ms) == (36_000.0, NOW_MS - HOUR_MS)
    assert (found.round.shift, found.round.cells_read, found.cells_in_service) == ("day", 4, 10)
    assert not found.is_current_old


@pytest.mark.parametrize(
    ("amps_at_ms", "is_off", "is_old"),
    [
        (NOW_MS - HOLD_MS, False, False),
        (NOW_MS - HOLD_MS - 1, False, True),
        (NOW_MS - HOLD_MS - 1, True, False),
        (None, False, False),
    ],
)
def test_a_current_is_old_when_it_is_no_longer_held(amps_at_ms, is_off, is_old):
    assert is_current_old(amps_at_ms, is_off, NOW_MS, HOLD_MS) == is_old


def test_a_round_is_late_only_in_the_last_hour_of_the_shift():
    assert is_round_late(walked(9), False, NOW_MS, NOW_MS)
    assert not is_round_late(walked(10), False, NOW_MS, NOW_MS)
    assert not is_round_late(walked(0), True, NOW_MS, NOW_MS)
    assert not is_round_late(walked(0, to_ms=NOW_MS + 2 * HOUR_MS), False, NOW_MS, NOW_MS)


@pytest.mark.parametrize("amps_at_ms", [None, NOW_MS - 25 * HOUR_MS])
def test_a_section_that_nobody_runs_has_no_late_round(amps_at_ms):
    assert not is_round_late(walked(0), False, amps_at_ms, NOW_MS)
