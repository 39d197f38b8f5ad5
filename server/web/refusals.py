"""What was asked or sent in a form that cannot be taken, told field by field."""

from collections.abc import Mapping, Sequence
from typing import Any

from fastapi import FastAPI
from fastapi.exceptions import RequestValidationError
from starlette.requests import Request
from starlette.responses import Response

from server.accounts.errors import AccountsError
from server.intake.errors import FileRefused
from server.intake.plant_file import PlantFileWrong
from server.web.errors import answer
from server.web.i18n import gettext as _

Fault = dict[str, str]

_SHOWN_CHARS = 80


class Refused(Exception):
    """A question or a form with faults in it, each with its place."""

    def __init__(self, faults: Sequence[Fault], status: int = 422) -> None:
        self.faults, self.status = list(faults), status
        super().__init__("; ".join(fault["what"] for fault in self.faults))


def fault(where: str, what: str, found: object = "", expected: str = "") -> Fault:
    """One fault: where it is, what is wrong, what was found there and what was expected."""
    shown = str(found)
    if len(shown) > _SHOWN_CHARS:
        shown = shown[: _SHOWN_CHARS - 1] + "…"
    return {"where": where, "what": what, "found": shown, "expected": expected}


def install(app: FastAPI) -> None:
    """Let the application tell these errors field by field."""
    app.add_exception_handler(Refused, _refused)
    app.add_exception_handler(RequestValidationError, _not_understood)
    app.add_exception_handler(FileRefused, _file_refused)
    app.add_exception_handler(PlantFileWrong, _plant_file_wrong)
    app.add_exception_handler(AccountsError, _no_account)


def _told(request: Request, faults: Sequence[Fault], status: int = 422) -> Response:
    detail = faults[0]["what"] if len(faults) == 1 else _("Several things cannot be taken.")
    return answer(request, status, _("Not understood"), detail, errors=list(faults))


def _refused(request: Request, error: Exception) -> Response:
    assert isinstance(error, Refused)
    return _told(request, error.faults, error.status)


def _not_understood(request: Request, error: Exception) -> Response:
    assert isinstance(error, RequestValidationError)
    return _told(request, [_as_fault(found) for found in error.errors()])


def _as_fault(found: Mapping[str, Any]) -> Fault:
    """One fault of a form or an address, from what the validation says."""
    given, context = found.get("input"), found.get("ctx", {})
    expected = str(context.get("expected", "")) or ", ".join(
        f"{name} {context[name]}" for name in ("ge", "gt", "le", "lt") if name in context
    )
    places = [str(step) for step in found["loc"]]
    return fault(
        ".".join(places),
        f"{places[-1]}: {found['msg']}" if places else str(found["msg"]),
        given if isinstance(given, str | int | float | bool) else "",
        expected,
    )


def _file_refused(request: Request, error: Exception) -> Response:
    assert isinstance(error, FileRefused)
    where = error.file if error.line is None else f"{error.file}, line {error.line}"
    status = 413 if error.code == "too_large" else 422
    return _told(request, [fault(where, error.reason, error.found, error.expected)], status)


def _plant_file_wrong(request: Request, error: Exception) -> Response:
    assert isinstance(error, PlantFileWrong)
    return _told(
        request,
        [
            fault(found.key, f"{found.key}: {found.expected}", found.found, found.expected)
            for found in error.faults
        ],
    )


def _no_account(request: Request, error: Exception) -> Response:
    words = str(error)
    return _told(request, [fault("", words[:1].upper() + words[1:] + ".")])
