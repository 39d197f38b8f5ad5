import pytest

from server.storage.delivery_list import (
    deliveries,
    deliveries_with,
    delivery,
    still_doubted,
    still_held,
)
from server.storage.errors import NotFound
from tests.factories import make_delivery, make_held_row, make_section, make_suspicion


def test_the_newest_come_first_a_page_at_a_time(session):
    ids = [make_delivery(session).id for _ in range(5)]

    first = [found.id for found in deliveries(session, 2)]
    then = [found.id for found in deliveries(session, 2, before_id=first[-1])]

    assert (first, then) == ([ids[4], ids[3]], [ids[2], ids[1]])


def test_some_are_looked_up_in_the_order_in_which_they_came(session):
    ids = [make_delivery(session).id for _ in range(3)]

    found = deliveries_with(session, [ids[2], ids[0], 999])

    assert [one.id for one in found] == [ids[0], ids[2]]


def test_one_that_is_not_there_is_not_found(session):
    with pytest.raises(NotFound):
        delivery(session, 7)


def test_what_still_waits_is_counted_by_delivery(session):
    section = make_section(session)
    first, second = make_delivery(session), make_delivery(session)
    make_held_row(session, delivery_id=first.id)
    make_held_row(session, delivery_id=first.id)
    make_held_row(session, delivery_id=first.id, state="dropped")
    make_suspicion(session, section.id, section.cell_ids[0], delivery_id=second.id)

    ids = [first.id, second.id]

    assert still_held(session, ids) == {first.id: 2}
    assert still_doubted(session, ids) == {second.id: 1}
