import pytest

from server.storage.flag_spans import FlagSpan
from server.watch.load import load_of

DAY_MS = 86_400_000
MINUTE_MS = 60_000
FROM_MS = 1_709_510_400_000
TO_MS = FROM_MS + 30 * DAY_MS


def flag(cell, day, length_days=None, tier="look", minute=0):
    raised_ms = FROM_MS + round(day * DAY_MS) + minute * MINUTE_MS
    ended_ms = None if length_days is None else raised_ms + round(length_days * DAY_MS)
    return FlagSpan(cell, 1, "short", tier, raised_ms, ended_ms, None)


def figures(flags):
    return {figure.name: figure.value for figure in load_of(flags, FROM_MS, TO_MS).figures}


def test_alarms_are_counted_by_day_hour_and_ten_minutes():
    told = figures([flag(cell, day, 0.5) for cell in range(6) for day in range(30)])

    assert told["per_day"] == pytest.approx(6.0)
    assert told["per_hour"] == pytest.approx(0.25)
    assert told["per_ten_minutes"] == pytest.approx(6 / 144)


@pytest.mark.parametrize(("count", "floods"), [(10, 0), (11, 1)])
def test_more_than_ten_in_ten_minutes_are_a_flood(count, floods):
    told = figures([flag(cell, 2.0, 0.5, minute=cell % 10) for cell in range(count)])

    assert told["most_in_ten_minutes"] == count
    assert told["flood_share"] == pytest.approx(floods / (30 * 144))


def test_what_was_raised_before_stands_and_is_no_new_alarm():
    told = figures([flag(1, -5.0), flag(2, -3.0, 5.0)])

    assert told["per_day"] == 0
    assert told["standing_at_the_end"] == 1
    assert told["standing_on_average"] == pytest.approx((30 + 2) / 30)


def test_a_flag_stands_from_its_second_day_on():
    told = figures([flag(1, 29.5), flag(2, 10.0, 1.0)])

    assert told["standing_at_the_end"] == 0
    assert told["standing_on_average"] == 0


@pytest.mark.parametrize(("gap_days", "chatters"), [(0.9, 1), (1.1, 0)])
def test_a_flag_that_is_raised_again_within_a_day_chatters(gap_days, chatters):
    told = figures([flag(1, 3.0, 1.0), flag(1, 4.0 + gap_days, 1.0), flag(2, 5.0, 1.0)])

    assert told["chattering"] == chatters


def test_the_share_to_act_on():
    assert figures([flag(1, 1.0, 1, "act"), flag(2, 1.0, 1)])["act_share"] == pytest.approx(0.5)


def test_the_ten_worst_cells_share_of_the_load():
    flags = [flag(0, day, 0.1) for day in range(0, 30, 3)]
    flags += [flag(cell, 1.0, 0.1) for cell in range(1, 21)]

    assert figures(flags)["worst_cells_share"] == pytest.approx(19 / 30)


def test_a_quiet_month_has_no_shares():
    told = figures([])

    assert (told["per_day"], told["act_share"], told["worst_cells_share"]) == (0.0, None, None)
