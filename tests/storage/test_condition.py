"""In what condition the books are, whatever is wrong with them."""

import pytest

from server.storage.condition import condition, newest_revision, readiness
from server.storage.database import Database
from server.storage.stale import mark
from tests.factories import make_delivery, make_held_row, make_section, make_suspicion


def test_books_at_the_newest_tables_are_ready(database):
    found = readiness(database, newest_revision())

    assert found.is_ready
    assert found.revision == newest_revision()
    assert found.stale_stretches == 0


def test_a_database_without_tables_is_reachable_and_not_ready(empty_database_url):
    database = Database(empty_database_url)

    found = readiness(database, newest_revision())

    database.close()
    assert found.is_reachable
    assert found.revision is None
    assert not found.is_ready


def test_older_tables_are_not_ready(database):
    assert not readiness(database, "9999").is_ready


@pytest.mark.parametrize("url", ["sqlite:////no/such/folder/books.db", "sqlite:///{folder}"])
def test_a_database_that_cannot_be_opened_is_told_not_raised(tmp_path, url):
    database = Database(url.format(folder=tmp_path))

    found = readiness(database, newest_revision())

    database.close()
    assert not found.is_reachable
    assert not found.is_ready


def test_what_waits_is_counted(session):
    section = make_section(session)
    make_delivery(session, stored=40)
    make_delivery(session, stored=2)
    make_held_row(session)
    make_held_row(session, state="mended")
    make_suspicion(session, section.id, section.cell_ids[0])
    mark(session, section.id, "lots", 0, 1)

    found = condition(session)

    assert found.rows_stored["volts"] == 42
    assert found.held_rows == 1
    assert found.open_suspicions == 1
    assert found.open_flags == 0
    assert found.stale_stretches == 1


def test_the_size_is_that_of_the_database(session):
    assert condition(session).database_bytes > 10_000
