"""The plant that is measured is as large as it says, and in the sheets that a plant has."""

import pytest

from server.intake.cells import parse_cells
from tests.bench.measure import quantile
from tests.bench.plant import DAY_S, Plant

END_S = 1_709_596_800


@pytest.fixture
def plant():
    """Two sections of twenty cells for ten days."""
    return Plant(sections=2, cells=20, days=10, end_s=END_S)


def test_every_cell_is_read_three_times_a_day(plant, tmp_path):
    plant.write(tmp_path)

    rows = (tmp_path / "volts.csv").read_text().splitlines()
    assert len(rows) - 1 == plant.readings == 2 * 20 * 10 * 3


def test_every_cell_is_pulled_once_a_week(plant, tmp_path):
    plant.write(tmp_path)

    pulled = [
        (fields[2], cell)
        for line in (tmp_path / "lots.csv").read_text().splitlines()[1:]
        for fields in [line.split(",")]
        for cell in parse_cells(fields[3])
    ]
    assert len(pulled) == len(set(pulled))
    assert plant.start_s == END_S - 10 * DAY_S


@pytest.mark.parametrize(("share", "value"), [(0.5, 50), (0.95, 95), (0.99, 99), (1.0, 100)])
def test_a_quantile_is_one_of_the_values(share, value):
    assert quantile(range(1, 101), share) == value
