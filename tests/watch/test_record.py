import pytest

from server.storage.plant import house
from server.watch.record import _calibration, coming_back, rightness, watch_record
from tests.factories import (
    DAY_MS,
    NOW_MS,
    make_find,
    make_flag,
    make_flag_act,
    make_section,
)
from tests.watch.test_load import flag


@pytest.fixture
def section(session):
    return make_section(session)


def test_the_share_of_hits_has_wilsons_interval():
    right = rightness(27, 30)

    # (p + z²/2n ± z √(p(1-p)/n + z²/4n²)) / (1 + z²/n), z = 1.959964, worked out by hand.
    assert right.share == pytest.approx(0.9)
    assert right.low == pytest.approx(0.7438, abs=5e-5)
    assert right.high == pytest.approx(0.9654, abs=5e-5)


def test_nobody_looked_and_nothing_was_right_are_two_things():
    assert rightness(0, 0) is None
    assert rightness(0, 3).share == 0


def test_one_find_speaks_for_each_flag_of_its_cell_by_its_kind(session, section):
    cell_id = section.cell_ids[0]
    make_flag(session, section.id, cell_id, kind="short")
    make_flag(session, section.id, cell_id, kind="drift high")
    make_flag(session, section.id, cell_id, kind="no reading")
    make_find(session, section.id, cell_id, found="short")

    told = {line.kind: line for line in watch_record(session, NOW_MS).overall}

    assert told["short"].hits == 1
    assert told["drift high"].something_else == 1
    assert told["no reading"].not_looked_at == 1


def test_a_late_find_counts_where_somebody_said_which_flag_it_answers(session, section):
    cell_id = section.cell_ids[0]
    raised = make_flag(
        *(session, section.id, cell_id), kind="short", ended_ms=NOW_MS - 20 * 3_600_000
    )
    old = make_flag(
        *(session, section.id, section.cell_ids[1]),
        kind="short",
        raised_ms=NOW_MS - 9 * DAY_MS,
        ended_ms=NOW_MS - 5 * DAY_MS,
    )
    make_find(session, section.id, cell_id)
    find = make_find(session, section.id, section.cell_ids[1])
    before = watch_record(session, NOW_MS).overall[0]

    make_flag_act(session, old, "closed", at_ms=NOW_MS, find_id=find.id)

    assert raised.kind == "short"
    assert (before.hits, before.not_looked_at) == (1, 1)
    assert watch_record(session, NOW_MS).overall[0].hits == 2


def test_a_cell_with_three_flags_in_ninety_days_comes_back_again_and_again(session, section):
    plan = house(session).section(section.name)
    for days in (80, 40, 2):
        raised = NOW_MS - days * DAY_MS
        make_flag(
            *(session, section.id, section.cell_ids[6]),
            kind="short" if days == 40 else "drift high",
            raised_ms=raised,
            ended_ms=raised + DAY_MS,
        )
    for days in (100, 40, 2):
        raised = NOW_MS - days * DAY_MS
        make_flag(session, section.id, section.cell_ids[7], raised_ms=raised, ended_ms=NOW_MS - 1)

    (cell,) = coming_back(session, house(session), NOW_MS)

    assert (cell.section, cell.cell, cell.flags) == (plan.name, 7, 3)
    assert cell.kinds == (("drift high", 2), ("short", 1))
    assert cell.last_ms == NOW_MS - 2 * DAY_MS


def stated(probability):
    found = flag(1, 0.0)
    return type(found)(1, 1, "short", "act", found.raised_ms, None, probability)


def test_probabilities_are_held_against_what_was_found():
    told = [
        (stated(0.6), "hit"),
        (stated(0.6), "false call"),
        (stated(0.95), "hit"),
        (stated(1.0), "hit"),
        (stated(0.8), None),
        (stated(None), "hit"),
        (stated(0.2), "hit"),
    ]

    bins = _calibration(told)

    assert [(part.low, part.high, part.flags, part.hits) for part in bins] == [
        (0.5, 0.7, 2, 1),
        (0.7, 0.9, 0, 0),
        (0.9, 0.99, 1, 1),
        (0.99, 1.0, 1, 1),
    ]
    assert bins[0].stated == pytest.approx(0.6)
    assert bins[1].right is None


def test_without_probabilities_there_is_nothing_to_hold_them_against(session, section):
    make_flag(session, section.id, section.cell_ids[0])

    assert watch_record(session, NOW_MS).calibration is None
