"""The calculator as the API answers it: the sums there are, and one worked out."""

from typing import Literal

from pydantic import ConfigDict
from pydantic.config import JsonDict

from server.web.api.schemas import Answer

INPUT_EXAMPLE: JsonDict = {
    "key": "current_ka",
    "label": "Current",
    "unit": "kA",
    "above": 0.0,
    "lowest": None,
    "highest": 1000.0,
    "is_needed": True,
    "u_key": "u_current_ka",
    "hint": "",
}
SUM_EXAMPLE: JsonDict = {
    "name": "charge-to-mass",
    "title": "Charge to mass",
    "question": "How much metal a charge makes, by Faraday's law.",
    "formula": "m = K · I · t · N · η",
    "inputs": [INPUT_EXAMPLE],
    "results": ["made_kg", "theoretical_kg", "cell_kah", "acid_kg"],
    "processes": [],
    "option": None,
    "sources": ["M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77: m = Q M / (z F)"],
    "limits": [],
    "cautions": [],
}


class CalculatorInput(Answer):
    """One number that a sum is worked out of."""

    model_config = ConfigDict(json_schema_extra={"example": INPUT_EXAMPLE})

    key: str
    """Name of the parameter; its unit stands at the end."""
    label: str
    unit: str
    above: float | None
    """It must lie above this number; null where `lowest` says from where on."""
    lowest: float | None
    highest: float
    is_needed: bool
    """Whether there is no answer without it; it may still be filled in by the plant's value."""
    u_key: str | None
    """Parameter of its standard uncertainty, in the same unit; null for what is counted."""
    hint: str


class CalculatorSum(Answer):
    """One sum: what it asks for, its formula and where that is from."""

    model_config = ConfigDict(json_schema_extra={"example": SUM_EXAMPLE})

    name: str
    """Last part of the path."""
    title: str
    question: str
    """What it answers."""
    formula: str
    inputs: list[CalculatorInput]
    results: list[str]
    """Keys of what it can give; the first is the one that was asked for."""
    processes: list[str]
    """The processes it has a model for; empty where that is all of them."""
    option: str | None
    """Parameter that chooses from a few, such as the kind of anodes."""
    sources: list[str]
    limits: list[str]
    """What the formula leaves out."""
    cautions: list[str]
    """What may hurt whoever acts on the result."""


class CalculatorSums(Answer):
    """Every sum of the calculator."""

    model_config = ConfigDict(json_schema_extra={"example": {"sums": [SUM_EXAMPLE]}})

    sums: list[CalculatorSum]


class CalculatorPutIn(Answer):
    """An input as it went into the sum."""

    key: str
    label: str
    unit: str
    value: float | None
    """Null where it was left out."""
    u: float | None
    """Standard uncertainty; null for what is counted."""
    origin: str
    """Where the value is from: typed, the set-up, an assay, or typical."""
    u_origin: str
    is_typed: bool


class CalculatorShare(Answer):
    """How much of the variance of a result is from one input."""

    key: str
    """Of an input, or of a correlation whose own doubt counts."""
    label: str
    share_pct: float


class CalculatorResult(Answer):
    """One result with its standard uncertainty."""

    key: str
    label: str
    unit: str
    value: float | None
    u: float | None
    """Standard uncertainty; twice it covers about 95 %."""
    formula: str
    working: str
    """The formula with the numbers put in."""
    place: Literal["figure", "part", "sensitivity"]
    """A figure by itself, a part of the first figure, or how that answers to an input."""
    share_pct: float | None
    """For a part: its share of the first figure."""
    note: str
    """Where a part is from, and how sure that is."""
    budget: list[CalculatorShare]
    """The inputs' shares of its variance, the largest first."""


class CalculatorRemark(Answer):
    """What must be known beside a result."""

    kind: Literal["range", "warning", "note"]
    """`range`: outside the stated or usual range; `warning`: cannot be as it stands."""
    text: str


class CalculatorAnswer(Answer):
    """A sum worked out, with all that it takes to follow it by hand."""

    model_config = ConfigDict(
        json_schema_extra={
            "example": {
                "name": "charge-to-mass",
                "title": "Charge to mass",
                "section": "A",
                "process": "copper electrowinning",
                "metal": "Cu",
                "electrons": 2,
                "choice": "",
                "inputs": [
                    {
                        "key": "current_ka",
                        "label": "Current",
                        "unit": "kA",
                        "value": 30.0,
                        "u": 0.0866,
                        "origin": "typed",
                        "u_origin": "accuracy in the set-up, a limit",
                        "is_typed": True,
                    }
                ],
                "results": [
                    {
                        "key": "made_kg",
                        "label": "metal made",
                        "unit": "kg",
                        "value": 47116.28,
                        "u": 136.0,
                        "formula": "m = K · I · t · N · η",
                        "working": "1.18549 kg/kAh × 30 kA × 24 h × 60 × 0.92 = 47 116.3 kg",
                        "place": "figure",
                        "share_pct": None,
                        "note": "",
                        "budget": [{"key": "current_ka", "label": "Current", "share_pct": 100.0}],
                    }
                ],
                "remarks": [],
                "sources": ["M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77: m = Q M / (z F)"],
                "limits": [],
                "cautions": [],
                "link": "/calculator/charge-to-mass?section=A&current_ka=30",
            }
        }
    )

    name: str
    title: str
    section: str | None
    """Null where a process stands in for a section."""
    process: str
    metal: str
    electrons: int
    choice: str
    """What was chosen of the sum's option; empty where it has none."""
    inputs: list[CalculatorPutIn]
    results: list[CalculatorResult]
    remarks: list[CalculatorRemark]
    sources: list[str]
    limits: list[str]
    cautions: list[str]
    link: str
    """The page with the same inputs."""
