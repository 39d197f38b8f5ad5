"""Exchange current densities of hydrogen on metals, against single reports.

Looked up: platinum about 0.5 mA/cm2, Electrochim. Acta 218 (2016) 345 (abstract), and 1e-2 A/cm2,
notes on corrosion of KFUPM, page 2.5.4; zinc 1e-10 A/cm2, Callister's example of zinc in acid. From
memory, compilations of Bockris and Trasatti, log10 of A/cm2: platinum -3, nickel -5 to -6, iron
-6, copper -7, zinc -10 to -11, lead -12 to -13; copper by Mattsson and Bockris 1959, 10 to 100 A/m2
with 0.5 and 1.5; zinc needs 60 to 120 mV at 400 to 600 A/m2.
"""

import pytest

from server.science.electrode.parameters import COPPER_IN_SULFATE, HYDROGEN_ON, ZINC_IN_SULFATE
from server.science.electrode.rates import butler_volmer_overpotential_v
from server.science.electrode.tafel import tafel_overpotential_v, tafel_slope_v


@pytest.mark.parametrize(
    ("symbol", "a_cm2"),
    [
        pytest.param("Pt", 0.5e-3, id="platinum, article"),
        pytest.param("Pt", 1e-2, id="platinum, notes"),
        pytest.param("Zn", 1e-10, id="zinc, textbook"),
    ],
)
def test_reports_lie_within_our_limits(symbol, a_cm2):
    known = HYDROGEN_ON[symbol]

    # The ends are reports themselves; a rounding error must not shut them out.
    assert known.low_a_m2 * (1 - 1e-9) <= 1e4 * a_cm2 <= known.high_a_m2 * (1 + 1e-9)


@pytest.mark.parametrize(
    ("symbol", "low", "high"),
    [("Pt", -3, -3), ("Ni", -6, -5), ("Fe", -6, -6), ("Cu", -7, -7), ("Zn", -11, -10),
     ("Pb", -13, -12)],
)  # fmt: skip
def test_the_compilations_as_remembered(symbol, low, high):
    known = HYDROGEN_ON[symbol]

    assert known.low_a_m2 <= 10.0 ** (low + 4) * (1 + 1e-9)
    assert known.high_a_m2 >= 10.0 ** (high + 4) * (1 - 1e-9)


def test_copper_as_remembered():
    known = COPPER_IN_SULFATE

    assert (known.low_a_m2, known.high_a_m2) == (10.0, 100.0)
    assert (known.cathodic_transfer, known.anodic_transfer) == (0.5, 1.5)


@pytest.mark.parametrize("current_a_m2", [400.0, 500.0, 600.0])
def test_zinc_needs_what_is_remembered(current_a_m2):
    known = ZINC_IN_SULFATE

    volts = butler_volmer_overpotential_v(
        -current_a_m2, known.exchange_a_m2, known.anodic_transfer, known.cathodic_transfer, 311.15
    )

    assert 0.060 <= -volts <= 0.120


def test_hydrogen_on_zinc_and_on_copper_at_500_by_hand():
    # 10^2.69897 A/m2 lies 9.19897 decades above 10^-6.5 and 5.69897 above 10^-3; times 0.118319 V.
    slope_v = tafel_slope_v(0.5, 298.15)

    on_zinc = tafel_overpotential_v(500.0, HYDROGEN_ON["Zn"].exchange_a_m2, slope_v)
    on_copper = tafel_overpotential_v(500.0, HYDROGEN_ON["Cu"].exchange_a_m2, slope_v)

    assert on_zinc == pytest.approx(1.08841, abs=5e-5)
    assert on_copper == pytest.approx(0.67430, abs=5e-5)
