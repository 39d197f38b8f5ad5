import threading

import pytest

from server.web import security
from server.web.security import Passwords, fault_of_password


@pytest.fixture
def passwords():
    """The cheapest hashing there is."""
    return Passwords(memory_kib=8, rounds=1)


def test_the_right_password_holds_and_another_does_not(passwords):
    kept = passwords.hashed("three blue cathodes")

    assert passwords.holds("three blue cathodes", kept)
    assert not passwords.holds("three blue anodes", kept)


def test_argon2id_is_used_with_the_settings(passwords):
    assert passwords.hashed("three blue cathodes").startswith("$argon2id$v=19$m=8,t=1,p=1$")


def test_the_same_password_is_kept_differently_each_time(passwords):
    assert passwords.hashed("three blue cathodes") != passwords.hashed("three blue cathodes")


def test_letters_composed_another_way_are_the_same_password(passwords):
    kept = passwords.hashed("contrase\u00f1a larga")

    assert passwords.holds("contrasen\u0303a larga", kept)


def test_nobody_has_no_password(passwords):
    assert not passwords.holds("three blue cathodes", None)


def test_an_endless_password_is_refused_unhashed(passwords):
    assert not passwords.holds("x" * 100_000, passwords.hashed("three blue cathodes"))


def test_a_spoilt_hash_lets_nobody_in(passwords):
    assert not passwords.holds("three blue cathodes", "$argon2id$v=19$m=8,t=1,p=1$spoilt")


def test_a_hash_of_other_settings_is_to_be_made_anew(passwords):
    stronger = Passwords(memory_kib=16, rounds=2)

    assert stronger.wants_new_hash(passwords.hashed("three blue cathodes"))
    assert not passwords.wants_new_hash(passwords.hashed("three blue cathodes"))


def test_no_more_are_hashed_at_once_than_there_is_room_for(monkeypatch):
    passwords = Passwords(memory_kib=8, rounds=1, at_once=2)
    inside, most = 0, 0
    lock, meet = threading.Lock(), threading.Event()

    def slow(_password: str) -> str:
        nonlocal inside, most
        with lock:
            inside += 1
            most = max(most, inside)
        meet.wait(0.05)
        with lock:
            inside -= 1
        return "kept"

    monkeypatch.setattr(passwords._hash, "hash", slow)
    threads = [threading.Thread(target=passwords.hashed, args=("password",)) for _ in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()

    assert most == 2


@pytest.mark.parametrize(
    ("password", "fault"),
    [
        ("three blue cathodes", None),
        ("short", "at least 10"),
        ("a" * 300, "at most 256"),
        ("aaaabbbbcccc", "more than four different"),
        ("I am Rojas myself", "your name"),
    ],
)
def test_a_new_password_is_told_what_is_wrong_with_it(password, fault):
    found = fault_of_password(password, "rojas")

    assert found is None if fault is None else fault in str(found)


def test_random_passwords_pass_their_own_check_and_differ():
    first, second = security.new_password(), security.new_password()

    assert fault_of_password(first, "rojas") is None
    assert first != second


def test_tokens_are_told_by_their_mark_and_kept_as_a_hash():
    token = security.new_token()

    assert token.startswith("amp_")
    assert len(security.token_hash(token)) == 64
    assert security.token_hash(token) != security.token_hash(security.new_token())


def test_a_key_is_long_enough_for_the_settings():
    assert len(security.new_key()) >= 32
