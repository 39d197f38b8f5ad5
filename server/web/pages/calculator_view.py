"""What the page of a sum shows: fields with where each value is from, results with their doubt."""

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from math import isfinite, nan

from markupsafe import Markup, escape

from server.calculator.sum import ModelDoubt, Remark
from server.calculator.work_out import PutIn, Result, Worked
from server.web.filters import number, number_typed, percent
from server.web.i18n import gettext as _
from server.web.i18n import manner, writing
from server.web.sum_words import decimals_of, figures, told, unbroken

_INDEX = re.compile(r"_(\w+)")

_DIGITS, _ROUGH_DIGITS = 6, 3
"""Of a result without a doubt that is exact, and of one whose doubt was not worked out."""

LEAST_SHARE = 0.005
"""Share of the variance below which an input is not worth a line."""
SMALL_SHARE = 0.1
"""Share of the variance below which it is written with a decimal."""


@dataclass(frozen=True)
class Field:
    """An input as a field, and its standard uncertainty as a second one."""

    key: str
    label: str
    unit: str
    value: str
    origin: str
    """Where the value is from."""
    hint: str
    fault: str
    u_key: str
    """Empty for what is counted."""
    u_value: str
    u_otherwise: str
    """The standard uncertainty that holds where none is typed."""
    u_origin: str
    u_fault: str
    is_typed: bool
    is_needed: bool


@dataclass(frozen=True)
class Figure:
    """A result as it is written."""

    label: str
    value: str
    doubt: str
    """Empty where it is known exactly."""
    unit: str
    formula: Markup
    numbers: str
    share: str
    note: str


@dataclass(frozen=True)
class Line:
    """One line of the budget: an input, what it is, and its share."""

    label: str
    value: str
    doubt: str
    unit: str
    share: str = ""


@dataclass(frozen=True)
class Answer:
    """A sum worked out, as the page writes it."""

    figures: list[Figure]
    parts: list[Figure]
    sensitivities: list[Figure]
    budget: list[Line]
    remarks: list[tuple[str, str]]
    """Kind and words."""

    @property
    def is_impossible(self) -> bool:
        """Whether something cannot be as it stands."""
        return any(kind == "warning" for kind, _words in self.remarks)


def fields_of(
    inputs: Sequence[PutIn], typed: Mapping[str, str], faults: Mapping[str, str]
) -> list[Field]:
    """The inputs as fields; what was typed stays as it was typed where it cannot be taken."""
    return [_field(put, typed, faults) for put in inputs]


def answer_of(worked: Worked) -> Answer:
    """The results, in the reader's language."""
    first = worked.results[0]
    of_place: dict[str, list[Figure]] = {"figure": [], "part": [], "sensitivity": []}
    for result in worked.results:
        of_place[result.output.place].append(_figure(result, first))
    lines = {put.input.key: _line_of_input(put) for put in worked.inputs}
    lines |= {doubt.key: _line_of_model(doubt) for doubt in worked.model_doubts}
    return Answer(
        figures=of_place["figure"],
        parts=of_place["part"],
        sensitivities=of_place["sensitivity"],
        budget=[
            replace(lines[key], share=_percent(share))
            for key, share in first.shares.items()
            if share >= LEAST_SHARE
        ],
        remarks=[_remark(remark) for remark in worked.remarks],
    )


def _field(put: PutIn, typed: Mapping[str, str], faults: Mapping[str, str]) -> Field:
    key, u_key = put.input.key, put.input.u_key or ""
    fault, u_fault = faults.get(key, ""), faults.get(u_key, "") if u_key else ""
    return Field(
        key=key,
        label=_(put.input.label),
        unit=put.unit,
        value=typed[key] if fault and key in typed else _in_field(put.value),
        origin=_origin(put),
        hint=_(put.input.hint) if put.input.hint else "",
        fault=fault,
        u_key=u_key,
        u_value=typed[u_key] if u_fault else _in_field(put.u if put.u_is_typed else None),
        u_otherwise=figures(put.u, 3) if put.u is not None and not put.u_is_typed else "",
        u_origin=told(put.u_origin) if put.u_origin and not put.u_is_typed else "",
        u_fault=u_fault,
        is_typed=put.is_typed,
        is_needed=put.is_needed,
    )


def _in_field(value: float | None) -> str:
    """A number as a field takes it, with all its digits and the language's decimal sign."""
    return number_typed(value).replace(".", writing(manner().language).decimal_sign)


def _origin(put: PutIn) -> str:
    if put.origin is None:
        return ""
    if not put.is_typed or put.filled is None or put.value is None:
        return told(put.origin)
    return _("typed, in place of %(value)s") % {"value": figures(put.filled)}


def _figure(result: Result, first: Result) -> Figure:
    output, u = result.output, result.u
    decimals = decimals_of(result.value, u, _DIGITS if output.has_doubt else _ROUGH_DIGITS)
    has_doubt = isfinite(u) and u > 0
    is_part = output.place == "part" and isfinite(first.value) and first.value != 0
    whole = number(result.value, decimals_of(result.value, 0.0), result.unit)
    return Figure(
        label=_(output.label),
        value=number(result.value, decimals),
        doubt=number(u, decimals) if has_doubt else "",
        unit=result.unit,
        formula=_lowered(output.formula),
        numbers=unbroken(f"{told(output.numbers)} = {whole}"),
        share=percent(result.value / first.value, 1) if is_part else "",
        note=told(output.note) if output.note else "",
    )


def _lowered(formula: str) -> Markup:
    """A formula with what follows an underline set low."""
    return Markup(_INDEX.sub(r"<sub>\1</sub>", str(escape(formula))))  # noqa: S704 - escaped


def _line_of_input(put: PutIn) -> Line:
    value, u = (number if number is not None else nan for number in (put.value, put.u))
    return Line(_(put.input.label), figures(value), figures(u, 3), put.unit)


def _line_of_model(doubt: ModelDoubt) -> Line:
    if doubt.estimate == 1:
        return Line(_(doubt.label), "", percent(doubt.u), "%")
    return Line(_(doubt.label), "", figures(doubt.u, 3), doubt.unit)


def _percent(share: float) -> str:
    return percent(share, 1 if share < SMALL_SHARE else 0)


def _remark(remark: Remark) -> tuple[str, str]:
    return remark.kind, told(remark.said)
