"""Zinc from zincate: slopes and coefficients of a two-electron metal, from two articles.

Looked up in the abstracts. Peng and Wang, J. Cent. South Univ. Technol. 13 (2006) 637: measured
Tafel slopes 0.1138 and 0.04118 V with apparent transfer coefficients 0.5193 and 1.4352, by theory
0.118 and 0.0394 V. Bockris, Nagy and Damjanovic, J. Electrochem. Soc. 119 (1972), doi
10.1149/1.2404188: nominal slopes of 40 mV anodic and 120 mV cathodic. The temperature, 25 degC, and
the coefficients of the theory, 0.5 and 1.5, are ours; the same law holds for copper.
"""

import pytest

from server.science.electrode.tafel import tafel_slope_v, transfer_from_slope


@pytest.mark.parametrize(
    ("transfer", "slope_v", "half_digit"), [(0.5, 0.118, 0.0005), (1.5, 0.0394, 0.00005)]
)
def test_slopes_by_theory(transfer, slope_v, half_digit):
    assert tafel_slope_v(transfer, 298.15) == pytest.approx(slope_v, abs=half_digit)


@pytest.mark.parametrize(("slope_v", "transfer"), [(0.1138, 0.5193), (0.04118, 1.4352)])
def test_coefficients_from_the_measured_slopes(slope_v, transfer):
    # They divided 0.0591 by the slope; with 0.05916 V the coefficients are a thousandth higher.
    assert transfer_from_slope(slope_v, 298.15) == pytest.approx(transfer, rel=0.0011)


@pytest.mark.parametrize(("transfer", "nominal_v"), [(1.5, 0.040), (0.5, 0.120)])
def test_nominal_slopes(transfer, nominal_v):
    # Nominal is round: the law has 39.4 and 118.3 mV, which the two printed figures are not.
    assert tafel_slope_v(transfer, 298.15) == pytest.approx(nominal_v, rel=0.02)
