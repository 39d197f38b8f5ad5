"""Hydrogen on metals: exchange current densities of the Bockris and Trasatti compilations.

From memory: log10 of A/cm2 on platinum -3, nickel -5 to -6, iron -6, copper -7, zinc -10 to -11,
lead -12 to -13, with about 0.12 V per decade; zinc in acid sulfate needs 60 to 120 mV at 400 to 600
A/m2. The sums are by hand, and the order is what plants see: zinc is won from acid though hydrogen
is nobler, on copper, nickel or iron hydrogen would go first.
"""

import pytest

from server.science.constants import ZINC
from server.science.equilibrium.competing import first_to_go, in_order
from server.science.equilibrium.potential import metal_potential_v

SLOPE_V = 0.12
# log10 of 500 A/m2 = 0.05 A/cm2 is -1.30103.
LOG_CURRENT = -1.30103
LOG_EXCHANGE = {"platinum": -3.0, "nickel": -5.5, "iron": -6.0, "copper": -7.0}
ZINC_NEEDS_V = 0.09


@pytest.mark.parametrize("log_exchange", [-10.0, -10.5, -11.0])
def test_zinc_goes_before_hydrogen_on_zinc(log_exchange):
    hydrogen_v = SLOPE_V * (LOG_CURRENT - log_exchange)
    couples = {"hydrogen": 0.0, "zinc": float(metal_potential_v(ZINC, 0.04))}

    by_thermodynamics = in_order(couples, "cathode")
    by_kinetics = in_order(couples, "cathode", {"hydrogen": hydrogen_v, "zinc": ZINC_NEEDS_V})

    assert by_thermodynamics[0].name == "hydrogen"
    assert by_kinetics[0].name == "zinc"
    # By hand: zinc starts at -0.7618 - 1.39794 x 0.029580 - 0.09 = -0.8932 V.
    assert by_kinetics[0].starts_v == pytest.approx(-0.8932, abs=5e-5)


@pytest.mark.parametrize("material", LOG_EXCHANGE)
def test_hydrogen_goes_before_zinc_on_nobler_metals(material):
    hydrogen_v = SLOPE_V * (LOG_CURRENT - LOG_EXCHANGE[material])

    first = first_to_go(
        {"hydrogen": 0.0, "zinc": -0.8032},
        "cathode",
        {"hydrogen": hydrogen_v, "zinc": ZINC_NEEDS_V},
    )

    assert first == "hydrogen"
