import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.errors import OutOfRange
from server.science.refining.copper_balance import (
    ARSINE_LIMITS,
    LOW_COPPER_G_L,
    copper_build_up_kg_s,
    liberator_cells,
    low_copper_with_arsenic,
)


def test_alike_efficiencies_leave_what_dissolves_by_itself():
    assert copper_build_up_kg_s(30e3, 1000, 0.97, 0.97, 0.03) == pytest.approx(0.03)


def test_an_electrolyte_that_is_drawn_down_is_shown():
    assert copper_build_up_kg_s(30e3, 1000, 0.95, 0.97) < 0.0


@given(st.floats(1e3, 60e3), st.floats(1.0, 2000.0), st.floats(0.85, 0.99))
def test_a_liberator_for_each_cell_at_the_same_current_takes_out_all_it_makes(
    amps, cells, efficiency
):
    copper = copper_build_up_kg_s(amps, cells, efficiency, 0.0)

    assert liberator_cells(copper, amps, efficiency) == pytest.approx(cells, rel=1e-12)


@pytest.mark.parametrize(
    ("copper", "arsenic", "warns"),
    [
        (0.5, 5.0, True),
        (LOW_COPPER_G_L, 5.0, False),
        (0.5, 0.0, False),
        (np.nan, 5.0, True),
        (0.5, np.nan, True),
        (np.nan, np.nan, True),
        (np.nan, 0.0, False),
        (8.0, np.nan, False),
    ],
)
def test_what_is_not_known_is_not_safe(copper, arsenic, warns):
    assert bool(low_copper_with_arsenic(copper, arsenic)) is warns


def test_the_caution_stands_where_liberators_are_counted():
    text = liberator_cells.__doc__ or ""

    assert "ARSINE" in text
    assert "procedure" in text


def test_every_limit_names_its_source_and_how_well_it_is_known():
    for limit in ARSINE_LIMITS:
        assert limit.source
        assert limit.status in ("looked up", "from memory")
        assert limit.value > 0.0


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    assert list(np.isnan(copper_build_up_kg_s([1.0, np.nan], 1, 0.99, 0.96))) == [False, True]
    assert list(np.isnan(liberator_cells([1.0, np.nan], 1.0, 0.9))) == [False, True]


@pytest.mark.parametrize(
    ("call", "quantity"),
    [
        (lambda: copper_build_up_kg_s(-1.0, 1, 0.99, 0.96), "current_a"),
        (lambda: copper_build_up_kg_s(1.0, -1, 0.99, 0.96), "cells"),
        (lambda: copper_build_up_kg_s(1.0, 1, -0.99, 0.96), "anodic_efficiency"),
        (lambda: copper_build_up_kg_s(1.0, 1, 0.99, -0.96), "cathodic_efficiency"),
        (lambda: copper_build_up_kg_s(1.0, 1, 0.99, 0.96, -1.0), "chemical_kg_s"),
        (lambda: liberator_cells(-1.0, 1.0, 0.9), "copper_kg_s"),
        (lambda: liberator_cells(1.0, 0.0, 0.9), "liberator_a"),
        (lambda: liberator_cells(1.0, 1.0, 0.0), "current_efficiency"),
        (lambda: low_copper_with_arsenic(-1.0, 1.0), "copper_g_l"),
        (lambda: low_copper_with_arsenic(1.0, -1.0), "arsenic_g_l"),
    ],
)
def test_an_impossible_value_is_named(call, quantity):
    with pytest.raises(OutOfRange, match=quantity):
        call()
