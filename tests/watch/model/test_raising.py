"""When flags come and go, on small sections whose truth is known."""

import numpy as np
import pytest

from server.watch.model.raising import look_probability
from tests.watch.model.sections import (
    DAY_MS,
    NOISE_V,
    OHM,
    RATED_AMPS,
    facts,
    flags,
    made_up,
    pull_every_week,
)


def of_cell(replayed, place, kind="short", from_ms=0):
    """(raised, ended) of a cell's flags of a kind."""
    return [flag[1:] for flag in flags(replayed, kind) if flag[0] == place and flag[1] >= from_ms]


def is_flagged(replayed, place, at_ms):
    """Whether a cell was flagged for a short at a moment."""
    return any(
        raised <= at_ms and (ended is None or ended > at_ms)
        for raised, ended in of_cell(replayed, place)
    )


def raised_between(replayed, from_ms, to_ms):
    """How many flags of any kind were raised in [from_ms, to_ms)."""
    return sum(from_ms <= one.raised_ms < to_ms for one in replayed.book.raised)


def test_a_step_of_six_noises_is_flagged_at_the_first_reading_or_the_second():
    first, second, count = 0, 0, 0
    for seed in range(50):
        section = made_up(seed)
        begins = {place: 20 + place // 4 for place in range(0, 40, 5)}
        for place, turn in begins.items():
            section.volts[turn:, place] -= 6 * NOISE_V
        replayed = section.replayed()
        for place, turn in begins.items():
            count += 1
            first += is_flagged(replayed, place, section.at_ms[turn, place])
            second += is_flagged(replayed, place, section.at_ms[turn + 1, place])

    assert first >= 0.90 * count
    assert second >= 0.99 * count


def test_a_standing_short_does_not_become_what_the_cell_usually_reads():
    section = made_up(rounds=60)
    section.volts[10:, 7] -= 5 * NOISE_V

    replayed = section.replayed()

    ((raised_ms, ended_ms),) = of_cell(replayed, 7)
    assert section.at_ms[10, 7] <= raised_ms <= section.at_ms[11, 7]
    assert ended_ms is None
    assert replayed.outcomes[-1].probability[7] > 0.99
    assert replayed.outcomes[-1].deviation_v[7] == pytest.approx(-5 * NOISE_V, abs=0.012)


def test_a_section_whose_every_fourth_cell_is_shorted_is_seen_through():
    section = made_up(rounds=60)
    healthy = flags(section.replayed())
    section.volts[20:, ::4] -= 8 * NOISE_V

    found = flags(section.replayed())

    standing = {place for place, raised_ms, ended in found if ended is None}
    assert standing >= set(range(0, 40, 4))
    assert len(found) <= 10 + len(healthy) + 0.003 * section.volts.size


def test_a_pull_ends_a_short_at_its_moment_and_the_next_crop_starts_healthy():
    section = made_up(rounds=60)
    section.volts[20:40, 7] -= 8 * NOISE_V
    pulled_ms = int(section.at_ms[40, 7]) - 3_600_000
    section.pulls.append((pulled_ms, 7))

    replayed = section.replayed()

    assert of_cell(replayed, 7) == [(section.at_ms[20, 7], pulled_ms)]
    assert replayed.outcomes[40].probability[7] < 0.05


@pytest.mark.parametrize("is_after", [False, True])
def test_a_pull_during_the_walk_counts_from_its_own_moment_on(is_after):
    section = made_up(rounds=60)
    section.volts[20:41, 7] -= 8 * NOISE_V
    if not is_after:
        section.volts[40, 7] += 8 * NOISE_V
    section.pulls.append((int(section.at_ms[40, 7]) + (5_000 if is_after else -5_000), 7))

    replayed = section.replayed()

    assert of_cell(replayed, 7) == [(section.at_ms[20, 7], section.pulls[0][0])]
    assert (replayed.outcomes[40].probability[7] > 0.9) == is_after
    assert replayed.outcomes[41].probability[7] < 0.05


def test_a_short_that_was_knocked_off_ends_at_the_second_healthy_reading():
    section = made_up(rounds=60)
    section.volts[20:40, 7] -= 8 * NOISE_V

    assert of_cell(section.replayed(), 7) == [(section.at_ms[20, 7], section.at_ms[41, 7])]


@pytest.mark.parametrize("told", [0.7, 1.0, 1.3])
def test_a_tariff_cut_raises_nothing_though_the_resistance_is_told_wrong(told):
    amps = np.full(60, RATED_AMPS)
    amps[20::3] *= 0.7
    known = facts(resistance_ohm=told * OHM, u_resistance_ohm=0.2 * OHM)

    with_cuts, without = (
        sum(
            raised_between(one.replayed(known), one.at_ms[20, 0], 2**60)
            for one in (made_up(seed, rounds=60, amps=passed) for seed in range(8))
        )
        for passed in (amps, RATED_AMPS)
    )

    assert with_cuts <= without + 0.0005 * 8 * 40 * 40


def test_a_current_that_steps_in_the_course_of_a_walk_raises_nothing():
    raised = 0
    for seed in range(10):
        section = made_up(seed, rounds=32)
        # The log of the current still has the old one.
        section.volts[30, 10 + seed :] -= OHM * 7_000
        raised += raised_between(section.replayed(), section.at_ms[30, 0], section.at_ms[31, 0])

    assert raised <= 1


@pytest.mark.parametrize("offset_v", [0.015, -0.015])
def test_another_meter_for_a_round_raises_nothing(offset_v):
    for seed in range(5):
        section = made_up(seed, rounds=40)
        before = [(one.kind, one.place, one.raised_ms) for one in section.replayed().book.raised]
        section.volts[30] += offset_v

        after = [(one.kind, one.place, one.raised_ms) for one in section.replayed().book.raised]

        assert after == before


def test_missing_readings_end_nothing():
    section = made_up(rounds=60)
    section.volts[20:, 7] -= 8 * NOISE_V
    section.volts[25:, 7] = np.nan

    assert of_cell(section.replayed(), 7) == [(section.at_ms[20, 7], None)]


def test_a_cell_left_out_of_three_rounds_is_flagged_until_it_is_read():
    section = made_up(rounds=60)
    section.volts[30:36, 7] = np.nan
    section.volts[30:32, 9] = np.nan

    replayed = section.replayed()

    assert flags(replayed, "no reading") == [
        (7, section.at_ms[32, -1], section.at_ms[36, 7]),
    ]


def test_a_bypassed_cell_is_not_missed():
    section = made_up(rounds=60)
    section.volts[30:40, 7] = np.nan
    section.stays.append((7, int(section.at_ms[29, -1]) + 1, int(section.at_ms[40, 0])))

    assert flags(section.replayed(), "no reading") == []


def test_a_round_of_half_the_cells_misses_nobody():
    section = made_up(rounds=60)
    section.volts[30:40, 20:] = np.nan

    assert flags(section.replayed(), "no reading") == []


def test_a_reading_that_is_not_believed_is_flagged_until_the_next_that_is():
    section = made_up()
    section.volts[30, 7] = np.nan
    section.doubted.append((int(section.at_ms[30, 7]), 7))

    replayed = section.replayed()

    assert flags(replayed, "suspect reading") == [
        (7, section.at_ms[30, 7], section.at_ms[31, 7]),
    ]


def test_doubts_on_either_side_of_a_good_reading_are_two_flags():
    section = made_up()
    own_ms = int(section.at_ms[30, 7])
    section.doubted += [(own_ms - 5_000, 7), (own_ms + 5_000, 7)]

    assert flags(section.replayed(), "suspect reading") == [
        (7, own_ms - 5_000, own_ms),
        (7, own_ms + 5_000, section.at_ms[31, 7]),
    ]


def test_a_doubt_after_the_last_round_is_flagged():
    section = made_up()
    late_ms = int(section.at_ms[-1, -1]) + 60_000
    section.doubted.append((late_ms, 7))

    assert flags(section.replayed(), "suspect reading") == [(7, late_ms, None)]


def test_a_cell_whose_readings_are_doubted_is_not_missed():
    section = made_up(rounds=60)
    section.volts[30:36, 7] = np.nan
    section.doubted += [(int(at_ms), 7) for at_ms in section.at_ms[30:36, 7]]

    replayed = section.replayed()

    assert flags(replayed, "no reading") == []
    assert flags(replayed, "suspect reading") == [
        (7, section.at_ms[30, 7], section.at_ms[36, 7]),
    ]


@pytest.mark.parametrize(("sign", "kind"), [(1, "drift high"), (-1, "drift low")])
def test_a_drift_of_a_noise_a_week_is_raised_within_twelve_days(sign, kind):
    late, count = 0, 0
    for seed in range(6):
        section = made_up(seed, rounds=40 * 3)
        days = np.arange(120) / 3 - 28
        drifting = range(0, 40, 8)
        for place in drifting:
            section.volts[:, place] += sign * NOISE_V * np.maximum(days, 0) / 7
        raised = {place: at_ms for place, at_ms, _ in reversed(flags(section.replayed(), kind))}
        count += len(drifting)
        late += sum(
            raised.get(place, 2**60) > section.at_ms[84, place] + 12 * DAY_MS for place in drifting
        )

    assert late <= 0.35 * count


@pytest.mark.parametrize("is_pulled", [False, True])
def test_a_quiet_plant_is_left_in_peace(is_pulled):
    raised = []
    for seed in (11, 12):
        section = made_up(seed, rounds=500)
        if is_pulled:
            pull_every_week(section, crop_v=0.15 * NOISE_V)
        raised += section.replayed().book.raised

    # 40,000 readings: two in 1,000 to look at, one in 30,000 to act on.
    assert len(raised) < 80
    assert sum(one.tier == "act" for one in raised) <= 1


def test_the_probability_that_raises_a_flag_falls_while_all_is_quiet():
    replayed = made_up(rounds=60).replayed(until_ms=0)
    first = look_probability(replayed.state)

    section = made_up(rounds=300)
    pull_every_week(section)
    later = look_probability(section.replayed().state)

    assert first == 0.5
    assert later < first


def test_a_flag_says_act_from_ninety_nine_per_cent_on():
    section = made_up(rounds=60)
    section.volts[20:, 7] -= 20 * NOISE_V
    section.volts[20:, 9] -= 3.2 * NOISE_V

    replayed = section.replayed()

    for one in replayed.book.raised:
        at_once = replayed.outcomes[20:]
        reached = any(outcome.probability[one.place] >= 0.99 for outcome in at_once)
        assert one.tier == ("act" if reached else "look")
    assert {one.place: one.tier for one in replayed.book.raised}[7] == "act"
