"""A cell voltage as the sum of its terms, with our own numbers.

Status: computed in a library of reference values made apart from this program, the exchange
current chosen there: reversible 0.935 V, anode by Tafel with 0.100 V per decade and 1.0e-4 A/m2,
cathode 0.060 V, 40 mm of 60 S/m, contacts 0.060 V, at 300 A/m2. The split of the sum and the sum
with gas are by hand. That the terms are these, and add up, is said in the introduction of an open
article of 2021 on zinc (looked up) and in a university's course sheet (looked up).
"""

import numpy as np
import pytest

from server.science.electrode.tafel import tafel_overpotential_v
from server.science.electrolyte.gas import bruggeman_s_m
from server.science.voltage.drops import contact_drop_v, electrolyte_drop_v
from server.science.voltage.terms import VoltageTerms


def terms(gas_share=0.0):
    """The terms of the example."""
    return VoltageTerms(
        reversible_v=np.asarray(0.935),
        anode_v=tafel_overpotential_v(300.0, 1.0e-4, 0.100),
        cathode_v=np.asarray(0.060),
        electrolyte_v=electrolyte_drop_v(300.0, 0.040, bruggeman_s_m(60.0, gas_share)),
        contacts_v=contact_drop_v(300.0, 0.060 / 300.0),
    )


def test_the_electrolyte():
    assert terms().electrolyte_v == pytest.approx(0.2, rel=1e-9)


def test_the_anode_by_hand():
    # log10(300 / 1e-4) = 2.477121 + 4 = 6.477121 decades of 0.1 V.
    assert terms().anode_v == pytest.approx(0.6477121, abs=1e-6)


def test_the_whole():
    assert terms().total_v == pytest.approx(1.90271, abs=0.000005)


def test_the_whole_with_gas_by_hand():
    # 0.2 / 0.95^1.5 = 0.215996 instead of 0.2.
    assert terms(gas_share=0.05).total_v == pytest.approx(1.90271 + 0.015996, abs=0.00001)


def test_the_meter_finds_what_is_left():
    assert terms().against_meter(2.000).rest_v == pytest.approx(0.09729, abs=0.000005)
