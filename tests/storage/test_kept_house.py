"""The set-up is put together once, and anew after every change."""

import pytest

from server.storage.errors import NoPlant
from server.storage.kept_house import kept_house
from server.storage.plant import HouseTerms, SectionTerms, Tankhouse, house
from tests.factories import NOW_MS, make_section, make_terms


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def test_it_is_the_house(section, session):
    kept, plain = kept_house(session), house(session)

    assert (kept.name, kept.shifts) == (plain.name, plain.shifts)
    assert [s.cell_ids for s in kept.sections] == [s.cell_ids for s in plain.sections]


def test_it_is_put_together_once(section, session):
    assert kept_house(session) is kept_house(session)


def test_another_section_is_seen(section, session):
    kept_house(session)
    make_section(session, name="B")

    assert [found.name for found in kept_house(session).sections] == ["A", "B"]


def test_new_terms_are_seen(section, session):
    kept_house(session)
    make_terms(session, section.id, from_ms=NOW_MS, rated_amps=30_000.0)

    assert kept_house(session).section("A").terms_at(NOW_MS).rated_amps == 30_000.0


@pytest.mark.parametrize(
    ("table", "column", "value"),
    [
        (Tankhouse, "name", "South House"),
        (HouseTerms, "energy_price_per_kwh", 0.2),
        (SectionTerms, "low_volts", 1.7),
    ],
)
def test_a_change_in_place_is_seen_before_it_is_committed(section, session, table, column, value):
    before = kept_house(session)
    setattr(session.query(table).one(), column, value)
    session.flush()

    assert kept_house(session) is not before


def test_what_was_taken_back_is_forgotten(section, session):
    session.query(Tankhouse).one().name = "South House"
    session.flush()
    assert kept_house(session).name == "South House"

    session.rollback()

    assert kept_house(session).name == "North House"


def test_there_is_none_without_a_tankhouse(session):
    with pytest.raises(NoPlant):
        kept_house(session)
