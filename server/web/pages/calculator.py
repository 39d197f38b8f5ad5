"""The calculator: the sums there are, and a page for each."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse, RedirectResponse
from starlette.responses import Response

from server.calculator.basis import BASIS_KEYS, basis_keys, chosen_basis
from server.calculator.inputs import InputsWrong
from server.calculator.sum import Basis, NotServed, Sum
from server.calculator.sums import SUMS, sum_named
from server.calculator.typical import process_names
from server.calculator.work_out import PutIn, Worked, missing, put_in, worked
from server.storage.plant import House
from server.web.dependencies import DbSession, Now, Reader, ThisHouse
from server.web.i18n import gettext as _
from server.web.i18n import speaking
from server.web.pages.calculator_view import answer_of, fields_of
from server.web.pages.words import metal_words, process_words
from server.web.render import page
from server.web.sum_links import asked_once, basis_query, query_of, with_query
from server.web.sum_words import fault_told

router = APIRouter(include_in_schema=False)

CHOICE = "of"
"""Field of the small form that chooses a section or a process."""


@dataclass(frozen=True)
class Choice:
    """One section or process whose values can be filled in."""

    value: str
    words: str
    is_chosen: bool


@router.get("/calculator", name="calculator")
def calculator(request: Request, _who: Reader) -> HTMLResponse:
    """Show the sums there are."""
    return page(request, "calculator.html", {"sums": _sums("", {})})


@router.get("/calculator/{name}", name="calculator_sum")
def calculator_sum(
    request: Request, name: str, _who: Reader, db: DbSession, house: ThisHouse, now_ms: Now
) -> Response:
    """Show a sum with the plant's own values, or with what was typed."""
    a_sum = sum_named(name)
    path = request.url_for("calculator_sum", name=a_sum.name).path
    faults: dict[str, str] = {}
    try:
        asked = asked_once(request.query_params.multi_items())
    except InputsWrong as error:
        asked, faults = dict(request.query_params), _by_key(error)
    if CHOICE in asked:
        return RedirectResponse(with_query(path, _chosen(asked)), 303)
    typed = {key: text for key, text in asked.items() if key not in basis_keys(a_sum)}
    try:
        basis = chosen_basis(db, house, a_sum, asked, now_ms)
    except InputsWrong as error:
        faults |= _by_key(error)
        basis = chosen_basis(db, house, a_sum, {}, now_ms)
    inputs, wrong = put_in(a_sum, basis, typed)
    faults |= _by_key(InputsWrong(wrong))
    answer: Worked | None = None
    not_served: NotServed | None = None
    try:
        answer = None if faults else worked(a_sum, basis, inputs)
    except InputsWrong as error:
        faults |= _by_key(error)
    except NotServed as error:
        not_served = error
    if not faults:
        wanted = query_of(a_sum, basis, inputs)
        if asked and asked != wanted:
            return RedirectResponse(with_query(path, wanted), 303)
    with speaking(zone=house.time_zone):
        view = _view(a_sum, house, basis, inputs, answer, typed, faults)
        view["answer"] = answer_of(answer) if answer else None
        view["served"] = [process_words(each) for each in not_served.served] if not_served else []
    return page(request, "calculator_sum.html", view, status_code=422 if faults else 200)


def _view(
    a_sum: Sum,
    house: House,
    basis: Basis,
    inputs: Sequence[PutIn],
    answer: Worked | None,
    typed: Mapping[str, str],
    faults: Mapping[str, str],
) -> dict[str, object]:
    fields = fields_of(inputs, typed, faults)
    own = {key for field in fields for key in (field.key, field.u_key)}
    if a_sum.option and a_sum.option.choices(basis.process):
        own.add(a_sum.option.key)
    query = query_of(a_sum, basis, inputs)
    kept = {key: value for key, value in query.items() if key not in BASIS_KEYS}
    return {
        "sum": a_sum,
        "title": _(a_sum.title),
        "question": _(a_sum.question),
        "process": process_words(basis.process.name),
        "metal": metal_words(basis.metal.symbol),
        "basis": basis,
        "choices": _choices(house, basis),
        "hidden": basis_query(basis),
        "kept": kept,
        "option": _option(a_sum, basis),
        "fields": fields,
        "faults": faults,
        "general_faults": [words for key, words in faults.items() if key not in own],
        "missing": [] if faults else [_(each.label) for each in missing(inputs)],
        "query": query,
        "link": with_query("", query),
        "sums": _sums(a_sum.name, basis_query(basis)),
        "sources": answer.sources if answer else a_sum.sources,
        "limits": [_(text) for text in a_sum.limits],
        "cautions": [_(text) for text in a_sum.cautions],
    }


def _option(a_sum: Sum, basis: Basis) -> dict[str, object] | None:
    """The sum's option with its choices for this process; None where there is none."""
    choices = a_sum.option.choices(basis.process) if a_sum.option else {}
    if a_sum.option is None or not choices:
        return None
    return {
        "key": a_sum.option.key,
        "label": _(a_sum.option.label),
        "choices": [(value, _(words)) for value, words in choices.items()],
        "chosen": basis.choice,
    }


def _sums(here: str, query: Mapping[str, str]) -> list[dict[str, object]]:
    return [
        {
            "name": name,
            "title": _(found.title),
            "question": _(found.question),
            "query": with_query("", query),
            "is_here": name == here,
        }
        for name, found in SUMS.items()
    ]


def _choices(house: House, basis: Basis) -> dict[str, list[Choice]]:
    """The sections of the house, and the processes whose typical values stand in."""
    section = basis.section.name if basis.section else None
    process = None if basis.section else basis.process.name
    return {
        _("Sections of this house"): [
            Choice(f"section {plan.name}", plan.name, plan.name == section)
            for plan in house.sections
        ],
        _("Typical values of a process"): [
            Choice(f"process {name}", process_words(name), name == process)
            for name in process_names()
        ],
    }


def _chosen(asked: Mapping[str, str]) -> dict[str, str]:
    """The parameters after another section or process was chosen; what was typed is kept."""
    key, _blank, name = asked[CHOICE].partition(" ")
    kept = {k: text for k, text in asked.items() if k not in (CHOICE, *BASIS_KEYS) and text}
    return ({key: name} if key in ("section", "process") else {}) | kept


def _by_key(error: InputsWrong) -> dict[str, str]:
    return {fault.key: fault_told(fault) for fault in error.faults}
