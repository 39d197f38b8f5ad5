"""Current lost to ferric iron in copper winning: the mass-transfer limit and what articles found.

The limit: computed, in a library of reference values made apart from this program; diffusivity
and film are assumed there. Looked up: Chem. Eng. Sci. 199 (2019) 1-19, abstract: from 2.5 to 3.5
g/L of ferric iron, 35 to 40 g/L of copper, 150 to 220 A/m2, the efficiency falls by up to 7 %, and
rises with copper and current density. From memory: 2 to 3 points for each g/L; 97 % to 83 % from 0
to 6 g/L at 215 A/m2 (Das and Gopala Krishna 1996). Bands for plausibility, never pass or fail.
"""

import pytest

from server.science.losses.ferric import (
    TYPICAL_TRANSFER_M_S,
    ferric_current_a_m2,
    ferric_loss_share,
    ferric_rule_share,
    ferric_transfer_m_s,
)
from server.science.losses.regressions import (
    DAS_GOPALA_KRISHNA,
    KHOURAIBCHIA_MOATS,
    regressed_efficiency,
)


def test_current_at_the_limit():
    assert ferric_current_a_m2(2.0, 6.0e-10, 0.15e-3) == pytest.approx(13.822, abs=5e-4)
    # 96485.33212 x 6e-10 x (2000 / 55.845) / 0.00015.
    by_hand = 96485.33212 * 6e-10 * (2000 / 55.845) / 0.00015
    assert ferric_current_a_m2(2.0, 6.0e-10, 0.15e-3) == pytest.approx(by_hand, rel=1e-9)


def test_its_share_of_the_current():
    found = ferric_loss_share(2.0, 300.0, ferric_transfer_m_s(6.0e-10, 0.15e-3))

    assert 100 * found == pytest.approx(4.6073, abs=5e-5)


def test_one_more_gram_costs_less_than_the_article_found_at_most():
    for known in (KHOURAIBCHIA_MOATS, DAS_GOPALA_KRISHNA):
        bath = {"copper_g_l": 40.0, "current_density_a_m2": 220.0}
        given = {name: bath[name] for name in known.quantities if name in bath}
        before, after = (
            regressed_efficiency(known, ferric_g_l=iron, **given) for iron in (2.5, 3.5)
        )

        assert 0.0 < before - after < 0.07


def test_efficiency_rises_with_copper_and_current_as_in_the_article():
    def found(copper, current):
        return regressed_efficiency(
            KHOURAIBCHIA_MOATS, ferric_g_l=2.5, copper_g_l=copper, current_density_a_m2=current
        )

    assert found(40.0, 150.0) > found(35.0, 150.0)
    assert found(35.0, 220.0) > found(35.0, 150.0)


def test_the_articles_current_densities_lie_outside_the_regression():
    left = KHOURAIBCHIA_MOATS.outside(
        ferric_g_l=[2.5, 3.5], copper_g_l=[35.0, 40.0], current_density_a_m2=[150.0, 220.0]
    )

    assert [known.quantity for known in left] == ["current_density_a_m2"]


def test_the_rule_from_memory_holds_the_article_from_memory():
    low, high = ferric_rule_share(6.0)

    assert low <= 0.97 - 0.83 <= high


def test_the_typical_coefficient_is_that_of_the_rule():
    # 2 points at 200 A/m2 are 4 A/m2 for each g/L, 3 points at 300 are 9; over F / 55.845 g/mol.
    per_g_l = 96485.33212 * 1000 / 55.845
    low, high = 4 / per_g_l, 9 / per_g_l

    assert TYPICAL_TRANSFER_M_S.value == pytest.approx((low + high) / 2, rel=1e-9)
    assert TYPICAL_TRANSFER_M_S.standard_uncertainty == pytest.approx(
        (high - low) / 2 / 3**0.5, rel=1e-9
    )
