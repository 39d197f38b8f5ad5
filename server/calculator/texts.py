"""Texts of the sums: marked for the catalogues here, written in a language where they are shown."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

N_: Callable[[str], str] = str
"""Marks a text for the catalogues; whoever shows it looks up its translation."""


@dataclass(frozen=True)
class Day:
    """A day on the tankhouse's clock, by a moment of it."""

    at_ms: int


@dataclass(frozen=True)
class Word:
    """A text within a text, to be translated too."""

    text: str


Part = float | int | str | Day | Word
"""What may stand in a text: a number, a name as it is, a day, another text."""


@dataclass(frozen=True)
class Said:
    """A text with places, such as `%(days)s`, and what stands in them."""

    text: str
    parts: Mapping[str, Part] = field(default_factory=dict)
