import re

import httpx
import pytest
from starlette.applications import Starlette
from starlette.responses import PlainTextResponse, Response
from starlette.routing import Route

from server.web.headers import CONTENT_SECURITY_POLICY, SECURITY_HEADERS, HeadersMiddleware


@pytest.fixture
def client(client_for) -> httpx.Client:
    """A client of two answers: a plain one, and one that says itself how it is kept."""
    routes = [
        Route("/", lambda _request: PlainTextResponse("yes")),
        Route("/kept", lambda _request: Response(headers={"cache-control": "public"})),
    ]
    return client_for(HeadersMiddleware(Starlette(routes=routes)))


def test_every_answer_carries_them(client):
    found = client.get("/").headers

    assert {name: found.get(name) for name in SECURITY_HEADERS} == SECURITY_HEADERS


def test_pages_are_asked_for_anew(client):
    assert client.get("/").headers["cache-control"] == "no-cache, private"


def test_what_an_answer_says_itself_stays(client):
    assert client.get("/kept").headers["cache-control"] == "public"


def test_only_over_tls_is_tls_made_a_must(client):
    assert "strict-transport-security" not in client.get("/").headers
    assert "strict-transport-security" in client.get("https://127.0.0.1/").headers


def test_no_inline_script_or_style_and_no_frame_is_allowed():
    assert "unsafe" not in CONTENT_SECURITY_POLICY
    assert "frame-ancestors 'none'" in CONTENT_SECURITY_POLICY
    assert not re.search(r"https?:|\*", CONTENT_SECURITY_POLICY)
