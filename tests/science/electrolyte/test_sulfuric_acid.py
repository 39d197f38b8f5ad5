import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.electrolyte.sulfuric_acid import acid_conductivity_s_m
from server.science.errors import OutOfRange


@given(acid=st.floats(50.0, 250.0), kelvin=st.floats(291.15, 333.15))
def test_a_tankhouse_acid_conducts_better_when_stronger_or_warmer(acid, kelvin):
    found = acid_conductivity_s_m(acid, kelvin)

    assert acid_conductivity_s_m(acid + 10.0, kelvin) > found
    assert acid_conductivity_s_m(acid, kelvin + 5.0) > found


def test_it_conducts_best_near_a_third_of_acid():
    acid_g_l = np.linspace(50.0, 520.0, 471)

    # 30 % of acid at a density of 1.22 kg/L is 366 g/L.
    assert acid_g_l[np.argmax(acid_conductivity_s_m(acid_g_l))] == pytest.approx(366, abs=30)


def test_water_does_not_conduct():
    assert acid_conductivity_s_m(0.0) == 0.0


def test_missing_numbers_stay_missing_and_spare_their_neighbours():
    found = acid_conductivity_s_m([180.0, math.nan, 180.0], [318.15, 318.15, math.nan])

    assert np.isnan(found).tolist() == [False, True, True]


def test_impossible_numbers_are_named():
    with pytest.raises(OutOfRange, match="acid_g_l"):
        acid_conductivity_s_m(-1.0)
    with pytest.raises(OutOfRange, match="temperature_k"):
        acid_conductivity_s_m(180.0, 0.0)
