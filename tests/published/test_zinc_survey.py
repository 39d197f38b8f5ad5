"""The zinc plant survey of 2008 (M. Moats, E. Guerra, J. A. Gonzalez), as cited in 2021.

Looked up: the article's introduction: 3.3 to 3.5 V, 89 to 92 %, 24 to 72 h. A second article,
Minerals Engineering 16 (2003) 559, gives 3250 to 3400 kWh/t for the industry. The energies at the
corners are computed, in a library of reference values made apart from this program. The ranges are
bands for plausibility, not a test of arithmetic.
"""

import pytest

from server.science.constants import ZINC
from server.science.faraday import specific_energy_from_volts_j_kg
from server.science.processes import PROCESSES
from server.science.units import kwh_t_from_j_kg


@pytest.mark.parametrize(("volts", "share", "kwh_t"), [(3.3, 0.92, 2940.83), (3.5, 0.89, 3224.2)])
def test_energy_at_the_corners(volts, share, kwh_t):
    found = kwh_t_from_j_kg(specific_energy_from_volts_j_kg(volts, share, ZINC))

    assert found == pytest.approx(kwh_t, abs=0.05)


def test_what_is_usual_here_is_the_survey():
    zinc = PROCESSES["zinc electrowinning"]

    assert zinc.typical_volts == (3.3, 3.5)
    assert zinc.efficiency_band == (0.89, 0.92)
    assert 1.0 <= zinc.crop_days <= 3.0
