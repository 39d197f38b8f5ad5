from dataclasses import fields

import numpy as np
import pytest

from server.watch.model.state import KINDS, State, fresh_state, refitted, unpacked
from tests.watch.model.sections import facts, made_up, pull_every_week


@pytest.fixture(scope="module")
def seasoned():
    """A state that has seen a month."""
    section = made_up(rounds=90)
    pull_every_week(section)
    return section.replayed().state


def same(one, other):
    return all(
        np.array_equal(getattr(one, part.name), getattr(other, part.name), equal_nan=True)
        for part in fields(State)
    )


def test_a_state_comes_back_from_its_bytes_as_it_was(seasoned):
    assert same(unpacked(seasoned.packed()), seasoned)
    assert unpacked(seasoned.packed()).packed() == seasoned.packed()


def test_a_fresh_state_comes_back_too():
    fresh = fresh_state(facts(5))

    assert same(unpacked(fresh.packed()), fresh)


def test_a_state_that_was_unpacked_can_be_changed(seasoned):
    content = seasoned.packed()

    unpacked(content).level_v[:] = 7.0

    assert seasoned.packed() == content


def test_bytes_of_another_version_are_refused(seasoned):
    content = np.frombuffer(seasoned.packed(), "<f8").copy()
    content[0] += 1

    with pytest.raises(ValueError, match="version"):
        unpacked(content.tobytes())


def test_a_copy_changes_apart(seasoned):
    before = seasoned.packed()

    copy = seasoned.copy()
    for part in fields(State):
        getattr(copy, part.name)[...] = 3.0

    assert seasoned.packed() == before


def test_nothing_is_believed_of_cells_that_nobody_has_read():
    fresh = fresh_state(facts(5))

    assert fresh.weight.sum(axis=1) == pytest.approx(np.ones(5))
    assert (fresh.weight[:, 0] > 0.9).all()
    assert fresh.level_var[0] == pytest.approx(0.024**2)
    assert fresh.raised_ms.shape == (5, len(KINDS))


def test_the_same_cells_keep_their_state(seasoned):
    assert refitted(seasoned, facts(40), is_same_make=True) is seasoned


def test_fewer_cells_keep_what_is_known_of_them(seasoned):
    fewer = refitted(seasoned, facts(30), is_same_make=True)

    assert len(fewer.known) == 30
    assert (fewer.level_v == seasoned.level_v[:30]).all()
    assert np.array_equal(fewer.shared, seasoned.shared, equal_nan=True)


def test_cells_that_are_new_are_unknown_among_known_ones(seasoned):
    more = refitted(seasoned, facts(42), is_same_make=True)

    assert (more.noise_v[:40] == seasoned.noise_v).all()
    assert more.known[40:].tolist() == [0.0, 0.0]
    assert (more.weight[40:, 0] > 0.9).all()


def test_cells_of_another_make_keep_their_flags_and_nothing_else(seasoned):
    flagged = seasoned.copy()
    flagged.raised_ms[3, 0] = 5.0

    other = refitted(flagged, facts(40), is_same_make=False)

    assert (other.raised_ms == flagged.raised_ms).all()
    assert (other.hung_ms == flagged.hung_ms).all()
    assert other.known.tolist() == [0.0] * 40
    assert np.array_equal(other.shared, fresh_state(facts(40)).shared, equal_nan=True)
