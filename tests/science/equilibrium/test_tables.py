"""Tables of standard potentials: chosen by key, never mixed."""

import pytest

from server.science.constants import METALS
from server.science.equilibrium.tables import (
    DEFAULT_TABLE,
    TABLES,
    potential_table,
    table_titles,
)
from server.science.errors import UnknownName


@pytest.mark.parametrize("key", TABLES)
def test_a_table_is_found_by_its_key_in_any_capitals(key):
    assert potential_table(f" {key.upper()} ") is TABLES[key]


def test_an_unknown_key_is_refused_with_a_near_one():
    with pytest.raises(UnknownName, match="crc recent"):
        potential_table("crc recnt")


def test_a_form_lists_the_default_first():
    titles = table_titles()

    assert next(iter(titles)) == DEFAULT_TABLE.key
    assert list(titles) == ["crc recent", "crc 54th edition", "bard 1985", "corrosion textbook"]
    assert len(set(titles.values())) == 4


@pytest.mark.parametrize("table", TABLES.values(), ids=TABLES)
def test_a_table_names_its_citation_and_the_status_of_its_figures(table):
    assert table.citation
    assert "looked up" in table.status or "from memory" in table.status


@pytest.mark.parametrize("table", TABLES.values(), ids=TABLES)
def test_metals_come_in_the_order_of_nobility_in_every_table(table):
    order = [("Ag", 1), ("Cu", 2), ("Pb", 2), ("Ni", 2), ("Fe", 2), ("Zn", 2), ("Mn", 2), ("Al", 3)]

    volts = [table.metal_v(*couple) for couple in order]

    assert volts == sorted(volts, reverse=True)


@pytest.mark.parametrize("table", TABLES.values(), ids=TABLES)
def test_every_table_has_what_a_winning_cell_of_the_usual_metals_needs(table):
    assert table.couple_v("O2/H2O") == 1.229
    assert table.couple_v("H+/H2") == 0.0
    assert {"Cu", "Zn", "Ni", "Mn", "Pb", "Sn", "Ag"} <= {symbol for symbol, _ in table.metals}


def test_the_default_table_has_every_metal_but_antimony():
    symbols = {symbol for symbol, _ in DEFAULT_TABLE.metals}

    assert METALS.keys() - symbols == {"Sb"}


def test_a_couple_that_a_table_lacks_is_refused_with_what_it_has():
    with pytest.raises(UnknownName, match="corrosion textbook") as refusal:
        TABLES["corrosion textbook"].couple_v("Cl2/Cl-")

    assert refusal.value.known == ("H+/H2", "O2/H2O")


def test_a_valency_that_a_table_lacks_is_refused():
    with pytest.raises(UnknownName, match="Au with 3"):
        TABLES["crc 54th edition"].metal_v("Au", 3)
