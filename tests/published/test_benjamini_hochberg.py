"""Y. Benjamini and Y. Hochberg, J. R. Stat. Soc. B 57 (1995) 289: fifteen p-values, page 295.

Looked up in many public test suites that quote the article: the p-values; four stand at 0.05, with
0.0095 the largest of them, nine at 0.10; three by Bonferroni's rule. The adjusted values of the
first six are printed in one of them (R, p.adjust: 0.0015, 0.003, 0.0095, 0.035625, 0.0603,
0.06385714); the next are by hand. A general library of statistics (statsmodels) has its say.
"""

import numpy as np
import pytest
from statsmodels.stats.multitest import multipletests

from server.science.statistics.many_tests import false_discoveries_held, no_false_one_held

P_VALUES = [
    *(0.0001, 0.0004, 0.0019, 0.0095, 0.0201, 0.0278, 0.0298, 0.0344),
    *(0.0459, 0.3240, 0.4262, 0.5719, 0.6528, 0.7590, 1.0000),
]


@pytest.mark.parametrize(("rate", "stand", "cut_off"), [(0.05, 4, 0.0095), (0.10, 9, 0.0459)])
def test_how_many_stand(rate, stand, cut_off):
    result = false_discoveries_held(P_VALUES, rate)

    assert result.found.tolist() == [True] * stand + [False] * (15 - stand)
    assert result.cut_off == cut_off


def test_adjusted_values():
    adjusted = false_discoveries_held(P_VALUES).adjusted

    assert adjusted[:6] == pytest.approx(
        [0.0015, 0.003, 0.0095, 0.035625, 0.0603, 0.06385714], abs=5e-9
    )
    # By hand: 0.0298 x 15 / 7, 0.0344 x 15 / 8 and 0.0459 x 15 / 9.
    assert adjusted[6:9] == pytest.approx([0.0638571, 0.0645, 0.0765], abs=1e-6)
    # 0.0278 x 15 / 6 is 0.0695, more than the next: the sixth takes the value of the seventh.
    assert adjusted[5] == adjusted[6]


def test_fewer_stand_when_none_may_be_false():
    # By hand: 0.05 / 15 = 0.0033 leaves three; 0.05 / 12 = 0.0042 refuses the fourth.
    assert no_false_one_held(P_VALUES).found.sum() == 3
    assert (np.array(P_VALUES) <= 0.05 / 15).sum() == 3


@pytest.mark.parametrize(
    ("ours", "theirs"),
    [
        (false_discoveries_held, "fdr_bh"),
        (lambda p, rate: false_discoveries_held(p, rate, any_dependence=True), "fdr_by"),
        (no_false_one_held, "holm"),
    ],
)
def test_a_general_library_finds_the_same(ours, theirs):
    rng = np.random.default_rng(seed=1995)
    for p_values in (np.array(P_VALUES), rng.random(200) ** 3):
        result = ours(p_values, 0.05)
        found, adjusted, *_ = multipletests(p_values, alpha=0.05, method=theirs)
        assert result.found.tolist() == found.tolist()
        np.testing.assert_allclose(result.adjusted, adjusted, rtol=1e-12)
