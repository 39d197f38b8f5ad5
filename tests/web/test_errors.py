import anyio
import httpx
import pytest
from fastapi import FastAPI, HTTPException
from starlette.responses import Response

from server.science.errors import OutOfRange
from server.storage.errors import Conflict, NoPlant, NotFound
from server.web import errors
from server.web.csrf import ForeignForm
from server.web.headers import SECURITY_HEADERS
from tests.web.gallery import ROUTES

RAISED = {
    "not-found": (NotFound("section", "EW9", "known are EW1, ER1"), 404),
    "conflict": (Conflict("lot N-2041 is in the books with other values"), 409),
    "no-plant": (NoPlant(), 503),
    "out-of-range": (OutOfRange("stripped_kg", -1.0, "zero or more"), 422),
    "not-allowed": (errors.NotAllowed("operator", "superintendent"), 403),
    "foreign": (ForeignForm(), 403),
    "too-large": (errors.TooLarge(512), 413),
    "teapot": (HTTPException(418, "no tea here"), 418),
}


@pytest.fixture
def app() -> FastAPI:
    """Routes that fail, each in its own way, as pages and below the API."""
    app = FastAPI()
    errors.install(app)
    for route in ROUTES:
        app.add_api_route(f"/{route}", lambda: Response(), name=route)

    def failing(error: Exception):
        def route() -> None:
            raise error

        return route

    for name, (error, _status) in RAISED.items():
        app.add_api_route(f"/{name}", failing(error), methods=["GET", "POST"])
        app.add_api_route(f"/api/v1/{name}", failing(error))
    for place in ("/closed", "/api/v1/closed"):
        app.add_api_route(place, failing(errors.SignInNeeded()), methods=["GET", "POST"])
    for place in ("/broken", "/api/v1/broken"):
        app.add_api_route(place, failing(ZeroDivisionError("a secret of the plant")))

    def typed(points: int) -> int:
        return points

    app.add_api_route("/typed", typed)
    app.add_api_route("/api/v1/typed", typed)
    return app


@pytest.fixture
def client(app, client_for) -> httpx.Client:
    return client_for(app)


@pytest.mark.parametrize("name", RAISED)
def test_programs_get_problem_details(client, name):
    found = client.get(f"/api/v1/{name}")

    assert found.headers["content-type"] == "application/problem+json"
    assert found.status_code == found.json()["status"] == RAISED[name][1]
    assert found.json()["type"] == "about:blank"
    assert found.json()["title"]
    assert found.json()["detail"]


@pytest.mark.parametrize("name", RAISED)
def test_people_get_a_calm_page(client, name):
    found = client.get(f"/{name}")

    assert found.status_code == RAISED[name][1]
    assert found.headers["content-type"].startswith("text/html")
    assert "<h1>" in found.text


def test_what_was_not_found_is_named(client):
    assert client.get("/api/v1/not-found").json()["detail"] == (
        "There is no section 'EW9'; known are EW1, ER1."
    )


def test_a_program_without_token_is_told_how(client):
    found = client.get("/api/v1/closed")

    assert found.status_code == 401
    assert found.headers["www-authenticate"] == "Bearer"


def test_a_person_is_sent_to_sign_in_and_back_again(client):
    found = client.get("/closed?from=2026-03-01&to=2026-03-03")

    assert found.status_code == 303
    assert found.headers["location"] == (
        "/sign_in?next=/closed%3Ffrom%3D2026-03-01%26to%3D2026-03-03"
    )


def test_a_form_sent_too_late_is_not_sent_again_after_signing_in(client):
    assert client.post("/closed").headers["location"] == "/sign_in"


@pytest.mark.parametrize("place", ["/typed?points=many", "/api/v1/typed?points=many"])
def test_what_cannot_be_read_is_named(client, place):
    found = client.get(place)

    assert found.status_code == 422
    assert "query.points" in found.text


def test_a_page_that_is_not_there_says_so(client):
    found = client.get("/nowhere")

    assert found.status_code == 404
    assert "There is no such page" in found.text


def test_a_method_that_is_not_taken_says_which_are(client):
    found = client.post("/api/v1/typed")

    assert found.status_code == 405
    assert found.headers["allow"] == "GET"


@pytest.mark.parametrize("place", ["/broken", "/api/v1/broken"])
def test_the_unforeseen_tells_no_secret_and_keeps_the_headers(app, place):
    async def ask() -> httpx.Response:
        transport = httpx.ASGITransport(app=app, raise_app_exceptions=False)
        async with httpx.AsyncClient(transport=transport, base_url="http://here") as client:
            return await client.get(place)

    found = anyio.run(ask)

    assert found.status_code == 500
    assert "secret" not in found.text
    assert SECURITY_HEADERS.items() <= dict(found.headers).items()
