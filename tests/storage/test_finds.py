from server.storage.finds import FoundThere, find_id, finds_between, pulls_between
from tests.factories import (
    DAY_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_find,
    make_lot,
    make_section,
)


def test_a_find_counts_as_it_was_last_corrected(session):
    section = make_section(session)
    cell_id = section.cell_ids[0]
    make_find(session, section.id, cell_id)
    newest = make_find(session, section.id, cell_id, found="contact", revision=1)
    make_find(session, section.id, section.cell_ids[1], is_void=1)

    assert finds_between(session, 0, NOW_MS + 1) == {
        cell_id: [FoundThere(cell_id, NOW_MS, 1, "contact", "nodule knocked off")]
    }
    assert find_id(session, cell_id, NOW_MS, 1) == newest.id
    assert find_id(session, cell_id, NOW_MS, 2) is None


def test_a_find_that_was_withdrawn_counts_no_more(session):
    section = make_section(session)
    make_find(session, section.id, section.cell_ids[0])
    make_find(session, section.id, section.cell_ids[0], is_void=1, revision=1)

    assert finds_between(session, 0, NOW_MS + 1) == {}


def test_pulls_are_told_by_cell(session):
    section = make_section(session)
    make_current(session, section.id, [NOW_MS - 8 * DAY_MS, NOW_MS], [36_000.0, 36_000.0])
    make_lot(session, section.id, cells="2-3", pulled_ms=NOW_MS - DAY_MS)
    keep_books(session)

    pulls = pulls_between(session, NOW_MS - 2 * DAY_MS, NOW_MS)

    assert pulls == {cell_id: [NOW_MS - DAY_MS] for cell_id in section.cell_ids[1:3]}
