"""The sums that a metallurgist does daily: which there are, and one worked out."""

from collections.abc import Mapping
from math import isfinite
from typing import Annotated, Any

from fastapi import Path, Request

from server.calculator.basis import basis_keys, chosen_basis
from server.calculator.inputs import Input, InputFault, InputsWrong
from server.calculator.sum import NotServed, Sum
from server.calculator.sums import SUMS, sum_named
from server.calculator.texts import N_, Said
from server.calculator.work_out import PutIn, Result, Worked, missing, put_in, worked
from server.science.units import percent_from_share
from server.web.api.resource import problems, resource
from server.web.api.schemas_calculator import (
    CalculatorAnswer,
    CalculatorInput,
    CalculatorPutIn,
    CalculatorRemark,
    CalculatorResult,
    CalculatorShare,
    CalculatorSum,
    CalculatorSums,
)
from server.web.dependencies import DbSession, Now, ThisHouse, requires
from server.web.filters import number
from server.web.i18n import SOURCE_LANGUAGE, speaking
from server.web.refusals import Refused, fault
from server.web.sum_links import asked_once, query_of, with_query
from server.web.sum_words import decimals_of, fault_told, told

router = resource("calculator")

SumName = Annotated[
    str,
    Path(
        max_length=100,
        description="Name of the sum.",
        openapi_examples={name: {"value": name} for name in SUMS},
    ),
]


def _parameters() -> list[dict[str, Any]]:
    """The query of every sum, for the OpenAPI document."""
    about = {
        "section": ("Section whose own values are filled in; without it and `process` the first.",
                    {"type": "string", "maxLength": 200}),
        "process": ("Process whose typical values are filled in, in place of a section's own.",
                    {"type": "string", "maxLength": 100}),
        "metal": ("Symbol of the metal, with process `other`.",
                  {"type": "string", "maxLength": 20}),
        "electrons": ("Electrons that deposit one atom, with process `other`.",
                      {"type": "integer", "minimum": 1, "maximum": 8}),
    }  # fmt: skip
    for found in SUMS.values():
        if found.option:
            words = f"{found.option.label}. Of {found.name}."
            about[found.option.key] = (words, {"type": "string", "maxLength": 40})
    told_of: dict[str, list[str]] = {}
    inputs: dict[str, Input] = {}
    for name, found in SUMS.items():
        for each in found.inputs:
            inputs[each.key] = each
            told_of.setdefault(each.key, []).append(name)
    for key, each in inputs.items():
        unit = f", {each.unit}" if each.unit else ""
        about[key] = (f"{each.label}{unit}. Of {', '.join(told_of[key])}.", {"type": "number"})
        if each.u_key:
            about[each.u_key] = (f"Standard uncertainty of `{key}`{unit}.", {"type": "number"})
    return [
        {"name": key, "in": "query", "required": False, "description": words, "schema": schema}
        for key, (words, schema) in about.items()
    ]


@router.get(
    "/calculator",
    summary="The sums there are",
    dependencies=[requires("reader")],
)
def get_calculator() -> CalculatorSums:
    """Answer every sum with its inputs, their units and limits, its formula and its sources."""
    with speaking(SOURCE_LANGUAGE):
        return CalculatorSums(sums=[_sum(found) for found in SUMS.values()])


@router.get(
    "/calculator/{name}",
    summary="A sum worked out",
    dependencies=[requires("reader")],
    responses=problems(404),
    openapi_extra={"parameters": _parameters()},
)
def get_calculator_sum(
    request: Request, db: DbSession, house: ThisHouse, now_ms: Now, name: SumName
) -> CalculatorAnswer:
    """Answer the result with its uncertainty, the formula with its numbers, and its sources.

    What is not given is filled in with the plant's own value, or with what is typical of the
    process; every input says which. A parameter that the sum does not know is refused.
    """
    a_sum = sum_named(name)
    with speaking(SOURCE_LANGUAGE, zone=house.time_zone):
        try:
            asked = asked_once(request.query_params.multi_items())
            basis = chosen_basis(db, house, a_sum, asked, now_ms)
            typed = {key: text for key, text in asked.items() if key not in basis_keys(a_sum)}
            inputs, faults = put_in(a_sum, basis, typed)
            if faults:
                raise InputsWrong(faults)
            answer = worked(a_sum, basis, inputs)
        except InputsWrong as error:
            raise Refused([_fault(found) for found in error.faults]) from error
        except NotServed as error:
            raise Refused([not_served(error)]) from error
        if answer is None:
            raise Refused([_missing(found) for found in missing(inputs)])
        path = request.url_for("calculator_sum", name=a_sum.name).path
        return _answer(answer, with_query(path, query_of(a_sum, basis, inputs)))


