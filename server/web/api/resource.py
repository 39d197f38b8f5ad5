"""What the routes of every resource share: their path, and the answers they give to wrong calls."""

from typing import Any

import orjson
from fastapi import APIRouter
from starlette.responses import Response

from server.web.errors import PROBLEM_JSON

PREFIX = "/api/v1"
PROBLEM_SCHEMA = "Problem"

_PROBLEMS = {
    400: "What was sent is not JSON or not a form, or holds a NUL character.",
    401: "Nobody is signed in, and no good token was sent.",
    403: "The role of whoever asks does not go so far.",
    404: "There is no such thing in the books.",
    409: "It contradicts what is in the books.",
    413: "More was sent than is taken at once.",
    422: "Something is missing or cannot be read; `errors` tells what, field by field.",
}
_COMMON = (400, 401, 403, 422)


def resource(tag: str) -> APIRouter:
    """A router for the routes of one resource."""
    return APIRouter(prefix=PREFIX, tags=[tag], responses=problems(*_COMMON))


def problems(*statuses: int) -> dict[int | str, dict[str, Any]]:
    """Which problem details a route may answer, for the OpenAPI document."""
    schema = {"$ref": f"#/components/schemas/{PROBLEM_SCHEMA}"}
    return {
        status: {"description": _PROBLEMS[status], "content": {PROBLEM_JSON: {"schema": schema}}}
        for status in statuses
    }


def as_json(content: Any, status: int = 200) -> Response:
    """An answer as JSON without going through the models: for long lists of numbers."""
    option = orjson.OPT_SERIALIZE_NUMPY | orjson.OPT_NON_STR_KEYS
    return Response(orjson.dumps(content, option=option), status, media_type="application/json")
