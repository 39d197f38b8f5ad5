from server.intake.trial import faults_of_records
from server.settings import Settings
from server.storage.plant import house
from tests.factories import NOW_MS, make_lot, make_section

LOT = {
    "section": "EW1",
    "lot": "A-1",
    "cells": "1-2",
    "pulled_at": "2024-03-05T08:00",
    "weighed_at": "2024-03-05T09:00",
    "started_at": "",
    "cathodes_per_cell": "",
    "net_kg": "13000",
    "starter_kg": "0",
}


def faults(session, **given):
    return faults_of_records(
        session, house(session), "lots", [LOT | given], "ana", NOW_MS, Settings()
    )


def test_a_good_record_has_no_faults(session):
    make_section(session, name="EW1")

    assert faults(session) == []


def test_a_fault_names_its_column_and_says_what_was_expected(session):
    make_section(session, name="EW1")

    (fault,) = faults(session, net_kg="-5")

    assert (fault.column, fault.found) == ("net_kg", "-5")
    assert "net_kg" in fault.reason


def test_a_record_that_contradicts_the_books_is_a_fault_too(session):
    section = make_section(session, name="EW1")
    make_lot(session, section.id, name="A-1", cells="1-2", net_kg=9000.0)

    (fault,) = faults(session)

    assert fault.reason


def test_nothing_is_stored_or_held(session):
    make_section(session, name="EW1")

    faults(session, net_kg="-5")

    assert list(session.new) + list(session.dirty) == []
