"""What a sum is, and what it is worked out for."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Literal

from server.calculator.filled import Doubt, Filled
from server.calculator.inputs import Input
from server.calculator.texts import Said
from server.science.constants import Metal
from server.science.processes import Process
from server.storage.plant import SectionPlan, SectionTerms

Numbers = Mapping[str, float]
"""Inputs by their keys, in the units of the keys; what was left out is not in it."""

Need = Literal["efficiency", "lot", "target", "volts", "deviation", "assay"]
"""What a sum wants looked up in the books of a section."""

Place = Literal["figure", "part", "sensitivity"]


@dataclass(frozen=True)
class Basis:
    """What a sum is worked out for: a section of the house, or a process in general.

    `filled` and `doubts` stand in for what is not given, by the key of the input.
    """

    process: Process
    currency: str = ""
    section: SectionPlan | None = None
    terms: SectionTerms | None = None
    table: str | None = None
    """Key of the house's own table of standard potentials."""
    filled: Mapping[str, Filled] = field(default_factory=dict)
    doubts: Mapping[str, Doubt] = field(default_factory=dict)
    usual: Mapping[str, tuple[float, float]] = field(default_factory=dict)
    """What is usual for the process, lowest and highest."""
    choice: str = ""
    """What was chosen of the sum's option, where it has one for this process."""

    @property
    def metal(self) -> Metal:
        """The metal, at the valency of its bath."""
        return self.process.metal


@dataclass(frozen=True)
class Case:
    """A sum's basis and the numbers that are put in."""

    basis: Basis
    values: Numbers

    def has(self, *keys: str) -> bool:
        """Whether all of these are known."""
        return all(key in self.values for key in keys)

    def __getitem__(self, key: str) -> float:
        return self.values[key]


@dataclass(frozen=True)
class Output:
    """One number that a sum gives, its formula and the formula with the numbers put in."""

    key: str
    label: str
    unit: str
    formula: str
    numbers: Said
    """The right-hand side of the formula with its numbers; needs no translation."""
    model: Callable[[Numbers], float]
    place: Place = "figure"
    """A figure by itself, a part of the first figure, or how that answers to an input."""
    note: Said | None = None
    """Where a part comes from, and how sure that is."""
    has_doubt: bool = True
    """Whether its standard uncertainty is worked out."""


@dataclass(frozen=True)
class Remark:
    """What must be known beside a result.

    `range` marks what lies outside the range in which a formula was stated or a value is usual;
    `warning` what cannot be as it stands; `note` the rest.
    """

    kind: Literal["range", "warning", "note"]
    said: Said


@dataclass(frozen=True)
class ModelDoubt:
    """How far a correlation itself is believed: one more input of the budget, that nobody types.

    The output's model finds `estimate` under `key`: a factor of 1 or a difference of 0.
    """

    key: str
    label: str
    estimate: float
    u: float
    unit: str = ""


@dataclass(frozen=True)
class Option:
    """What is chosen from a few beside the numbers, such as the kind of anodes."""

    key: str
    label: str
    choices: Callable[[Process], Mapping[str, str]]
    """Words by the value in an address, the usual one first; empty where there is no choice."""


class NotServed(Exception):
    """The sum has no model for this process."""

    def __init__(self, process: str, served: Sequence[str]) -> None:
        self.process, self.served = process, tuple(served)
        super().__init__(f"no model for {process}; there is one for {', '.join(served)}")


def _no_remarks(_case: Case, _results: Numbers) -> Sequence[Remark]:
    return ()


def _no_doubts(_case: Case) -> Sequence[ModelDoubt]:
    return ()


def _nothing_more(_metal: Metal) -> tuple[str, ...]:
    return ()


def _no_more_sources(_case: Case) -> tuple[str, ...]:
    return ()


def _serves_all(_basis: Basis) -> None:
    return None


@dataclass(frozen=True)
class Sum:
    """One of the sums that a metallurgist does daily."""

    name: str
    """In an address."""
    title: str
    question: str
    """What it answers, as a sentence."""
    formula: str
    """Of the first figure; symbols as in `outputs`."""
    inputs: tuple[Input, ...]
    outputs: Callable[[Case], Sequence[Output]]
    sources: tuple[str, ...]
    needs: frozenset[Need] = frozenset()
    own: Mapping[str, Filled] = field(default_factory=dict)
    """What this sum fills in before anything else, as a day for how much metal a day makes."""
    also_needed: Callable[[Metal], tuple[str, ...]] = _nothing_more
    """Keys that it cannot do without for this metal."""
    results: tuple[str, ...] = ()
    """Keys of what it can give, for the list of sums."""
    model_doubts: Callable[[Case], Sequence[ModelDoubt]] = _no_doubts
    remarks: Callable[[Case, Numbers], Sequence[Remark]] = _no_remarks
    limits: tuple[str, ...] = ()
    """What the formula leaves out."""
    cautions: tuple[str, ...] = ()
    """What may hurt whoever acts on the result."""
    check: Callable[[Basis], None] = _serves_all
    """Raises NotServed where there is no model for the process."""
    option: Option | None = None
    more_sources: Callable[[Case], tuple[str, ...]] = _no_more_sources
    """Sources that depend on what was put in."""
    served: Sequence[str] = ()
    """Names of the processes it has a model for; empty where that is all of them."""

    def input_of(self, key: str) -> Input:
        """The input of this key."""
        return next(found for found in self.inputs if found.key == key)
