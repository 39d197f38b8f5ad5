import base64

import pytest

from server.web import csrf

KEY = "a key of at least thirty-two letters"


def test_a_token_is_good_for_the_session_it_was_made_for():
    token = csrf.form_token("nonce", KEY)

    assert csrf.is_ours(token, "nonce", KEY)
    assert not csrf.is_ours(token, "another nonce", KEY)
    assert not csrf.is_ours(token, "nonce", "another key of thirty-two letters")


def test_no_two_answers_carry_the_same_letters():
    assert csrf.form_token("nonce", KEY) != csrf.form_token("nonce", KEY)


def test_the_proof_itself_never_travels():
    tokens = [base64.urlsafe_b64decode(csrf.form_token("nonce", KEY)) for _ in range(2)]

    proofs = {bytes(a ^ b for a, b in zip(t[:32], t[32:], strict=True)) for t in tokens}

    assert len(proofs) == 1
    assert not any(proof in token for proof in proofs for token in tokens)


@pytest.mark.parametrize("token", [None, "", "short", "not base64 !", "ä" * 44, "A" * 86 + "=="])
def test_anything_else_is_not_ours(token):
    assert not csrf.is_ours(token, "nonce", KEY)


def test_a_token_bound_to_nothing_is_good_for_nothing():
    assert not csrf.is_ours(csrf.form_token("", KEY), "", KEY)


@pytest.mark.parametrize(
    ("headers", "expected"),
    [
        ({}, False),
        ({"sec-fetch-site": "same-origin"}, False),
        ({"sec-fetch-site": "none"}, False),
        ({"sec-fetch-site": "cross-site"}, True),
        ({"sec-fetch-site": "same-site"}, True),
        ({"origin": "http://here:8000"}, False),
        ({"origin": "http://elsewhere"}, True),
        ({"origin": "null"}, True),
    ],
)
def test_the_browser_is_believed_about_the_sender(headers, expected):
    assert csrf.comes_from_elsewhere(headers, "here:8000") is expected


def test_a_foreign_form_is_refused():
    token = csrf.form_token("nonce", KEY)

    csrf.checked(token, "nonce", KEY, {}, "here")
    with pytest.raises(csrf.ForeignForm):
        csrf.checked(token, "nonce", KEY, {"sec-fetch-site": "cross-site"}, "here")
    with pytest.raises(csrf.ForeignForm):
        csrf.checked(None, "nonce", KEY, {}, "here")


def test_each_visit_is_another():
    assert csrf.new_visit() != csrf.new_visit()
