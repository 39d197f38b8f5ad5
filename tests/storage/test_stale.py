import pytest

from server.storage.stale import StaleStretch, mark, pending, settle
from tests.factories import make_section


def stretches(session) -> list[tuple[str, int, int]]:
    return [(s.kind, s.from_ms, s.to_ms) for s in pending(session)]


def test_nothing_is_pending_in_new_books(session):
    assert pending(session) == []


def test_a_marked_stretch_is_pending(session):
    section = make_section(session)

    mark(session, section.id, "charge", 100, 200)

    (only,) = pending(session)
    assert only == StaleStretch(only.id, section.id, "charge", 100, 200)


@pytest.mark.parametrize(
    ("from_ms", "to_ms", "expected"),
    [
        (200, 300, [("charge", 100, 300)]),
        (50, 100, [("charge", 50, 200)]),
        (120, 150, [("charge", 100, 200)]),
        (50, 300, [("charge", 50, 300)]),
        (201, 300, [("charge", 100, 200), ("charge", 201, 300)]),
    ],
)
def test_stretches_that_touch_become_one(session, from_ms, to_ms, expected):
    section = make_section(session)
    mark(session, section.id, "charge", 100, 200)

    mark(session, section.id, "charge", from_ms, to_ms)

    assert stretches(session) == expected


def test_near_stretches_become_one_where_that_is_wanted(session):
    section = make_section(session)
    mark(session, section.id, "charge", 100, 200)

    mark(session, section.id, "charge", 250, 300, join_ms=50)
    mark(session, section.id, "charge", 351, 400, join_ms=50)

    assert stretches(session) == [("charge", 100, 300), ("charge", 351, 400)]


def test_a_stretch_that_closes_a_gap_joins_both_sides(session):
    section = make_section(session)
    mark(session, section.id, "readings", 0, 10)
    mark(session, section.id, "readings", 20, 30)

    mark(session, section.id, "readings", 10, 20)

    assert stretches(session) == [("readings", 0, 30)]


def test_kinds_and_sections_are_kept_apart(session):
    one, other = make_section(session), make_section(session)

    mark(session, one.id, "charge", 0, 10)
    mark(session, one.id, "readings", 0, 10)
    mark(session, other.id, "charge", 0, 10)

    assert len(pending(session)) == 3


def test_what_is_settled_is_cut_out(session):
    section = make_section(session)
    mark(session, section.id, "charge", 0, 100)

    settle(session, section.id, "charge", 40, 60)

    assert stretches(session) == [("charge", 0, 40), ("charge", 60, 100)]


def test_a_stretch_without_a_length_is_refused(session):
    section = make_section(session)

    with pytest.raises(ValueError, match="length"):
        mark(session, section.id, "charge", 10, 10)
