import pytest

from server.intake.plant_change import section_fields
from server.intake.plant_faults import PlantFault
from server.web.plant_form import (
    as_typed,
    changes_of,
    faults_by_field,
    section_fields_flat,
    value_of,
)
from tests.factories import NOW_MS, make_section


@pytest.fixture
def shown(session):
    return as_typed(section_fields(make_section(session), NOW_MS))


def test_every_key_of_a_section_that_may_change_has_a_field(session):
    fields = section_fields(make_section(session), NOW_MS)

    fixed = {"name", "process", "metal", "electrons"}
    shown = set(section_fields_flat()) - {"low_volts", "high_volts"} | {"cell_volts"}
    assert shown == set(fields) - fixed


def test_what_is_sent_as_it_was_shown_changes_nothing(shown):
    assert changes_of(shown, shown) == {}


def test_the_same_number_written_otherwise_changes_nothing(shown):
    assert changes_of(shown | {"rated_current_ka": " 36,00 "}, shown) == {}


def test_one_limit_changes_both_are_sent(shown):
    assert changes_of(shown | {"high_volts": "2,2"}, shown) == {"cell_volts": [1.85, 2.2]}


def test_a_blank_takes_a_value_out(shown):
    assert changes_of(shown | {"bus_volts": "", "rectifier_efficiency_pct": ""}, shown) == {
        "rectifier_efficiency_pct": None
    }


@pytest.mark.parametrize(
    ("key", "text", "value"),
    [
        ("cells", "48", 48),
        ("cells", "48.5", "48.5"),
        ("rated_current_ka", "36,5", 36.5),
        ("rated_current_ka", "thirty", "thirty"),
        ("walk_order", " snake ", "snake"),
        ("walk_order", "", ""),
        ("bus_volts", " ", None),
    ],
)
def test_what_is_typed_is_read_as_its_field_wants(key, text, value):
    assert value_of(section_fields_flat()[key], text) == value


def test_faults_find_their_fields():
    faults = [
        PlantFault("section EW1: targets.cell_volts", "[3, 2]", "the lower one first"),
        PlantFault("cells", "“x”", "a number"),
        PlantFault("the file", "", "a table"),
    ]

    assert faults_by_field(faults, ["cells", "rows"]) == {
        "low_volts": "Expected the lower one first.",
        "cells": "Expected a number.",
        "": "Expected a table.",
    }
