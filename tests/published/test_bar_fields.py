"""Magnetic fields near bars of a tankhouse, by Biot and Savart's law for a long straight bar.

Status: computed with mu0 = 4 pi 1e-7, in a library of reference values made apart from this
program. The magnetic constant itself is looked up in scipy.constants (CODATA).
"""

import pytest
import scipy.constants

from server.science.losses.bar_field import (
    MAGNETIC_CONSTANT_N_A2,
    distance_for_field_m,
    flux_density_t,
)


def test_the_magnetic_constant():
    # CODATA 2018 and 2022 differ by 7 parts in 10^10, within their uncertainties.
    assert pytest.approx(scipy.constants.mu_0, rel=1e-9) == MAGNETIC_CONSTANT_N_A2


def test_beside_a_hanger_bar():
    assert 1000 * flux_density_t(600.0, 0.05) == pytest.approx(2.4, rel=1e-6)


def test_beside_a_main_bar():
    assert 1000 * flux_density_t(30e3, 0.5) == pytest.approx(12.0, rel=1e-6)


def test_where_a_main_bar_falls_to_half_a_millitesla():
    assert distance_for_field_m(30e3, 0.5e-3) == pytest.approx(12.0, rel=1e-6)
