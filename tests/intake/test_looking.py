import io

import pytest

from server.intake.looking import keep_and_look, look_through, take_in_sending
from server.intake.spool import Spool
from server.settings import Settings
from server.storage.deliveries import Delivery
from server.storage.plant import house
from tests.factories import NOW_MS, make_section

VOLTS = b"at,section,cell,volts\n2024-03-05T06:00,EW1,1,2.031\n2024-03-05T06:01,EW1,2,2o29\n"
OTHER = b"a,b\n1,2\n"


@pytest.fixture
def spool(tmp_path):
    return Spool(tmp_path / "uploads")


@pytest.fixture
def plant(session):
    make_section(session, name="EW1")
    return house(session)


def look(session, plant, spool, *contents):
    files = [(f"{place}.csv", io.BytesIO(content)) for place, content in enumerate(contents)]
    return keep_and_look(session, plant, spool, files, "ana", NOW_MS, Settings())


def test_what_files_would_bring_is_told_and_nothing_is_stored(session, plant, spool):
    ticket = look(session, plant, spool, VOLTS, OTHER)

    good, other = ticket.files
    assert (good.preview.rows, good.preview.new, good.preview.held) == (2, 1, 1)
    assert (other.preview, "do not make up a sheet" in other.refusal) == (None, True)
    assert session.query(Delivery).count() == 0


def test_it_is_told_the_same_when_asked_again(session, plant, spool):
    ticket = look(session, plant, spool, VOLTS)

    assert spool.waiting(ticket.id, "ana", NOW_MS) == ticket


def test_what_can_be_read_is_taken_in_and_forgotten(session, plant, spool, database):
    ticket = look(session, plant, spool, VOLTS, OTHER)
    session.rollback()

    results = take_in_sending(database, plant, spool, ticket, NOW_MS, Settings())

    assert [(result.name, result.stored, result.held) for result in results] == [("0.csv", 1, 1)]
    assert not spool.path(ticket, 0).exists()
    assert session.query(Delivery).one().sender == "ana"


def test_as_corrections_rows_take_the_place_of_what_is_stored(session, plant, spool, database):
    first = look(session, plant, spool, VOLTS)
    session.rollback()
    take_in_sending(database, plant, spool, first, NOW_MS, Settings())
    other_value = VOLTS.replace(b"2.031", b"2.041")

    ticket = look(session, plant, spool, other_value)
    again = look_through(session, plant, spool, ticket, NOW_MS, Settings(), "wrong meter")

    assert (ticket.files[0].preview.new, ticket.files[0].preview.held) == (0, 2)
    assert (again.files[0].preview.new, again.reason) == (1, "wrong meter")
