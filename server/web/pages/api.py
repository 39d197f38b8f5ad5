"""The page of the API: every call with its role, its parameters and an example, for programmers."""

import json
from dataclasses import dataclass
from typing import Any

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse

from server.web.api.openapi import DOCUMENT_PATH
from server.web.dependencies import Reader
from server.web.render import page

router = APIRouter(include_in_schema=False)

Document = dict[str, Any]


@dataclass(frozen=True)
class Parameter:
    """One parameter of a call."""

    name: str
    is_required: bool
    words: str


@dataclass(frozen=True)
class Call:
    """One call, as somebody who writes a program against it reads it."""

    method: str
    path: str
    role: str
    summary: str
    words: str
    parameters: tuple[Parameter, ...]
    sent: str
    """An example of what is sent, as JSON; empty where nothing is."""
    answered: str
    """An example of the answer."""


@dataclass(frozen=True)
class Topic:
    """Calls that belong together."""

    name: str
    words: str
    calls: tuple[Call, ...]


@router.get("/api", name="api")
def api(request: Request, _who: Reader) -> HTMLResponse:
    """Show every call of the API."""
    document = request.app.openapi()
    return page(request, "api.html", {"topics": topics(document), "document": DOCUMENT_PATH})


def topics(document: Document) -> list[Topic]:
    """The calls of an OpenAPI document by their tags, in the order of the tags."""
    return [
        Topic(
            tag["name"],
            tag["description"],
            tuple(
                _call(document, path, method, operation)
                for path, methods in document["paths"].items()
                for method, operation in methods.items()
                if tag["name"] in operation["tags"]
            ),
        )
        for tag in document["tags"]
    ]


def _call(document: Document, path: str, method: str, operation: Document) -> Call:
    answers = (body for code, body in operation["responses"].items() if code.startswith("2"))
    return Call(
        method=method.upper(),
        path=path,
        role=operation.get("x-role", ""),
        summary=operation["summary"],
        words=operation["description"].partition("\n\nTakes the role")[0],
        parameters=tuple(
            Parameter(given["name"], given.get("required", False), given.get("description", ""))
            for given in operation.get("parameters", [])
        ),
        sent=_example(document, operation.get("requestBody", {})),
        answered=_example(document, next(answers, {})),
    )


def _example(document: Document, body: Document) -> str:
    """An example of a body, where the document has one."""
    for content in body.get("content", {}).values():
        found = content.get("example", _of_schema(document, content.get("schema", {})))
        if found is not None:
            is_text = isinstance(found, str)
            return found.strip() if is_text else json.dumps(found, indent=2, ensure_ascii=False)
    return ""


def _of_schema(document: Document, schema: Document) -> Any:
    """The example of a schema, put together from those of its parts."""
    if "$ref" in schema:
        return _of_schema(document, document["components"]["schemas"][_last(schema["$ref"])])
    if "example" in schema:
        return schema["example"]
    if "examples" in schema:
        return schema["examples"][0]
    if "anyOf" in schema:
        return _of_schema(document, schema["anyOf"][0])
    if schema.get("type") == "array":
        item = _of_schema(document, schema.get("items", {}))
        return None if item is None else [item]
    parts = {
        name: _of_schema(document, part) for name, part in schema.get("properties", {}).items()
    }
    return {name: part for name, part in parts.items() if part is not None} or None


def _last(reference: str) -> str:
    return reference.rpartition("/")[2]