def not_served(error: NotServed) -> dict[str, str]:
    """A fault that says for which processes there is a model."""
    what = Said(N_("There is no model of this for %(process)s."), {"process": error.process})
    expected = Said(N_("one of %(keys)s"), {"keys": ", ".join(error.served)})
    found = InputFault("process", what, error.process, expected)
    return _fault(found)


def _fault(found: InputFault) -> dict[str, str]:
    where = f"query.{found.key}" if found.key else "query"
    expected = told(found.expected) if found.expected else ""
    return fault(where, fault_told(found), found.found, expected)


def _missing(found: Input) -> dict[str, str]:
    what = Said(N_("%(key)s is missing."), {"key": found.key})
    return _fault(InputFault(found.key, what, "", found.expected))


def _sum(found: Sum) -> CalculatorSum:
    return CalculatorSum(
        name=found.name,
        title=found.title,
        question=found.question,
        formula=found.formula,
        inputs=[_input(each) for each in found.inputs],
        results=list(found.results),
        processes=list(found.served),
        option=found.option.key if found.option else None,
        sources=list(found.sources),
        limits=list(found.limits),
        cautions=list(found.cautions),
    )


def _input(found: Input) -> CalculatorInput:
    return CalculatorInput(
        key=found.key,
        label=found.label,
        unit=found.unit.replace("¤", "currency"),
        above=found.low if found.is_above else None,
        lowest=None if found.is_above else found.low,
        highest=found.high,
        is_needed=found.is_needed,
        u_key=found.u_key,
        hint=found.hint,
    )


def _answer(answer: Worked, link: str) -> CalculatorAnswer:
    basis, first = answer.basis, answer.results[0].value
    labels = {put.input.key: put.input.label for put in answer.inputs}
    labels |= {doubt.key: doubt.label for doubt in answer.model_doubts}
    return CalculatorAnswer(
        name=answer.sum.name,
        title=answer.sum.title,
        section=basis.section.name if basis.section else None,
        process=basis.process.name,
        metal=basis.metal.symbol,
        electrons=basis.metal.electrons,
        choice=basis.choice,
        inputs=[_put_in(put) for put in answer.inputs],
        results=[_result(result, first, labels) for result in answer.results],
        remarks=[CalculatorRemark(kind=r.kind, text=told(r.said)) for r in answer.remarks],
        sources=list(answer.sources),
        limits=list(answer.sum.limits),
        cautions=list(answer.sum.cautions),
        link=link,
    )


def _put_in(put: PutIn) -> CalculatorPutIn:
    return CalculatorPutIn(
        key=put.input.key,
        label=put.input.label,
        unit=put.unit,
        value=put.value,
        u=put.u,
        origin=told(put.origin) if put.origin else "",
        u_origin=told(put.u_origin) if put.u_origin else "",
        is_typed=put.is_typed,
    )


def _result(result: Result, first: float, labels: Mapping[str, str]) -> CalculatorResult:
    is_part = result.output.place == "part" and isfinite(first) and first != 0
    value = number(result.value, decimals_of(result.value, 0.0), result.unit)
    return CalculatorResult(
        key=result.output.key,
        label=result.output.label,
        unit=result.unit,
        value=_known(result.value),
        u=_known(result.u),
        formula=result.output.formula,
        working=f"{told(result.output.numbers)} = {value}",
        place=result.output.place,
        share_pct=float(percent_from_share(result.value / first)) if is_part else None,
        note=told(result.output.note) if result.output.note else "",
        budget=[
            CalculatorShare(key=key, label=labels[key], share_pct=float(percent_from_share(share)))
            for key, share in result.shares.items()
        ],
    )


def _known(value: float) -> float | None:
    return value if isfinite(value) else None
