"""What is wrong with a plant file: every key, what was found there, and what was expected."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Any, TypeVar, get_args

from pydantic import BaseModel, ValidationError

from server.intake.errors import IntakeError, shown

Model = TypeVar("Model", bound=BaseModel)


@dataclass(frozen=True, slots=True)
class PlantFault:
    """One key of a plant file that cannot stand as it is."""

    key: str
    found: str
    expected: str

    def __str__(self) -> str:
        """Say all three in one line."""
        found = f"found {shown(self.found)}" if self.found else "is missing"
        return f"{self.key}: {found}; expected {self.expected}"


class PlantFileWrong(IntakeError):
    """A plant file, or a change of the plant, that cannot be taken."""

    def __init__(self, file: str, faults: Sequence[PlantFault]) -> None:
        """Keep every fault, in the order of the file."""
        super().__init__(file, tuple(faults))
        self.file = file
        self.faults = tuple(faults)

    def __str__(self) -> str:
        """Say one fault a line."""
        return "\n".join(f"{self.file}, {fault}" for fault in self.faults)


class WrongTogether(ValueError):
    """Values that are each right and do not go together."""

    def __init__(self, key: str, found: object, expected: str) -> None:
        """Keep the key that should be changed."""
        super().__init__(expected)
        self.key = key
        self.found = found
        self.expected = expected


def checked(model: type[Model], content: Mapping[str, Any], file: str) -> Model:
    """Give content as a model.

    Raises
    ------
    PlantFileWrong
        With every key that is wrong, missing or unknown.
    """
    try:
        return model.model_validate(content)
    except ValidationError as error:
        faults = [_fault(model, content, dict(found)) for found in error.errors()]
        raise PlantFileWrong(file, faults) from None


def _fault(model: type[BaseModel], content: Mapping[str, Any], error: dict[str, Any]) -> PlantFault:
    place, found = tuple(error["loc"]), error["input"]
    while len(place) > 1 and isinstance(place[-1], int) and not _holds_tables(model, place[:-1]):
        # One number of a pair is named with the whole pair.
        place = place[:-1]
        found = _at(content, place)
        error = {**error, "type": "wrong"}
    cause = error.get("ctx", {}).get("error")
    if isinstance(cause, WrongTogether):
        return PlantFault(_key(content, (*place, cause.key)), _text(cause.found), cause.expected)
    key = _key(content, place)
    if error["type"] == "extra_forbidden":
        known = list(_model_at(model, place[:-1]).model_fields)
        near = get_close_matches(str(place[-1]), known, n=1)
        expected = f"“{near[0]}”, if that is meant" if near else f"one of {', '.join(known)}"
        return PlantFault(key, "a key that is not known", expected)
    expected = str(cause) if isinstance(cause, ValueError) else _described(model, place)
    return PlantFault(key, "" if error["type"] == "missing" else _text(found), expected)


def _text(value: object) -> str:
    if isinstance(value, Mapping):
        return "a table"
    if isinstance(value, list) and value and isinstance(value[0], Mapping):
        return f"{len(value)} tables"
    return f"“{value}”" if isinstance(value, str) else str(value)


def _key(content: Mapping[str, Any], place: Sequence[int | str]) -> str:
    """Name a key as somebody would look for it: `section EW1: targets.cell_volts`."""
    within: Any = content
    tables = ""
    keys: list[str] = []
    for step in place:
        within = _below(within, step)
        if isinstance(step, int):
            name = within.get("name") if isinstance(within, Mapping) else None
            tables = f"{'.'.join(keys)} {name or step + 1}: "
            keys = []
        else:
            keys.append(str(step))
    return f"{tables}{'.'.join(keys)}".removesuffix(": ") or "the file"


def _below(within: Any, step: int | str) -> Any:
    if isinstance(step, int):
        return within[step] if isinstance(within, list) and step < len(within) else None
    return within.get(step) if isinstance(within, Mapping) else None


def _at(content: Mapping[str, Any], place: Sequence[int | str]) -> Any:
    within: Any = content
    for step in place:
        within = _below(within, step)
    return within


def _holds_tables(model: type[BaseModel], place: Sequence[int | str]) -> bool:
    holder = _model_at(model, place[:-1])
    field = holder.model_fields.get(str(place[-1]))
    return field is None or _model_of(field.annotation) is not None


def _model_at(model: type[BaseModel], place: Sequence[int | str]) -> type[BaseModel]:
    for step in place:
        if isinstance(step, str) and step in model.model_fields:
            model = _model_of(model.model_fields[step].annotation) or model
    return model


def _model_of(annotation: Any) -> type[BaseModel] | None:
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return annotation
    found = (_model_of(inner) for inner in get_args(annotation))
    return next((model for model in found if model is not None), None)


def _described(model: type[BaseModel], place: Sequence[int | str]) -> str:
    """What the field at a place is to hold, from the description of the field itself."""
    steps = [step for step in place if isinstance(step, str)]
    while steps:
        holder = _model_at(model, steps[:-1])
        if steps[-1] in holder.model_fields:
            return holder.model_fields[steps[-1]].description or "another value"
        steps.pop()
    return "the tables of a plant file"
