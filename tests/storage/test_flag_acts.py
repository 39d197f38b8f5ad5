from server.storage.flag_acts import ActDone, acts_on_flags, acts_without_flag
from server.storage.flag_rows import replace_flags
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    make_find,
    make_flag,
    make_flag_act,
    make_section,
)

RAISED_MS = NOW_MS - DAY_MS


def test_acts_are_read_in_the_order_in_which_they_were_done(session):
    section = make_section(session)
    flag = make_flag(session, section.id, section.cell_ids[2])
    make_flag_act(session, flag, "seen", at_ms=RAISED_MS + 2 * HOUR_MS, who="ines")
    make_flag_act(session, flag, "working", assigned_to="mira")

    acts = acts_on_flags(session, RAISED_MS, RAISED_MS + 1)

    key = (section.cell_ids[2], "drift high", RAISED_MS)
    assert acts == {
        key: [
            ActDone(key, RAISED_MS + HOUR_MS, "tomas", "working", assigned_to="mira"),
            ActDone(key, RAISED_MS + 2 * HOUR_MS, "ines", "seen"),
        ]
    }


def test_acts_on_flags_of_another_time_are_left_out(session):
    section = make_section(session)
    make_flag_act(session, make_flag(session, section.id, section.cell_ids[0]), "seen")

    assert acts_on_flags(session, RAISED_MS + 1, NOW_MS) == {}


def test_an_act_that_points_to_a_find_tells_its_key(session):
    section = make_section(session)
    cell_id = section.cell_ids[4]
    flag = make_flag(session, section.id, cell_id)
    find = make_find(session, section.id, cell_id, cathode=17)
    make_flag_act(session, flag, "closed", find_id=find.id)

    ((act,),) = acts_on_flags(session, 0, NOW_MS).values()

    assert act.find == (cell_id, NOW_MS, 17)


def test_an_act_outlives_the_flag_and_is_told(session):
    section = make_section(session)
    kept = make_flag(session, section.id, section.cell_ids[0])
    gone = make_flag(session, section.id, section.cell_ids[1], raised_ms=NOW_MS - 3 * DAY_MS)
    make_flag_act(session, kept, "seen")
    make_flag_act(session, gone, "seen")
    make_flag_act(session, gone, "working", assigned_to="mira")

    replace_flags(session, section.id, 0, NOW_MS - 2 * DAY_MS, [])

    key = (section.cell_ids[1], "drift high", NOW_MS - 3 * DAY_MS)
    assert acts_without_flag(session) == [(key, 2)]
