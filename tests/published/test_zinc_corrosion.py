"""Princeton University, MAE 324, notes on corrosion: zinc dissolving in acid, page 24.

Looked up: hydrogen on zinc, exchange current density 1e-10 A/cm2 at 0 V; zinc, 1e-7 A/cm2 at
-0.763 V; both meet at -0.486 V and 1.19e-4 A/cm2. The Tafel slopes, 0.08 and 0.09 V per decade,
are from memory of the textbook example behind it (Callister); they give the page's figures back.
"""

import math

import pytest

from server.science.equilibrium.competing import in_order, starts_v

CURRENT_A_CM2 = 1.19e-4
HYDROGEN_V = 0.08 * math.log10(CURRENT_A_CM2 / 1e-10)
ZINC_V = 0.09 * math.log10(CURRENT_A_CM2 / 1e-7)


def test_hydrogen_starts_at_the_potential_of_the_page():
    assert starts_v(0.0, "cathode", HYDROGEN_V) == pytest.approx(-0.486, abs=0.0005)


def test_zinc_dissolves_at_the_same_potential():
    assert starts_v(-0.763, "anode", ZINC_V) == pytest.approx(-0.486, abs=0.0005)


def test_at_the_current_of_a_tankhouse_the_two_start_close_together():
    # The page's kinetics at 500 A/m2, 0.05 A/cm2: hydrogen needs 0.08 x 8.69897 = 0.69592 V and
    # starts 67 mV before zinc, whose own overpotential is left out: thermodynamics alone had
    # 763 mV between them.
    couples = {"hydrogen": 0.0, "zinc": -0.763}

    order = in_order(couples, "cathode", {"hydrogen": 0.08 * math.log10(0.05 / 1e-10)})

    assert [known.name for known in order] == ["hydrogen", "zinc"]
    assert order[0].starts_v - order[1].starts_v == pytest.approx(0.06708, abs=5e-6)
