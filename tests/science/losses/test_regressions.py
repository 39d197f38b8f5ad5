import numpy as np
import pytest

from server.science.errors import OutOfRange, UnknownName
from server.science.losses.regressions import (
    DAS_GOPALA_KRISHNA,
    KHOURAIBCHIA_MOATS,
    REGRESSIONS,
    Regression,
    Term,
    regressed_efficiency,
    regression,
)
from server.science.ranges import Range

BATH = {"ferric_g_l": 2.0, "copper_g_l": 40.0, "current_density_a_m2": 300.0}


def test_a_polynomial_is_worked_out_term_by_term():
    made_up = Regression(
        "made up",
        "Cu",
        (Term(90.0), Term(2.0, (("a", 1), ("b", 2)))),
        (Range("a", 0.0, 1.0),),
        "from memory",
        "nobody",
    )

    assert regressed_efficiency(made_up, a=0.5, b=3.0) == pytest.approx(0.99)
    assert made_up.quantities == ("a", "b")
    assert made_up.fixed == ()


def test_more_iron_costs_efficiency_within_the_ranges():
    iron = np.linspace(0.0, 6.0, 25)

    for known in (KHOURAIBCHIA_MOATS, DAS_GOPALA_KRISHNA):
        given = {name: BATH[name] for name in known.quantities if name != "ferric_g_l"}
        found = regressed_efficiency(known, ferric_g_l=iron, **given)

        assert (np.diff(found) < 0.0).all()
        assert ((found > 0.8) & (found < 1.0)).all()


def test_inside_its_ranges_a_regression_says_nothing():
    assert KHOURAIBCHIA_MOATS.outside(**BATH) == ()


def test_outside_it_names_the_range_and_is_worked_out_all_the_same():
    far = {**BATH, "ferric_g_l": 9.0, "current_density_a_m2": 450.0}

    left = [str(known) for known in KHOURAIBCHIA_MOATS.outside(**far)]

    assert left == ["ferric_g_l 0 to 6", "current_density_a_m2 250 to 350"]
    assert np.isfinite(regressed_efficiency(KHOURAIBCHIA_MOATS, **far))


def test_a_quantity_held_fixed_is_judged_but_changes_nothing():
    near = regressed_efficiency(DAS_GOPALA_KRISHNA, ferric_g_l=2.0)
    far = regressed_efficiency(DAS_GOPALA_KRISHNA, ferric_g_l=2.0, current_density_a_m2=400.0)

    assert near == far
    assert DAS_GOPALA_KRISHNA.fixed == ("current_density_a_m2",)
    assert len(DAS_GOPALA_KRISHNA.outside(ferric_g_l=2.0, current_density_a_m2=400.0)) == 1


def test_every_regression_has_a_range_for_each_of_its_quantities():
    for known in REGRESSIONS.values():
        ranged = {held.quantity for held in known.ranges}

        assert set(known.quantities) <= ranged
        assert known.status in ("looked up", "from memory")
        assert known.source


def test_a_regression_is_found_by_its_name():
    assert regression("  Das and   Gopala Krishna ") is DAS_GOPALA_KRISHNA
    with pytest.raises(UnknownName, match="Khouraibchia"):
        regression("Kouraibchia and Moats")


def test_a_missing_quantity_and_an_unknown_one_are_named():
    with pytest.raises(UnknownName, match="copper_g_l"):
        regressed_efficiency(KHOURAIBCHIA_MOATS, ferric_g_l=2.0, current_density_a_m2=300.0)
    with pytest.raises(UnknownName, match="iron_g_l"):
        regressed_efficiency(DAS_GOPALA_KRISHNA, ferric_g_l=2.0, iron_g_l=2.0)


def test_a_negative_concentration_is_named():
    with pytest.raises(OutOfRange, match="ferric_g_l"):
        regressed_efficiency(KHOURAIBCHIA_MOATS, **{**BATH, "ferric_g_l": -1.0})


def test_a_missing_number_stays_missing_and_its_neighbours_do_not():
    found = regressed_efficiency(KHOURAIBCHIA_MOATS, **{**BATH, "ferric_g_l": [2.0, np.nan]})

    assert list(np.isnan(found)) == [False, True]
