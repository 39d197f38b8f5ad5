"""The clients of the tests see what a program on the network would."""

import gzip
from contextlib import asynccontextmanager

import httpx
import pytest
from fastapi import FastAPI, Request, Response


@pytest.fixture
def app():
    """A small application that notes when it starts and stops."""

    @asynccontextmanager
    async def life(app):
        app.state.seen = ["started"]
        yield
        app.state.seen.append("stopped")

    app = FastAPI(lifespan=life)

    @app.post("/echo")
    def echo(request: Request, words: dict[str, str]):
        return words | {"kept": request.cookies.get("kept", "")}

    @app.get("/packed")
    def packed():
        return Response(gzip.compress(b"cells"), headers={"content-encoding": "gzip"})

    @app.get("/broken")
    def broken():
        raise LookupError("no such cell")

    return app


def test_a_request_is_answered_in_this_process(app, client_for):
    client = client_for(app, cookies={"kept": "yes"})

    assert client.post("/echo", json={"cell": "7"}).json() == {"cell": "7", "kept": "yes"}


def test_a_compressed_answer_is_read_once(app, client_for):
    assert client_for(app).get("/packed").text == "cells"


def test_an_error_that_nobody_answers_is_raised_in_the_test(app, client_for):
    client = client_for(app)

    with pytest.raises(LookupError, match="no such cell"):
        client.get("/broken")


def test_the_application_is_started_and_stopped(app, client_for):
    client = client_for(app)

    assert app.state.seen == ["started"]
    client.close()
    assert app.state.seen == ["started", "stopped"]


def test_a_start_that_fails_is_told(client_for):
    @asynccontextmanager
    async def life(app):
        raise ValueError("wrong setting")
        yield

    with pytest.raises(RuntimeError, match="wrong setting"):
        client_for(FastAPI(lifespan=life))


def test_a_served_application_answers_on_a_port(app, serve):
    server = serve(app)

    assert httpx.get(server.url + "/packed").text == "cells"


def test_no_test_reaches_beyond_this_machine():
    with pytest.raises(httpx.ConnectError, match=r"tried to reach 192\.0\.2\.1"):
        httpx.get("http://192.0.2.1/", trust_env=False)
