import pytest

from server.storage.finds import FoundThere
from server.storage.flag_acts import ActDone
from server.watch.life import (
    AFTERWARDS_MS,
    DAY_MS,
    EFFECT_MS,
    RESTS_MS,
    Span,
    judged,
    life_of,
    verdict_of,
)

HOUR_MS = 3_600_000
RAISED_MS = 1_709_500_000_000
OPEN = Span("short", RAISED_MS, None)
NOW_MS = RAISED_MS + 10 * DAY_MS
KEY = (7, "short", RAISED_MS)


def act(what, after_ms=HOUR_MS, **given):
    return ActDone(KEY, RAISED_MS + after_ms, given.pop("who", "tomas"), what, **given)


def find(found="short", after_ms=DAY_MS, cathode=0):
    return FoundThere(7, RAISED_MS + after_ms, cathode, found, "")


def test_a_flag_nobody_has_seen_is_raised():
    life = life_of(OPEN, [], [], NOW_MS)

    assert (life.state, life.since_ms, life.seen_by) == ("raised", RAISED_MS, None)


def test_whoever_does_something_first_has_seen_it():
    life = life_of(OPEN, [act("seen"), act("seen", DAY_MS, who="ines")], [], NOW_MS)

    assert (life.state, life.seen_by, life.since_ms) == ("seen", "tomas", RAISED_MS + HOUR_MS)


def test_a_flag_is_worked_on_by_whom_it_was_last_given_to():
    acts = [act("working", assigned_to="mira"), act("working", DAY_MS, assigned_to="ines")]

    life = life_of(OPEN, acts, [], NOW_MS)

    assert (life.state, life.assigned_to) == ("working", "ines")


def test_a_later_look_does_not_stop_the_work():
    acts = [act("working", assigned_to="mira"), act("seen", DAY_MS)]

    assert life_of(OPEN, acts, [], NOW_MS).state == "working"


def test_what_is_done_later_is_not_known_yet():
    life = life_of(OPEN, [act("seen", 2 * DAY_MS)], [], RAISED_MS + DAY_MS)

    assert life.state == "raised"


def test_a_shelved_flag_comes_back_by_itself():
    until_ms = RAISED_MS + 3 * DAY_MS
    acts = [act("shelved", until_ms=until_ms, reason="pull on Friday")]

    before = life_of(OPEN, acts, [], until_ms - 1)
    after = life_of(OPEN, acts, [], until_ms)

    assert (before.state, before.shelved_until_ms) == ("shelved", until_ms)
    assert before.reason == "pull on Friday"
    assert (after.state, after.came_back_ms, after.since_ms) == ("raised", until_ms, until_ms)
    assert after.shelved_until_ms is None


def test_what_comes_back_has_to_be_seen_again():
    until_ms = RAISED_MS + DAY_MS
    acts = [act("shelved", until_ms=until_ms, reason="x"), act("seen", 2 * DAY_MS, who="ines")]

    assert life_of(OPEN, acts, [], until_ms + HOUR_MS).state == "raised"
    assert life_of(OPEN, acts, [], NOW_MS).state == "seen"


def test_a_flag_can_be_taken_off_the_shelf():
    acts = [act("shelved", until_ms=NOW_MS + DAY_MS, reason="x"), act("unshelved", DAY_MS)]

    assert life_of(OPEN, acts, [], NOW_MS).state == "seen"


@pytest.mark.parametrize(
    ("kind", "found", "verdict"),
    [
        ("short", "short", "hit"),
        ("short", "insulator", "hit"),
        ("short", "contact", "something else"),
        ("short", "nothing", "false call"),
        ("drift low", "short", "hit"),
        ("drift high", "contact", "hit"),
        ("drift high", "anode", "hit"),
        ("drift high", "short", "something else"),
        ("drift high", "nothing", "false call"),
        ("no reading", "nothing", None),
        ("suspect reading", "contact", None),
    ],
)
def test_what_a_find_says_of_a_flag(kind, found, verdict):
    assert verdict_of(kind, found) == verdict


