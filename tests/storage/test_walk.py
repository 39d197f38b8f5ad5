import pytest

from server.storage.plant import SectionTerms
from server.storage.walk import read_walk_order, walking_order


def test_nothing_said_means_by_number():
    assert read_walk_order("", 4, 2) == (1, 2, 3, 4)


def test_a_snake_turns_at_the_end_of_each_row():
    assert read_walk_order("snake", 7, 3) == (1, 2, 3, 6, 5, 4, 7)


def test_a_list_may_run_backwards():
    assert read_walk_order("1-3; 6-4", 6, 2) == (1, 2, 3, 6, 5, 4)


@pytest.mark.parametrize(
    ("text", "fault"), [("1-7", "beyond"), ("0-3", "beyond"), ("1;1", "twice"), ("odd", "not a")]
)
def test_an_order_that_cannot_be_walked_is_refused(text, fault):
    with pytest.raises(ValueError, match=fault):
        read_walk_order(text, 6, 2)


def test_cells_that_a_list_leaves_out_come_last():
    assert walking_order(SectionTerms(walk_order="5-4", cells=5, rows=1)) == (5, 4, 1, 2, 3)
