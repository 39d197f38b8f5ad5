"""Abstracts on anodes that take less than lead, and what they save of a cell's voltage.

Looked up: J. Appl. Electrochem. 27 (1997) 579, titanium coated with iridium and cobalt or
tantalum oxides: 370 to 420 mV less than lead in electrolytes of the trade, about 450 mV in 2 M
acid. Morimitsu, Yamaguchi, Oshiumi and Zhang (2011), "Energy-efficient electrowinning process
with smart anode comprising nano-oxide catalyst": a new coating 0.5 V below lead and 0.15 V below
commercial ones. A Korean study: zinc at 500 A/m2 on a coated anode, 15 % less voltage. RSC
Advances 2018, c7ra11334j: lead with 2 % cobalt about 170 mV below lead-calcium-tin. The model's
coated anode was chosen from the second in copper cells; the others are checks.
"""

from dataclasses import replace

import pytest

from server.science.voltage.cells import COATED_TITANIUM_ANODE, LEAD_CALCIUM_ANODE
from server.science.voltage.doubt import cell_terms_with_doubt
from server.science.voltage.models import with_stated
from server.science.voltage.terms import cell_model, cell_terms

COPPER, ZINC = cell_model("copper electrowinning"), cell_model("zinc electrowinning")
COPPER_AT = (300.0, 318.15, 40.0, 180.0, 0.040)
ZINC_AT = (500.0, 311.15, 60.0, 170.0, 0.035)
LEAD, COATED = LEAD_CALCIUM_ANODE, COATED_TITANIUM_ANODE


def saved_v(amps_m2):
    """What the coated anode takes less than lead, with its standard uncertainty."""
    volts = LEAD.overpotential_v(amps_m2, 318.15) - COATED.overpotential_v(amps_m2, 318.15)
    doubts = (anode.point.overpotential_v.standard_uncertainty for anode in (LEAD, COATED))
    return float(volts), sum(doubt**2 for doubt in doubts) ** 0.5


def test_commercial_coatings_are_0_35_v_below_lead():
    assert saved_v(300.0)[0] == pytest.approx(0.5 - 0.15)


@pytest.mark.parametrize("volts", [0.370, 0.420, 0.450])
def test_coatings_of_1997_within_the_doubt(volts):
    saved, doubt = saved_v(300.0)

    assert saved == pytest.approx(volts, abs=1.2 * doubt)


def test_a_zinc_cell_with_a_coated_anode():
    lead = cell_terms_with_doubt(ZINC, *ZINC_AT)
    coated = cell_terms_with_doubt(replace(ZINC, anode=COATED), *ZINC_AT)

    share = 1.0 - coated.terms.total_v / lead.terms.total_v
    doubt = lead.standard_uncertainties.anode_v + coated.standard_uncertainties.anode_v
    assert share == pytest.approx(0.15, abs=float(doubt / lead.terms.total_v))


def test_lead_with_cobalt_takes_170_mv_less_of_a_copper_cell():
    before = LEAD.point.overpotential_v
    cobalt = replace(before, value=before.value - 0.170, status="looked up", source="RSC Advances")
    model = with_stated(COPPER, "anode.point.overpotential_v", cobalt)

    saved = cell_terms(COPPER, *COPPER_AT).total_v - cell_terms(model, *COPPER_AT).total_v

    assert saved == pytest.approx(0.170, abs=1e-9)
    # On a line of 100 mV per decade that is an exchange current 10^1.7 times as large.
    ratio = model.anode.exchange_a_m2(318.15) / COPPER.anode.exchange_a_m2(318.15)
    assert ratio == pytest.approx(50.1, abs=0.05)
