"""Where the voltage of an aluminium cell goes, as far as public pages tell.

Looked up: cells at 4.0 to 4.5 V (notes quoting a thesis) and 3.9 to 4.3 V (a maker's page);
anode's reaction overvoltage 0.6 to 0.9 V (aluminum-production.com); drop in the cathode lining
0.3 to 0.5 V (a mining glossary); decomposition voltage by extrapolation of current-voltage curves
1.50 to 1.85 V on 75 kA cells (Thonstad, Solbu and Larsen, J. Appl. Electrochem. 1 (1971) 261,
abstract). The program has no model of the electrodes here: the checks are that its parts leave
room for the printed ones.
"""

import pytest

from server.science.processes import process
from server.science.voltage.terms import terms_without_model

CELL = process("aluminium electrolysis")
# 960 degC and a usual 0.9 A/cm2 (from memory).
TERMS = terms_without_model(CELL, 9000.0, 1233.15)


def test_the_extrapolated_voltage_is_the_reversible_one_with_most_of_the_overvoltage():
    # A straight line drawn on to no current leaves out of a Tafel line its slope over ln 10, about
    # 0.1 V (from memory). With the lower end of the printed overvoltage that falls in the range.
    assert 1.50 <= TERMS.total_v + 0.6 - 0.1 <= 1.85
    assert TERMS.total_v < 1.50 < 1.85 < TERMS.total_v + 0.9


@pytest.mark.parametrize("volts", [3.9, 4.0, 4.3, 4.5])
def test_what_is_left_holds_anode_lining_and_bath(volts):
    rest_v = TERMS.against_meter(volts).rest_v

    # With the middles of the printed bands 1.5 V and more are left for bath, anodes and bars.
    assert rest_v - 0.75 - 0.40 > 1.5
    assert rest_v + TERMS.total_v == pytest.approx(volts)


def test_a_stated_bath_takes_its_part_of_the_rest():
    # 45 mm of 220 S/m at 9000 A/m2, by hand 1.841 V: usual figures, from memory.
    terms = terms_without_model(CELL, 9000.0, 1233.15, gap_m=0.045, conductivity_s_m=220.0)

    assert terms.electrolyte_v == pytest.approx(405.0 / 220.0)
    assert 0.9 < terms.against_meter(4.2).rest_v < 1.4
