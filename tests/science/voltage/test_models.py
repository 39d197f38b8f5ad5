"""Models of cells: every doubted value is found by its name, and can be replaced."""

import pytest

from server.science.errors import UnknownName
from server.science.voltage.cells import CELL_MODELS, cell_model
from server.science.voltage.models import stated_values, with_stated
from server.science.voltage.overpotentials import StatedValue

OWN = StatedValue(0.2e-3, 0.02e-3, "plant", "measured")


def test_the_values_of_a_model_come_with_their_way():
    names = [name for name, _ in stated_values(cell_model("copper electrorefining"))]

    assert names == [
        "anode.point.overpotential_v",
        "anode.point.per_kelvin",
        "anode.driven_transfer",
        "anode.reverse_transfer",
        "cathode.point.overpotential_v",
        "cathode.point.per_kelvin",
        "cathode.driven_transfer",
        "cathode.reverse_transfer",
        "contact_ohm_m2",
        "separator_ohm_m2",
        "gas_share",
        "reversible_shift_v",
    ]


@pytest.mark.parametrize("name", ["contact_ohm_m2", "anode.point.overpotential_v"])
def test_a_value_is_replaced_and_the_model_stays(name):
    before = cell_model("zinc electrowinning")

    after = with_stated(before, name, OWN)

    assert dict(stated_values(after))[name] is OWN
    assert dict(stated_values(before))[name] is not OWN
    changed = [
        key for key, value in stated_values(after) if value is not dict(stated_values(before))[key]
    ]
    assert changed == [name]


def test_an_unknown_value_is_refused_with_the_near_ones():
    with pytest.raises(UnknownName, match="contact_ohm_m2"):
        with_stated(cell_model("zinc electrowinning"), "contact_ohm", OWN)


@pytest.mark.parametrize("model", CELL_MODELS.values(), ids=CELL_MODELS)
def test_every_value_says_where_it_comes_from(model):
    for name, stated in stated_values(model):
        assert stated.source, name
        assert stated.standard_uncertainty >= 0.0, name
        assert stated.status != "plant", name