@pytest.mark.parametrize("found", ["short", "nothing"])
def test_a_find_closes_an_open_flag(found):
    life = life_of(OPEN, [], [find(found)], RAISED_MS + 2 * DAY_MS)

    assert (life.state, life.ended_by, life.since_ms) == ("ended", "find", RAISED_MS + DAY_MS)
    assert life.verdict == {"short": "hit", "nothing": "false call"}[found]


def test_something_else_at_the_cell_leaves_the_flag_open():
    life = life_of(OPEN, [], [find("contact")], NOW_MS)

    assert (life.state, life.verdict) == ("raised", "something else")


def test_a_find_recorded_for_the_very_flag_closes_it_whatever_it_is():
    there = find("contact")
    acts = [act("closed", DAY_MS, find=there.key)]

    life = life_of(OPEN, acts, [there], NOW_MS)

    assert (life.state, life.ended_by, life.verdict) == ("ended", "find", "something else")


def test_a_find_that_was_withdrawn_closes_nothing():
    acts = [act("closed", DAY_MS, find=find().key)]

    life = life_of(OPEN, acts, [], NOW_MS)

    assert (life.state, life.verdict) == ("raised", None)


def test_a_flag_comes_back_where_the_readings_go_on_saying_so():
    found_ms = RAISED_MS + DAY_MS
    soon = life_of(OPEN, [], [find()], NOW_MS, last_read_ms=found_ms + RESTS_MS - 1)
    later = life_of(OPEN, [], [find()], NOW_MS, last_read_ms=found_ms + RESTS_MS)

    assert soon.state == "ended"
    assert (later.state, later.came_back_ms) == ("raised", found_ms + RESTS_MS)
    assert later.verdict == "hit"


def test_a_person_closes_a_flag_with_a_reason():
    life = life_of(OPEN, [act("closed", reason="cell is being rebuilt")], [], NOW_MS)

    assert (life.state, life.ended_by) == ("ended", "person")
    assert life.reason == "cell is being rebuilt"


@pytest.mark.parametrize(
    ("after_ms", "speaks"), [(AFTERWARDS_MS, True), (AFTERWARDS_MS + 1, False)]
)
def test_a_find_speaks_for_a_flag_that_ended_shortly_before(after_ms, speaks):
    span = Span("short", RAISED_MS, RAISED_MS + DAY_MS)

    found = judged(span, [find(after_ms=DAY_MS + after_ms)])

    assert (found is not None) is speaks


def test_a_find_before_the_flag_says_nothing_of_it():
    assert judged(OPEN, [find(after_ms=-1)]) is None


def test_a_hit_goes_before_what_else_was_found():
    finds = [find("nothing"), find("contact", 2 * HOUR_MS), find("short", 2 * DAY_MS, 12)]

    found = judged(OPEN, finds)

    assert found == ("hit", finds[2])


@pytest.mark.parametrize(
    ("finds", "pulls", "by"),
    [
        ([], [], "evidence"),
        ([], [RAISED_MS + 4 * DAY_MS], "pull"),
        ([find(after_ms=4 * DAY_MS + 1)], [RAISED_MS + 4 * DAY_MS], "find"),
        ([find(after_ms=HOUR_MS)], [], "evidence"),
        ([find("contact", 4 * DAY_MS)], [], "evidence"),
        ([], [RAISED_MS + 5 * DAY_MS - EFFECT_MS - 1], "evidence"),
        ([], [RAISED_MS + 5 * DAY_MS + 1], "evidence"),
    ],
)
def test_what_ended_a_flag(finds, pulls, by):
    span = Span("short", RAISED_MS, RAISED_MS + 5 * DAY_MS)

    life = life_of(span, [], finds, NOW_MS, pulls)

    assert (life.state, life.ended_by) == ("ended", by)


def test_a_flag_that_ends_later_is_open_still():
    span = Span("short", RAISED_MS, RAISED_MS + 5 * DAY_MS)

    assert life_of(span, [], [], RAISED_MS + DAY_MS).state == "raised"
