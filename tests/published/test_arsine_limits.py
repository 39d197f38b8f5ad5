"""NIOSH, immediately dangerous concentrations: arsine (CAS 7784-42-1), May 1994.

Looked up: the page's figures: OSHA 0.05 ppm as a mean, NIOSH 0.002 mg/m3 as a ceiling of 15
minutes, 6 ppm as the first figure for danger to life. Looked up elsewhere: the revised 3 ppm, in a
public data file. From memory: ACGIH's 0.005 ppm. Copper of 2 to 10 g/L, at which liberators are
said to take out arsenic best: a technology supplier's note, looked up.
"""

import pytest

from server.science.refining.copper_balance import (
    ARSINE_LIMITS,
    LOW_COPPER_G_L,
    low_copper_with_arsenic,
)


@pytest.mark.parametrize(
    ("what", "value", "unit", "status"),
    [
        ("OSHA", 0.05, "ppm", "looked up"),
        ("ceiling", 0.002, "mg/m3", "looked up"),
        ("as first set", 6.0, "ppm", "looked up"),
        ("revised", 3.0, "ppm", "looked up"),
        ("ACGIH", 0.005, "ppm", "from memory"),
    ],
)
def test_limits_are_those_published(what, value, unit, status):
    found = [known for known in ARSINE_LIMITS if what in known.what]

    assert [(known.value, known.unit, known.status) for known in found] == [(value, unit, status)]


def test_the_warning_begins_where_the_note_ends():
    assert LOW_COPPER_G_L == 2.0
    assert list(low_copper_with_arsenic([1.99, 2.0, 10.0], 3.0)) == [True, False, False]
