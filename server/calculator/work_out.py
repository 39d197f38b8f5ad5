"""A sum worked out: what was given and filled in, the results with their doubt, the remarks."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from server.calculator.filled import Filled
from server.calculator.inputs import U_PREFIX, Input, InputFault, InputsWrong, number_of
from server.calculator.sum import Basis, Case, ModelDoubt, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said, Word
from server.science.errors import OutOfRange, ScienceError
from server.science.uncertainty.sensitivities import propagated

_TYPED = Said(N_("typed"))
_EXACT = Said(N_("taken as exact"))
_OUTSIDE_USUAL = N_(
    "%(label)s: %(value)s %(unit)s lies outside what is usual here, %(low)s to %(high)s %(unit)s."
)


@dataclass(frozen=True)
class PutIn:
    """An input as it went into the sum."""

    input: Input
    unit: str
    value: float | None
    """None where it was left out."""
    u: float | None
    origin: Said | None
    u_origin: Said | None
    is_typed: bool
    u_is_typed: bool
    filled: float | None
    """What would be filled in had nobody typed it."""
    is_needed: bool


@dataclass(frozen=True)
class Result:
    """One result with its standard uncertainty, and the share of each input in its variance."""

    output: Output
    unit: str
    value: float
    u: float
    shares: Mapping[str, float]


@dataclass(frozen=True)
class Worked:
    """A sum, worked out."""

    sum: Sum
    basis: Basis
    inputs: tuple[PutIn, ...]
    results: tuple[Result, ...]
    remarks: tuple[Remark, ...]
    model_doubts: tuple[ModelDoubt, ...] = ()
    sources: tuple[str, ...] = ()


def given(inputs: Sequence[PutIn]) -> dict[str, float]:
    """What was typed and differs from what would be filled in, by key."""
    typed: dict[str, float] = {}
    for put in inputs:
        if put.is_typed and put.value is not None and put.value != put.filled:
            typed[put.input.key] = put.value
        if put.u_is_typed and put.u is not None and put.input.u_key:
            typed[put.input.u_key] = put.u
    return typed


def put_in(
    a_sum: Sum, basis: Basis, typed: Mapping[str, str]
) -> tuple[tuple[PutIn, ...], list[InputFault]]:
    """The inputs of a sum: what was typed, else what is filled in; and what cannot be taken.

    An input with a fault has no value.
    """
    faults: list[InputFault] = []
    known = {key for found in a_sum.inputs for key in (found.key, found.u_key) if key}
    for key in typed:
        if key not in known:
            what = N_("“%(key)s” is no input of this sum.")
            inputs = ", ".join(found.key for found in a_sum.inputs)
            expected = Said(N_("one of %(keys)s"), {"keys": inputs})
            faults.append(InputFault(key, Said(what, {"key": key}), typed[key], expected))
    found = [_put_in(each, a_sum.own, basis, typed, faults) for each in a_sum.inputs]
    also = a_sum.also_needed(basis.metal)
    found = [replace(put, is_needed=put.is_needed or put.input.key in also) for put in found]
    for put in list(found):
        if put.value is not None and put.input.replaces:
            found = _beside(put, found)
    return tuple(found), faults


def worked(a_sum: Sum, basis: Basis, inputs: Sequence[PutIn]) -> Worked | None:
    """The sum worked out; None where an input that it needs is not known.

    Raises
    ------
    InputsWrong
        If the science refuses a number that the input alone would take.
    NotServed
        If the sum has no model for the process.
    """
    a_sum.check(basis)
    if missing(inputs):
        return None
    values = {put.input.key: put.value for put in inputs if put.value is not None}
    doubts = {put.input.key: put.u for put in inputs if put.u is not None}
    case = Case(basis, values)
    try:
        of_model = tuple(a_sum.model_doubts(case))
        estimates = values | {doubt.key: doubt.estimate for doubt in of_model}
        doubts |= {doubt.key: doubt.u for doubt in of_model}
        with np.errstate(all="ignore"):
            outputs = a_sum.outputs(Case(basis, estimates))
        results = tuple(_result(output, basis, estimates, doubts) for output in outputs)
        by_key = {result.output.key: result.value for result in results}
        by_key |= {f"{U_PREFIX}{result.output.key}": result.u for result in results}
        remarks = (*_unusual(basis, inputs), *a_sum.remarks(case, by_key))
    except ScienceError as error:
        what = N_("%(quantity)s cannot be %(found)s; it must be %(allowed)s.")
        parts = {"quantity": error.quantity, "found": str(error.found), "allowed": error.allowed}
        raise InputsWrong([InputFault("", Said(what, parts), str(error.found))]) from error
    sources = (*a_sum.sources, *a_sum.more_sources(case))
    return Worked(a_sum, basis, tuple(inputs), results, remarks, of_model, sources)


def _beside(put: PutIn, inputs: list[PutIn]) -> list[PutIn]:
    """Leave out what an input replaces; or itself, where it is filled in and they are typed."""
    replaced = [each for each in inputs if each.input.key in put.input.replaces]
    wins = put.is_typed or not any(each.is_typed for each in replaced)
    left_out = replaced if wins else [put]
    labels = [put] if wins else [each for each in replaced if each.is_typed]
    beside = Said(N_("not needed beside: %(label)s"), {"label": Word(labels[0].input.label)})
    return [
        replace(each, value=None, u=None, origin=beside, u_origin=None, is_needed=False)
        if each in left_out
        else each
        for each in inputs
    ]


def missing(inputs: Sequence[PutIn]) -> list[Input]:
    """The inputs that are needed and not known."""
    return [put.input for put in inputs if put.is_needed and put.value is None]


def _put_in(
    found: Input,
    own: Mapping[str, Filled],
    basis: Basis,
    typed: Mapping[str, str],
    faults: list[InputFault],
) -> PutIn:
    unit = found.unit.replace("¤", basis.currency)
    filled = own.get(found.key) or basis.filled.get(found.key)
    text = typed.get(found.key, "").strip()
    value, origin = (filled.value, filled.origin) if filled else (None, None)
    if text:
        value, origin = _typed(found, text, faults), _TYPED
    u, u_origin = None, None
    u_text = typed.get(found.u_key or "", "").strip()
    if u_text:
        u, u_origin = _typed_u(found, u_text, faults), _TYPED
    elif found.has_doubt and value is not None:
        doubt = basis.doubts.get(found.key)
        u, u_origin = (doubt.of(abs(value)), doubt.origin) if doubt else (0.0, _EXACT)
    return PutIn(
        input=found,
        unit=unit,
        value=value,
        u=u,
        origin=origin,
        u_origin=u_origin,
        is_typed=bool(text),
        u_is_typed=bool(u_text),
        filled=filled.value if filled else None,
        is_needed=found.is_needed,
    )


def _typed(found: Input, text: str, faults: list[InputFault]) -> float | None:
    value = number_of(text)
    if value is None:
        what = N_("“%(found)s” is not a number.")
    elif not found.takes(value):
        what = N_("%(found)s is not possible here.")
    else:
        return value
    faults.append(InputFault(found.key, Said(what, {"found": text}), text, found.expected))
    return None


def _typed_u(found: Input, text: str, faults: list[InputFault]) -> float | None:
    u = number_of(text)
    if u is not None and found.takes_u(u):
        return u
    what = N_("“%(found)s” is no standard uncertainty.")
    key = found.u_key or ""
    faults.append(InputFault(key, Said(what, {"found": text}), text, found.expected_u))
    return None


def _result(
    output: Output, basis: Basis, estimates: Mapping[str, float], doubts: Mapping[str, float]
) -> Result:
    doubts = doubts if output.has_doubt else {}
    budget = propagated(lambda **values: _number(output, values), estimates, doubts)
    shares = {
        key: share
        for key, share in budget.contributions.items()
        if math.isfinite(share) and share > 0
    }
    return Result(
        output=output,
        unit=output.unit.replace("¤", basis.currency),
        value=budget.value,
        u=budget.standard_uncertainty,
        shares=dict(sorted(shares.items(), key=lambda pair: -pair[1])),
    )


def _number(output: Output, values: Mapping[str, float]) -> float:
    """The output at these numbers, which a doubt may have moved to where there is none."""
    try:
        with np.errstate(all="ignore"):
            found = float(output.model(values))
    except (ZeroDivisionError, OverflowError):
        found = math.inf
    if math.isinf(found):
        raise OutOfRange(output.key, found, "finite")
    return found


def _unusual(basis: Basis, inputs: Sequence[PutIn]) -> list[Remark]:
    """What lies outside what is usual for the process, input by input."""
    remarks = []
    for put in inputs:
        usual = basis.usual.get(put.input.key)
        if usual and put.value is not None and not usual[0] <= put.value <= usual[1]:
            parts: dict[str, Part] = {
                "label": Word(put.input.label),
                "value": put.value,
                "unit": put.unit,
                "low": usual[0],
                "high": usual[1],
            }
            remarks.append(Remark("range", Said(_OUTSIDE_USUAL, parts)))
    return remarks
