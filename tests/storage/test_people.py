import pytest

from server.storage.errors import Conflict, NotFound
from server.storage.people import (
    LastSuperintendent,
    add_person,
    add_token,
    change_role,
    disable,
    enable,
    keep_password,
    people,
    person_named,
    revoke_token,
    token_with_hash,
    tokens,
)
from tests.factories import NOW_MS, make_person, make_token


def test_a_new_person_is_found_whatever_the_case(session):
    added = add_person(session, "Ana", "operator", "hash", NOW_MS, "test")

    assert person_named(session, "ANA") is added


def test_a_name_is_given_once_whatever_its_case(session):
    make_person(session, name="Ana")

    with pytest.raises(Conflict, match="ana already"):
        add_person(session, "ana", "operator", "hash", NOW_MS, "test")


def test_those_who_cannot_sign_in_stand_last(session):
    make_person(session, name="ana", is_active=0)
    make_person(session, name="Zoe")
    make_person(session, name="ben")

    assert [person.name for person in people(session)] == ["ben", "Zoe", "ana"]


def test_a_new_password_ends_every_session(session):
    person = make_person(session, session_epoch=4)

    keep_password(person, "another hash")

    assert (person.password_hash, person.session_epoch) == ("another hash", 5)


def test_someone_disabled_is_signed_out_and_may_come_back(session):
    make_person(session)
    person = make_person(session, role="operator")

    disable(session, person)
    ended = person.session_epoch
    enable(person)

    assert (ended, person.is_active) == (1, 1)


@pytest.mark.parametrize(
    "end", [disable, lambda session, person: change_role(session, person, "planner")]
)
def test_the_last_superintendent_stays(session, end):
    make_person(session, is_active=0)
    last = make_person(session, name="Ana")

    with pytest.raises(LastSuperintendent, match="Ana is the last superintendent"):
        end(session, last)


def test_one_of_two_superintendents_may_go(session):
    make_person(session)
    other = make_person(session)

    change_role(session, other, "reader")

    assert other.role == "reader"


def test_anybody_else_may_go_whoever_is_left(session):
    operator = make_person(session, role="operator")

    disable(session, operator)

    assert not operator.is_active


def test_a_revoked_token_is_good_for_nothing(session):
    token = make_token(session, "hash of it")

    revoke_token(session, token.id, NOW_MS)
    session.flush()

    assert token_with_hash(session, "hash of it") is None


def test_a_token_is_revoked_once(session):
    token = make_token(session, "hash of it")
    revoke_token(session, token.id, NOW_MS)

    revoke_token(session, token.id, NOW_MS + 1)

    assert token.revoked_ms == NOW_MS


def test_a_token_that_is_not_there_cannot_be_revoked(session):
    with pytest.raises(NotFound):
        revoke_token(session, 12, NOW_MS)


def test_tokens_have_a_name_each_and_good_ones_stand_first(session):
    make_token(session, "a", name="balance", revoked_ms=NOW_MS)
    add_token(session, "historian", "operator", "b", NOW_MS, "test")

    with pytest.raises(Conflict):
        add_token(session, "Balance", "operator", "c", NOW_MS, "test")
    assert [token.name for token in tokens(session)] == ["historian", "balance"]
