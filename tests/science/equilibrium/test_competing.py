"""Which reaction can go, and which goes first."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.science.equilibrium.competing import driving_v, first_to_go, in_order, starts_v
from server.science.errors import OutOfRange, UnknownName, WrongShape

CATHODE = {"silver": 0.7996, "copper": 0.3419, "hydrogen": 0.0, "nickel": -0.257, "zinc": -0.7618}


def names(contenders):
    """Names in their order."""
    return [known.name for known in contenders]


def test_at_a_cathode_the_noblest_goes_first():
    assert names(in_order(CATHODE, "cathode")) == list(CATHODE)


def test_at_an_anode_the_least_noble_goes_first():
    assert names(in_order(CATHODE, "anode")) == list(reversed(CATHODE))


def test_impurities_of_a_copper_anode_dissolve_with_it_or_stay():
    # An anode worked at 0.40 V: what lies below dissolves, silver stays in the slimes.
    goes = driving_v(0.40, list(CATHODE.values()), "anode") > 0

    assert dict(zip(CATHODE, goes.tolist(), strict=True)) == {
        "silver": False,
        "copper": True,
        "hydrogen": True,
        "nickel": True,
        "zinc": True,
    }


def test_the_overpotential_of_hydrogen_lets_zinc_go_first():
    couples = {"hydrogen": 0.0, "zinc": -0.7618}

    assert names(in_order(couples, "cathode"))[0] == "hydrogen"
    assert names(in_order(couples, "cathode", {"hydrogen": 1.1, "zinc": 0.1}))[0] == "zinc"


def test_the_overpotential_of_oxygen_lets_chlorine_go_first():
    couples = {"oxygen": 1.229, "chlorine": 1.358}

    assert names(in_order(couples, "anode"))[0] == "oxygen"
    assert names(in_order(couples, "anode", {"oxygen": 0.45, "chlorine": 0.05}))[0] == "chlorine"


def test_a_contender_says_where_it_starts():
    first = in_order({"zinc": -0.80}, "cathode", {"zinc": 0.09})[0]

    assert (first.equilibrium_v, first.overpotential_v) == (-0.80, 0.09)
    assert first.starts_v == pytest.approx(-0.89)


def test_equal_starts_keep_their_order():
    assert names(in_order({"b": 0.1, "a": 0.1}, "cathode")) == ["b", "a"]


@given(
    equilibrium=st.floats(-3, 3),
    needed=st.floats(0, 2),
    potential=st.floats(-5, 5),
    side=st.sampled_from(["cathode", "anode"]),
)
def test_needing_more_never_helps(equilibrium, needed, potential, side):
    without = driving_v(potential, equilibrium, side)

    assert driving_v(potential, equilibrium, side, needed) <= without


@given(
    volts=st.lists(st.floats(-3, 3), min_size=1, max_size=6, unique=True),
    side=st.sampled_from(["cathode", "anode"]),
)
def test_the_first_is_the_one_driven_hardest_at_any_potential(volts, side):
    couples = {f"couple {number}": volt for number, volt in enumerate(volts)}

    first = in_order(couples, side)[0]

    assert first.starts_v == (max(volts) if side == "cathode" else min(volts))
    assert str(first_to_go(couples, side)) == first.name


def test_a_reaction_at_its_start_is_not_driven():
    assert driving_v(-0.89, -0.80, "cathode", 0.09) == pytest.approx(0.0, abs=1e-15)


def test_potentials_in_an_array_meet_couples_on_another_axis():
    goes = driving_v(np.array([-1.0, 0.0]), np.array([[0.3419], [-0.7618]]), "cathode") > 0

    assert goes.tolist() == [[True, True], [True, False]]


def test_missing_stays_missing_and_leaves_neighbours_alone():
    assert np.isnan(driving_v([np.nan, 0.0], 0.3, "cathode")).tolist() == [True, False]
    first = first_to_go({"a": [0.1, np.nan], "b": 0.0}, "cathode")
    assert first.tolist() == ["a", ""]


def test_an_order_with_a_missing_potential_is_refused():
    with pytest.raises(WrongShape, match="potential of zinc"):
        in_order({"copper": 0.34, "zinc": float("nan")}, "cathode")


def test_no_reaction_has_no_first():
    assert in_order({}, "cathode") == ()
    with pytest.raises(WrongShape, match="no reaction"):
        first_to_go({}, "cathode")


@pytest.mark.parametrize("function", [in_order, first_to_go])
def test_an_overpotential_of_nobody_is_refused(function):
    with pytest.raises(UnknownName, match="hydrogen"):
        function({"zinc": -0.76}, "cathode", {"hydrogen": 1.0})


def test_a_side_is_one_of_two():
    with pytest.raises(UnknownName, match="side"):
        starts_v(0.0, "left")


def test_an_overpotential_is_a_size():
    with pytest.raises(OutOfRange, match="overpotential_v"):
        starts_v(0.0, "cathode", -0.1)
