"""The makers fill every table with rows that the program itself can read."""

from server.storage.latest import latest
from server.storage.plant import house
from server.storage.rebuild import record_span
from tests import factories as make
from tests.factories import HOUR_MS, NOW_MS


def test_a_section_comes_with_its_house_and_cells(session):
    section = make.make_section(session, name="North", cells=3)

    assert [s.name for s in house(session).sections] == ["North"]
    assert len(section.cell_ids) == 3


def test_two_sections_share_one_house(session):
    make.make_section(session)
    make.make_section(session)

    assert len(house(session).sections) == 2


def test_every_record_can_be_made_without_saying_more(session):
    section = make.make_section(session)
    cell = section.cell_ids[0]
    at_ms = [NOW_MS - HOUR_MS, NOW_MS]

    make.make_current(session, section.id, at_ms, [36_000.0, 36_100.0])
    make.make_counter(session, section.id, at_ms, [0.0, 36e3 * 3600])
    make.make_readings(session, cell, at_ms, [2.031, 2.032])
    make.make_lot(session, section.id)
    make.make_outage(session, section.id)
    make.make_assay(session, section.id)
    make.make_find(session, section.id, cell)
    make.make_held_row(session)
    make.make_suspicion(session, section.id, cell)
    make.make_flag_act(session, make.make_flag(session, section.id, cell), "seen")
    make.make_person(session)
    make.make_token(session, "0" * 64)

    assert record_span(session, section)


def test_books_are_kept_of_what_was_made(session):
    section = make.make_section(session)
    at_ms = [NOW_MS - HOUR_MS, NOW_MS]
    make.make_current(session, section.id, at_ms, [36_000.0, 36_000.0])
    make.make_readings(session, section.cell_ids[0], at_ms, [2.031, 2.032])

    make.keep_books(session)

    assert latest(session, section.cell_ids) == {section.cell_ids[0]: (NOW_MS, 2.032)}
