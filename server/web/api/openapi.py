"""The OpenAPI document: what FastAPI knows of the routes, with problems, records and roles."""

from collections.abc import Iterator
from typing import Any

from fastapi import FastAPI
from fastapi.dependencies.models import Dependant
from fastapi.openapi.utils import get_openapi
from fastapi.routing import RouteContext, iter_route_contexts

from server import __version__
from server.storage.people import ROLES
from server.web.api.resource import PREFIX, PROBLEM_SCHEMA
from server.web.api.schemas import Answer, Problem
from server.web.api.sheet_schemas import components
from server.web.dependencies import Requires

DOCUMENT_PATH = f"{PREFIX}/openapi.json"

_DESCRIPTION = """\
The books of an electrolytic tankhouse: ampere-hours, metal, energy, and the cells that need a
visit.

**Who asks.** A program sends `Authorization: Bearer TOKEN` (made with `ampledger token new`); a
signed-in browser sends its cookie, and with whatever writes also the header `x-csrf-token`. Each
call says which role it takes: reader, operator, planner or superintendent, each with all that the
one before may do.

**Times** are ISO 8601. One without an offset is the tankhouse's local time; one that the change of
the clocks makes ambiguous or impossible is refused, and the answer says so. Answers are in UTC.

**Units** stand in the names: `_ka`, `_kah`, `_kwh_t`, `_pct`, `_mv`. `u_` is a standard uncertainty
in the same unit.

**Records** that cannot be read are held, not lost: the answer says so record by record, and
`GET /held` lists them until someone mends or drops them.

**Errors** are problem details (RFC 9457), `application/problem+json`.
"""

_TAGS = [
    {"name": "records", "description": "What is read, weighed and logged."},
    {"name": "accounts", "description": "Charge, metal, efficiency and energy of a period."},
    {"name": "flags", "description": "What the watch says of the cells."},
    {"name": "plant", "description": "The tankhouse, its sections and cells."},
    {"name": "calculator", "description": "The sums of a day, worked out with their doubt."},
    {"name": "held and suspect", "description": "What could not be taken, or is not believed."},
    {"name": "corrections", "description": "What was recorded wrongly."},
    {"name": "server", "description": "Health, metrics and this document."},
]


def document(app: FastAPI) -> dict[str, Any]:
    """The OpenAPI 3.1 document of the API, made once."""
    if app.openapi_schema is None:
        routes = [
            context
            for context in iter_route_contexts(app.routes)
            if (context.path or "").startswith(f"{PREFIX}/")
        ]
        app.openapi_schema = get_openapi(
            title="Ampledger",
            version=__version__,
            openapi_version="3.1.0",
            summary="The books of a tankhouse",
            description=_DESCRIPTION,
            routes=routes,
            tags=_TAGS,
            license_info={"name": "Apache-2.0", "identifier": "Apache-2.0"},
        )
        _complete(app.openapi_schema, routes)
    return app.openapi_schema


def roles_of(dependant: Dependant) -> Iterator[str]:
    """Every role that a route asks for, its own dependencies' too."""
    if isinstance(dependant.call, Requires):
        yield dependant.call.role
    for inner in dependant.dependencies:
        yield from roles_of(inner)


def role_of(context: RouteContext) -> str | None:
    """The highest role that a route asks for; None where it is open to all."""
    dependant = getattr(context, "dependant", None)
    roles = list(roles_of(dependant)) if isinstance(dependant, Dependant) else []
    return max(roles, key=ROLES.index, default=None)


def _below(model: type[Answer]) -> Iterator[type[Answer]]:
    for inner in model.__subclasses__():
        yield inner
        yield from _below(inner)


def _complete(found: dict[str, Any], routes: list[RouteContext]) -> None:
    schemas = found.setdefault("components", {}).setdefault("schemas", {})
    problem = Problem.model_json_schema(ref_template="#/components/schemas/{model}")
    schemas |= problem.pop("$defs", {}) | {PROBLEM_SCHEMA: problem} | components()
    schemas.pop("HTTPValidationError", None)
    schemas.pop("ValidationError", None)
    for model in _below(Answer):
        # FastAPI leaves out what is null, in examples too.
        extra = model.model_config.get("json_schema_extra")
        if isinstance(extra, dict) and model.__name__ in schemas:
            schemas[model.__name__] |= extra
    for context in routes:
        role = role_of(context)
        for method in context.methods or ():
            operation = found["paths"].get(context.path_format, {}).get(method.lower())
            if operation is not None and role is not None:
                operation["x-role"] = role
                told = f"Takes the role **{role}**."
                operation["description"] = f"{operation.get('description', '')}\n\n{told}".strip()
