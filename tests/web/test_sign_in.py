import pytest
from starlette.requests import Request
from starlette.responses import Response

from server.web.sign_in import (
    SignedIn,
    SignInLimit,
    cookie_text,
    drop_cookie,
    is_secure,
    safe_next,
    session_of,
    set_cookie,
    signed_in,
)

KEY = "a key of at least thirty-two letters"
NOW_MS = 1_772_521_920_000
HOUR_MS = 3_600_000


@pytest.fixture
def session():
    return signed_in(person_id=7, epoch=2, now_ms=NOW_MS)


def test_a_session_comes_back_out_of_its_cookie(session):
    text = cookie_text(session, KEY)

    assert session_of(text, KEY, NOW_MS + HOUR_MS, 12 * HOUR_MS) == session


def test_a_session_ends_to_the_millisecond(session):
    text = cookie_text(session, KEY)

    assert session_of(text, KEY, NOW_MS + 12 * HOUR_MS - 1, 12 * HOUR_MS)
    assert session_of(text, KEY, NOW_MS + 12 * HOUR_MS, 12 * HOUR_MS) is None


def test_a_session_from_the_future_is_not_believed(session):
    assert session_of(cookie_text(session, KEY), KEY, NOW_MS - HOUR_MS, 12 * HOUR_MS) is None


def with_another_signature(text: str) -> str:
    """The text with the first character of its signature exchanged.

    The last one would not do: some of its bits are padding, and mean nothing.
    """
    said, _, signature = text.rpartition(".")
    return f"{said}.{'B' if signature[0] == 'A' else 'A'}{signature[1:]}"


@pytest.mark.parametrize("change", [with_another_signature, lambda t: "x" + t, lambda t: t[:20]])
def test_a_cookie_that_was_changed_is_nobody_s(session, change):
    assert session_of(change(cookie_text(session, KEY)), KEY, NOW_MS, HOUR_MS) is None


def test_a_cookie_signed_with_another_key_is_nobody_s(session):
    text = cookie_text(session, "another key of thirty-two letters")

    assert session_of(text, KEY, NOW_MS, HOUR_MS) is None


@pytest.mark.parametrize("text", [None, "", "nonsense"])
def test_no_cookie_is_nobody_s(text):
    assert session_of(text, KEY, NOW_MS, HOUR_MS) is None


def test_a_signed_cookie_of_another_shape_is_nobody_s():
    text = cookie_text(SignedIn("seven", 1, NOW_MS, "nonce"), KEY)

    assert session_of(text, KEY, NOW_MS, HOUR_MS) is None


def test_each_sign_in_has_its_own_nonce():
    assert signed_in(7, 0, NOW_MS).nonce != signed_in(7, 0, NOW_MS).nonce


@pytest.mark.parametrize(
    ("setting", "scheme", "expected"),
    [
        ("auto", "https", True),
        ("auto", "http", False),
        ("always", "http", True),
        ("never", "https", False),
    ],
)
def test_cookies_go_over_tls_as_the_setting_says(setting, scheme, expected):
    scope = {
        "type": "http",
        "scheme": scheme,
        "path": "/",
        "server": ("here", 80),
        "headers": [],
        "query_string": b"",
    }

    assert is_secure(Request(scope), setting) is expected


def test_no_script_reads_the_cookie_and_no_other_site_sends_it():
    response = Response()

    set_cookie(response, "name", "value", secure=True, lasts_s=60)

    laid = response.headers["set-cookie"].lower()
    for word in ("httponly", "samesite=lax", "secure", "path=/", "max-age=60"):
        assert word in laid


def test_a_dropped_cookie_is_over_at_once():
    response = Response()

    drop_cookie(response, "name", secure=False)

    assert "max-age=0" in response.headers["set-cookie"].lower()


@pytest.mark.parametrize(
    ("wanted", "expected"),
    [
        ("/lots?page=2", "/lots?page=2"),
        (None, "/"),
        ("", "/"),
        ("lots", "/"),
        ("https://elsewhere.example/", "/"),
        ("//elsewhere.example/", "/"),
        ("/\\elsewhere.example/", "/"),
        ("/\t/elsewhere.example", "/"),
        ("javascript:alert(1)", "/"),
    ],
)
def test_after_signing_in_one_stays_on_this_server(wanted, expected):
    assert safe_next(wanted) == expected


@pytest.fixture
def limit():
    """Five wrong passwords, the last one now."""
    limit = SignInLimit(tries=5)
    for _ in range(5):
        limit.was_wrong("Rojas", "10.0.0.7", NOW_MS)
    return limit


def test_a_few_slips_cost_nothing():
    limit = SignInLimit(tries=5)
    for _ in range(4):
        limit.was_wrong("rojas", "10.0.0.7", NOW_MS)

    assert limit.wait_ms("rojas", "10.0.0.7", NOW_MS) == 0


def test_after_them_a_pause_is_asked_that_runs_out(limit):
    assert limit.wait_ms("rojas", "10.0.0.7", NOW_MS) == 2_000
    assert limit.wait_ms("rojas", "10.0.0.7", NOW_MS + 1_500) == 500
    assert limit.wait_ms("rojas", "10.0.0.7", NOW_MS + 2_000) == 0


def test_the_pause_doubles_up_to_a_quarter_of_an_hour(limit):
    pauses = []
    for _ in range(12):
        limit.was_wrong("rojas", "10.0.0.7", NOW_MS)
        pauses.append(limit.wait_ms("rojas", "10.0.0.7", NOW_MS))

    assert pauses[:3] == [4_000, 8_000, 16_000]
    assert pauses[-1] == 15 * 60_000


def test_another_name_and_another_address_are_not_held_up(limit):
    assert limit.wait_ms("silva", "10.0.0.7", NOW_MS) == 0
    assert limit.wait_ms("rojas", "10.0.0.8", NOW_MS) == 0


def test_the_right_password_clears_the_name(limit):
    limit.was_right("ROJAS", "10.0.0.7")

    assert limit.wait_ms("rojas", "10.0.0.7", NOW_MS) == 0


def test_an_hour_clears_it_too(limit):
    later_ms = NOW_MS + HOUR_MS + 1

    assert limit.wait_ms("rojas", "10.0.0.7", later_ms) == 0
    limit.was_wrong("rojas", "10.0.0.7", later_ms)
    assert limit.wait_ms("rojas", "10.0.0.7", later_ms) == 0


def test_going_through_many_names_is_slow_as_well():
    limit = SignInLimit(tries=5)
    for number in range(50):
        limit.was_wrong(f"name {number}", "10.0.0.7", NOW_MS)

    assert limit.wait_ms("name 99", "10.0.0.7", NOW_MS) > 0


def test_what_is_kept_in_memory_has_an_end():
    limit = SignInLimit(tries=5)
    for number in range(6_000):
        limit.was_wrong(f"name {number}", f"10.0.{number // 256}.{number % 256}", NOW_MS)

    assert len(limit._wrong) == 10_000
