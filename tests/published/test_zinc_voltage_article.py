"""An open article of 2021 on zinc cells (ProQuest 2602139832), its introduction.

Looked up: baths of 30 to 40 degC, 150 to 200 g/L acid and 50 to 70 g/L zinc; 3.3 to 3.5 V at 400
to 600 A/m2; the anode's reaction takes more than 1.9 V of them; the rest are the cathode, the
electrolyte and the circuit. The article cites the zinc plant survey of 2008. The model's anode
was chosen from another band, which is from memory, so the anode's figure is a check.
"""

import numpy as np
import pytest

from server.science.constants import ZINC
from server.science.equilibrium.potential import metal_potential_v
from server.science.voltage.doubt import cell_terms_with_doubt
from server.science.voltage.terms import cell_model, cell_terms

MODEL = cell_model("zinc electrowinning")
# The middle of every range of the article, and a gap of the model.
MIDDLE = (500.0, 308.15, 60.0, 175.0, MODEL.usual.gap_m)


def test_the_middle_of_all_ranges_lies_in_the_band():
    assert 3.3 <= cell_terms(MODEL, *MIDDLE).total_v <= 3.5


@pytest.mark.parametrize("amps_m2", [400.0, 600.0])
def test_the_ends_of_the_current_lie_there_within_their_doubt(amps_m2):
    found = cell_terms_with_doubt(MODEL, amps_m2, *MIDDLE[1:])
    doubt = found.total_standard_uncertainty_v

    assert 3.3 - doubt <= found.terms.total_v <= 3.5 + doubt


def test_every_bath_of_the_ranges_lies_there_within_its_doubt():
    kelvin, zinc, acid = np.meshgrid([303.15, 313.15], [50.0, 70.0], [150.0, 200.0])
    found = cell_terms_with_doubt(MODEL, 500.0, kelvin, zinc, acid, MIDDLE[-1])
    doubt = found.total_standard_uncertainty_v

    assert (found.terms.total_v > 3.3 - doubt).all()
    assert (found.terms.total_v < 3.5 + doubt).all()


def test_the_anode_takes_more_than_it_is_said_to():
    # Potential of the anode: the reversible voltage above zinc's potential, and its overpotential.
    terms = cell_terms(MODEL, *MIDDLE)
    oxygen_v = terms.reversible_v + metal_potential_v(
        ZINC, 0.0440, 308.15, standard_at_temperature=True
    )

    assert oxygen_v + terms.anode_v > 1.9
    assert oxygen_v == pytest.approx(1.21, abs=0.02)


def test_the_parts_are_the_four_of_the_article():
    terms = cell_terms(MODEL, *MIDDLE)

    electrodes_v = terms.anode_v + terms.cathode_v
    assert terms.reversible_v + electrodes_v + terms.electrolyte_v + terms.contacts_v == (
        pytest.approx(terms.total_v)
    )
