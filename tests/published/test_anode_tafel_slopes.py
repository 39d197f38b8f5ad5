"""Tafel slopes of oxygen evolution on anodes of the trade.

Looked up in the abstract, J. Cent. South Univ. Technol. 4 (1997), doi 10.1007/s11771-997-0035-y:
about 100 mV per decade on pre-polarised lead and lead-calcium, about 140 on lead-silver and
lead-silver-calcium; tin made no difference. Looked up in the introduction of Carugati, Lodi and
Trasatti, Mater. Chem. 6 (1981) 255: close to 0.04 V on compact ruthenium oxide. From memory: 40 to
70 mV on iridium oxide coatings. The limits of 20 mV are those of a word, "about".
"""

import pytest

from server.science.electrode.parameters import (
    OXYGEN_ON_COATED_TITANIUM,
    OXYGEN_ON_LEAD_CALCIUM,
    OXYGEN_ON_LEAD_SILVER,
)
from server.science.electrode.tafel import transfer_from_slope


@pytest.mark.parametrize(
    ("anode", "slope_v"), [(OXYGEN_ON_LEAD_CALCIUM, 0.100), (OXYGEN_ON_LEAD_SILVER, 0.140)]
)
def test_lead_anodes_as_printed(anode, slope_v):
    assert (anode.slope_v, anode.low_v, anode.high_v) == pytest.approx(
        (slope_v, slope_v - 0.020, slope_v + 0.020)
    )


def test_a_ruthenium_oxide_lies_at_the_lower_end_of_coated_anodes():
    assert OXYGEN_ON_COATED_TITANIUM.low_v <= 0.04 < OXYGEN_ON_COATED_TITANIUM.slope_v


def test_coated_anodes_as_remembered():
    assert (OXYGEN_ON_COATED_TITANIUM.low_v, OXYGEN_ON_COATED_TITANIUM.high_v) == (0.040, 0.070)


def test_forty_millivolts_are_three_halves_of_a_coefficient():
    # By hand: 0.0591593 / 0.040 = 1.479.
    assert transfer_from_slope(0.040, 298.15) == pytest.approx(1.479, abs=0.0005)
