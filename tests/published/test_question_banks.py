"""Exercises on Tafel's law and Butler-Volmer with printed answers, from public collections.

Looked up. A public bank of questions: tin, 0.2 V at 0.5 A/cm2 with 0.05 V per decade gives an
exchange current density of 5e-5 A/cm2. The own test of a public library of electrochemical
formulas: 1e-6 A/cm2, coefficients 0.5, 25 degC and 0.2 V give 4.8997e-5 A/cm2. An engineering book
on fuel cells (excerpt): Tafel's form holds where the reverse reaction is less than 1 %; that this
is from 118 mV on for one electron is Bard and Faulkner, from memory.
"""

import pytest

from server.science.electrode.rates import back_reaction_share, butler_volmer_a_m2
from server.science.electrode.tafel import tafel_exchange_a_m2


def test_tin_from_one_point():
    assert tafel_exchange_a_m2(0.5e4, 0.2, 0.05) == pytest.approx(5e-5 * 1e4)


def test_the_library_s_own_test():
    assert butler_volmer_a_m2(0.2, 1e-2, 0.5, 0.5, 298.15) == pytest.approx(0.48997, abs=5e-6)


def test_tafel_holds_to_one_per_cent_from_118_millivolts_on():
    assert back_reaction_share(0.118, 0.5, 0.5, 298.15) == pytest.approx(0.01, abs=0.0005)
