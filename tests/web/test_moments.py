"""Moments in an address: with an offset, in the tankhouse's time, or a day."""

import pytest

from server.storage.plant import house
from server.web.moments import moment_of, span_of
from server.web.refusals import Refused
from tests.factories import make_house


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


HOUR_MS = 3_600_000
MARCH_MS = 1_772_323_200_000
"""2026-03-01T00:00Z."""


@pytest.fixture
def warsaw(session):
    make_house(session, time_zone="Europe/Warsaw")
    return house(session)


@pytest.mark.parametrize(
    ("text", "hours"),
    [
        ("2026-03-01T00:00:00Z", 0),
        ("2026-03-01T03:00:00+03:00", 0),
        ("2026-03-01T03:00:00 03:00", 0),
        ("2026-03-01T02:00", 1),
        ("2026-03-01", -1),
        (" 2026-03-01 ", -1),
    ],
)
def test_a_moment_is_read(warsaw, text, hours):
    assert moment_of(text, warsaw, "query.at") == MARCH_MS + hours * HOUR_MS


@pytest.mark.parametrize(
    ("text", "word"),
    [
        ("2026-03-29T02:30", "does not exist"),
        ("2026-10-25T02:30", "came twice"),
        ("yesterday", "not a time"),
        ("2026-02-30T10:00", "calendar"),
    ],
)
def test_a_local_time_that_cannot_be_is_refused_and_told(warsaw, text, word):
    with pytest.raises(Refused) as refused:
        moment_of(text, warsaw, "query.from")

    (fault,) = refused.value.faults
    assert fault["where"] == "query.from"
    assert fault["found"] == text
    assert word in fault["what"]


def test_a_moment_long_before_any_record_is_as_good_as_the_first(warsaw):
    assert moment_of("1970-01-01T00:00Z", warsaw, "query.from") == 631_152_000_000


def test_a_moment_to_come_may_be_asked_for(warsaw):
    assert moment_of("2126-03-01T00:00Z", warsaw, "query.to") > MARCH_MS


@pytest.mark.parametrize(
    ("from_text", "to_text", "word"),
    [
        ("2026-03-02", "2026-03-01", "ends before"),
        ("2026-03-01", "2026-03-01", "ends before"),
        ("2026-03-01", "2226-03-01", "century"),
    ],
)
def test_a_stretch_of_time_has_a_sensible_length(warsaw, from_text, to_text, word):
    with pytest.raises(Refused, match=word):
        span_of(from_text, to_text, warsaw)
