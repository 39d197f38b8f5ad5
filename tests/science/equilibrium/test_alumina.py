"""What alumina asks for in the bath."""

import numpy as np
import pytest

from server.science.equilibrium.alumina import ALUMINA_RANGE, alumina_volts
from server.science.errors import OutOfRange, UnknownName


def test_a_carbon_anode_pays_a_volt():
    assert alumina_volts(1233.15, "O2") - alumina_volts(1233.15) == pytest.approx(1.03, abs=0.01)


def test_what_burning_carbon_pays_is_its_gibbs_energy():
    # By hand, C + O2 = CO2 over four electrons at 1200 K: 396.06 kJ/mol over 4 F.
    paid = alumina_volts(1200.0, "O2") - alumina_volts(1200.0, "CO2")

    assert paid == pytest.approx(396.06 / (4 * 96.48533212), abs=0.0002)


def test_a_hotter_bath_asks_for_less():
    volts = alumina_volts([1213.15, 1233.15, 1253.15])

    np.testing.assert_allclose(np.diff(volts), -0.0114, atol=0.0002)


def test_missing_stays_missing():
    assert np.isnan(alumina_volts([np.nan, 1233.15])).tolist() == [True, False]


def test_where_the_lines_were_fitted():
    assert ALUMINA_RANGE.holds(1233.15)
    assert not ALUMINA_RANGE.holds(298.15)


def test_an_unknown_gas_is_refused():
    with pytest.raises(UnknownName, match="anode_gas"):
        alumina_volts(1233.15, "F2")


def test_a_temperature_of_nothing_is_refused():
    with pytest.raises(OutOfRange, match="temperature_k"):
        alumina_volts(0.0)
