"""Whatever changes what pages show changes what is newest; what changes nothing does not."""

import pytest

from server.storage.news import newest
from server.storage.stale import mark
from tests.factories import (
    make_delivery,
    make_flag,
    make_flag_act,
    make_held_row,
    make_section,
    make_suspicion,
)


def test_empty_books_have_news_of_nothing(session):
    assert newest(session) == newest(session)


def test_two_looks_at_the_same_books_are_the_same(session):
    make_section(session)
    make_delivery(session)

    assert newest(session) == newest(session)


@pytest.mark.parametrize(
    "happens",
    [
        lambda session, _section: make_delivery(session),
        lambda session, _section: make_held_row(session),
        lambda session, section: make_suspicion(session, section.id, section.cell_ids[0]),
        lambda session, section: make_flag(session, section.id, section.cell_ids[0]),
        lambda session, section: mark(session, section.id, "readings", 0, 1),
    ],
    ids=["a delivery", "a row held", "a reading doubted", "a flag", "figures that lag"],
)
def test_what_happens_is_news(session, happens):
    section = make_section(session)
    before = newest(session)

    happens(session, section)
    session.flush()

    assert newest(session) != before


def test_what_somebody_did_about_a_flag_is_news(session):
    section = make_section(session)
    flag = make_flag(session, section.id, section.cell_ids[0])
    before = newest(session)

    make_flag_act(session, flag, "seen")

    assert newest(session) != before
