"""S. Khouraibchia and M. Moats, Minerals & Metallurgical Processing 27 (2010), regression of CE.

Status: the coefficients are from memory and could not be checked against the paper; so is the
line of Das and Gopala Krishna, Int. J. Miner. Process. 46 (1996) 91. The values at two baths are
the arithmetic of the recalled polynomial, written out; they say that the code is the polynomial,
not that the polynomial is the paper's.
"""

import pytest

from server.science.losses.regressions import (
    DAS_GOPALA_KRISHNA,
    KHOURAIBCHIA_MOATS,
    REGRESSIONS,
    regressed_efficiency,
)


@pytest.mark.parametrize(("iron", "percent"), [(2.0, 93.434), (6.0, 83.092)])
def test_efficiency_with_forty_grams_of_copper_at_300_a_m2(iron, percent):
    by_hand = (
        88.19
        - 4.91 * iron
        + 0.52 * 40
        + 1.81e-3 * 300
        - 6.83e-3 * 40**2
        + 0.028 * iron * 40
        + 4.015e-3 * iron * 300
    )

    found = 100 * regressed_efficiency(
        KHOURAIBCHIA_MOATS, ferric_g_l=iron, copper_g_l=40.0, current_density_a_m2=300.0
    )

    assert found == pytest.approx(percent, abs=5e-4)
    assert found == pytest.approx(by_hand, rel=1e-12)


@pytest.mark.parametrize(("iron", "percent"), [(0.0, 97.0), (3.0, 90.0), (6.0, 83.0)])
def test_the_line_between_the_two_ends(iron, percent):
    found = regressed_efficiency(DAS_GOPALA_KRISHNA, ferric_g_l=iron)

    assert 100 * found == pytest.approx(percent, abs=0.5)


def test_all_say_that_they_were_recalled():
    assert {known.status for known in REGRESSIONS.values()} == {"from memory"}
