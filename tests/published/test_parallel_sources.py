"""Lessons In Electric Circuits, vol. I, Millman's theorem: three branches in parallel.

Looked up: a stored copy of the chapter: 28 V behind 4 ohm, 2 ohm alone, 7 V behind 1 ohm give 8 V
across all. Branch currents follow by Ohm's law: 20 / 4, 8 / 2 and 1 / 1 A. A ladder with one short
is the same circuit; here the cell current is zero.
"""

import numpy as np
import pytest

from server.science.losses.ladder import ladder_cell

CIRCUIT = ladder_cell(0.0, [28.0, 7.0], [4.0, 1.0], [np.inf, 2.0])


def test_the_voltage_across_all_branches():
    assert CIRCUIT.cell_volts == pytest.approx(8.0, rel=1e-12)


def test_the_currents_of_the_branches():
    assert CIRCUIT.plating_a == pytest.approx([-5.0, 1.0])
    assert CIRCUIT.short_a == pytest.approx([0.0, 4.0])


def test_without_the_middle_branch():
    # By hand: (28 / 4 + 7 / 1) / (1 / 4 + 1 / 1) = 14 / 1.25 = 11.2 V.
    assert CIRCUIT.healthy_volts == pytest.approx(11.2, rel=1e-12)
