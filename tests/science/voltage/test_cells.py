"""Cells of the trade: they name what they are, and no exchange current claims to be published."""

import pytest

from server.science.errors import UnknownName
from server.science.processes import PROCESSES
from server.science.voltage.cells import CELL_MODELS, cell_model
from server.science.voltage.models import stated_values


@pytest.mark.parametrize(("name", "model"), CELL_MODELS.items(), ids=CELL_MODELS)
def test_a_model_belongs_to_a_process_of_the_same_name(name, model):
    assert model.process in PROCESSES
    assert name.split(",")[0] == model.process


@pytest.mark.parametrize("model", CELL_MODELS.values(), ids=CELL_MODELS)
def test_only_slopes_are_looked_up(model):
    looked_up = {name for name, stated in stated_values(model) if stated.status == "looked up"}

    assert looked_up <= {"anode.slope_v"}


@pytest.mark.parametrize(
    ("name", "slope_v", "status"),
    [
        ("copper electrowinning", 0.100, "looked up"),
        ("zinc electrowinning", 0.140, "looked up"),
        ("copper electrowinning, coated anodes", 0.055, "from memory"),
    ],
)
def test_anodes_have_the_slope_of_their_kind(name, slope_v, status):
    slope = cell_model(name).anode.slope_v

    assert (slope.value, slope.status) == (pytest.approx(slope_v), status)


def test_an_anode_that_dissolves_is_driven_the_other_way():
    model = cell_model("Copper  Electrorefining")

    assert model.anode.driven_transfer.value == model.cathode.reverse_transfer.value == 1.5
    assert model.anode.reverse_transfer.value == model.cathode.driven_transfer.value == 0.5


@pytest.mark.parametrize("name", ["silver electrorefining", "aluminium electrolysis", "other"])
def test_what_is_too_little_known_has_no_model(name):
    with pytest.raises(UnknownName, match="model of a cell"):
        cell_model(name)
