"""ICNIRP guidelines on static magnetic fields, Health Physics 96 (2009) 504-514; EU directive.

Looked up: 2 T and 8 T at work and 400 mT for the public, in a standards database's summary; "in
general, the operation of these devices is not adversely affected by static magnetic fields below
0.5 mT", as quoted from the guidelines on a public mailing list. From memory: the action levels of
Directive 2013/35/EU, 0.5 mT for implants and 3 mT for the attraction of iron.
"""

import pytest

from server.science.losses.bar_field import FIELD_LIMITS


def limit(who: str, source: str) -> float:
    found = [known for known in FIELD_LIMITS if who in known.who and source in known.source]
    assert len(found) == 1
    return found[0].flux_density_t


@pytest.mark.parametrize(
    ("who", "source", "tesla"),
    [
        ("head and trunk", "ICNIRP", 2.0),
        ("limbs", "ICNIRP", 8.0),
        ("public", "ICNIRP", 0.4),
        ("implants", "ICNIRP", 0.5e-3),
        pytest.param("implants", "2013/35/EU", 0.5e-3, id="implants, EU, from memory"),
        pytest.param("iron objects", "2013/35/EU", 3e-3, id="iron, EU, from memory"),
    ],
)
def test_limits_are_those_published(who, source, tesla):
    assert limit(who, source) == tesla


def test_what_was_recalled_says_so():
    for known in FIELD_LIMITS:
        assert known.status == ("looked up" if "ICNIRP" in known.source else "from memory")
