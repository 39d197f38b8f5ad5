import io

import pytest

from server.intake.spool import LASTS_MS, MOST_OF_ONE, Spool
from server.storage.errors import NotFound
from tests.factories import NOW_MS


@pytest.fixture
def spool(tmp_path):
    return Spool(tmp_path / "books.db-uploads")


def keep(spool, owner="ana", now_ms=NOW_MS, content=b"at,section,cell,volts\n"):
    return spool.keep([("night.csv", io.BytesIO(content))], owner, now_ms)


def test_what_was_sent_is_kept_for_its_sender(spool):
    ticket = keep(spool, content=b"word for word")

    again = spool.waiting(ticket.id, "ana", NOW_MS)

    assert again == ticket
    assert [(file.name, file.size_bytes) for file in again.files] == [("night.csv", 13)]
    assert spool.path(again, 0).read_bytes() == b"word for word"


def test_nobody_else_finds_it(spool):
    ticket = keep(spool)

    with pytest.raises(NotFound):
        spool.waiting(ticket.id, "ben", NOW_MS)


def test_it_waits_two_hours_and_is_swept_out_with_the_next(spool):
    ticket = keep(spool)
    later_ms = NOW_MS + LASTS_MS + 1

    with pytest.raises(NotFound):
        spool.waiting(ticket.id, "ana", later_ms)
    keep(spool, owner="ben", now_ms=later_ms)
    assert not spool.path(ticket, 0).exists()


def test_one_person_does_not_fill_the_disk(spool):
    tickets = [keep(spool, now_ms=NOW_MS + place) for place in range(MOST_OF_ONE + 2)]
    other = keep(spool, owner="ben")

    left = [ticket for ticket in tickets if spool.path(ticket, 0).exists()]

    assert left == tickets[2:]
    assert spool.path(other, 0).exists()


@pytest.mark.parametrize("name", ["", "..", "../../etc", "/etc/passwd", "a" * 200, "x\x00y"])
def test_a_name_that_is_no_ticket_finds_nothing(spool, name):
    keep(spool)

    with pytest.raises(NotFound):
        spool.waiting(name, "ana", NOW_MS)


def test_what_is_dropped_is_gone(spool):
    ticket = keep(spool)

    spool.drop(ticket)

    with pytest.raises(NotFound):
        spool.waiting(ticket.id, "ana", NOW_MS)


def test_only_the_servers_own_user_may_look(spool, tmp_path):
    ticket = keep(spool)

    folder = spool.path(ticket, 0).parent

    assert folder.stat().st_mode & 0o077 == 0
    assert folder.parent.stat().st_mode & 0o077 == 0
