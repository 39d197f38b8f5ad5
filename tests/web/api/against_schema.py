"""As much of JSON Schema as the OpenAPI document uses, to hold answers and examples against it."""

from collections.abc import Iterator
from typing import Any

_TYPES: dict[str, tuple[type, ...]] = {
    "null": (type(None),),
    "boolean": (bool,),
    "integer": (int,),
    "number": (int, float),
    "string": (str,),
    "array": (list,),
    "object": (dict,),
}


def faults(value: Any, schema: dict[str, Any], document: dict[str, Any]) -> list[str]:
    """What of a value its schema does not allow; empty where all is well."""
    return list(_faults(value, schema, document, "answer"))


def _faults(value: Any, schema: Any, document: dict[str, Any], where: str) -> Iterator[str]:
    if schema is True:
        return
    while "$ref" in schema:
        schema = document["components"]["schemas"][schema["$ref"].rpartition("/")[2]]
    if "anyOf" in schema:
        tried = [list(_faults(value, option, document, where)) for option in schema["anyOf"]]
        if all(tried):
            yield from min(tried, key=len)
        return
    kinds = schema.get("type", [])
    kinds = [kinds] if isinstance(kinds, str) else kinds
    if kinds and not any(_is_a(value, kind) for kind in kinds):
        yield f"{where} is {value!r}, not {' or '.join(kinds)}"
        return
    if "enum" in schema and value not in schema["enum"]:
        yield f"{where} is {value!r}, not one of {schema['enum']}"
    if _is_a(value, "number") and not (
        schema.get("minimum", value) <= value <= schema.get("maximum", value)
    ):
        yield f"{where} is {value!r}, beyond its limits"
    if isinstance(value, dict):
        yield from _of_object(value, schema, document, where)
    if isinstance(value, list):
        for place, item in enumerate(value):
            of_place = schema.get("prefixItems", [])[place : place + 1] or [
                schema.get("items", True)
            ]
            yield from _faults(item, of_place[0], document, f"{where}.{place}")


def _of_object(
    value: dict[str, Any], schema: dict[str, Any], document: dict[str, Any], where: str
) -> Iterator[str]:
    properties = schema.get("properties", {})
    for name in schema.get("required", []):
        if name not in value:
            yield f"{where}.{name} is missing"
    others = schema.get("additionalProperties", True)
    for name, item in value.items():
        if name not in properties and others is False:
            yield f"{where}.{name} is not in the document"
        yield from _faults(item, properties.get(name, others or True), document, f"{where}.{name}")


def _is_a(value: Any, kind: str) -> bool:
    if isinstance(value, bool):
        return kind == "boolean"
    return isinstance(value, _TYPES[kind])
