"""Which column is which quantity, in which unit, and which columns make up which sheet."""

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from enum import Enum

from server.intake.errors import FileRefused


class Reads(Enum):
    """How the text of a column becomes a value."""

    MOMENT = "moment"
    SECTION = "section"
    CELL = "cell"
    CELLS = "cells"
    NUMBER = "number"
    WHOLE = "whole"
    CHOICE = "choice"
    TEXT = "text"


@dataclass(frozen=True, slots=True)
class Column:
    """One column of a sheet: what it means, and what a value of it can be at all.

    `low` and `high` are hard limits: beyond them a value is not a reading of this
    quantity by any instrument, and the row is held. What is possible but not
    believable is the business of `server.intake.checks`.

    `sane_high` is the largest value that a plant could write down on purpose. It only
    serves to tell decimals from thousands: 2,035 cannot be two thousand volts.
    """

    name: str
    reads: Reads
    quantity: str
    unit: str = ""
    required: bool = True
    blank_allowed: bool = False
    low: float = 0.0
    high: float = 1e6
    sane_high: float | None = None
    choices: tuple[str, ...] = ()

    @property
    def is_numeric(self) -> bool:
        """Whether decimals may stand in it."""
        return self.reads is Reads.NUMBER


@dataclass(frozen=True, slots=True)
class SheetKind:
    """One kind of sheet, with its columns in the order of the contract."""

    name: str
    columns: tuple[Column, ...]

    @property
    def required(self) -> tuple[str, ...]:
        """Names of the columns without which it is not this sheet."""
        return tuple(column.name for column in self.columns if column.required)

    @property
    def names(self) -> tuple[str, ...]:
        """Names of all its columns."""
        return tuple(column.name for column in self.columns)

    def column(self, name: str) -> Column:
        """Look a column up by its name."""
        return next(column for column in self.columns if column.name == name)


def _moment(name: str, quantity: str) -> Column:
    return Column(name, Reads.MOMENT, quantity)


def _assay(name: str, quantity: str, unit: str, high: float, low: float = 0.0) -> Column:
    return Column(
        name, Reads.NUMBER, quantity, unit, required=False, blank_allowed=True, low=low, high=high
    )


_AT = _moment("at", "the moment of the reading")
_SECTION = Column("section", Reads.SECTION, "the section's name")
_CELL = Column("cell", Reads.CELL, "the cell's number", low=1, high=100_000)

# A rectifier of 1000 kA is twice the largest potline; no tank holds a kilogram of metal in
# a litre; molten salt cells run at 960 °C. A scale that reads a million kilograms, or a
# counter beyond 10^12 kAh, is not a scale or a counter.
SHEETS: dict[str, SheetKind] = {
    kind.name: kind
    for kind in (
        SheetKind(
            "current",
            (_AT, _SECTION, Column("current_ka", Reads.NUMBER, "current", "kA", high=1000.0)),
        ),
        SheetKind(
            "counter",
            (
                _AT,
                _SECTION,
                Column("counter_kah", Reads.NUMBER, "ampere-hour counter", "kAh", high=1e12),
            ),
        ),
        SheetKind(
            "volts",
            (
                _AT,
                _SECTION,
                _CELL,
                # Anything a meter can show is taken and judged later; 20 V is more than any
                # cell of any process shows.
                Column("volts", Reads.NUMBER, "cell voltage", "V", low=-1e6, sane_high=20.0),
            ),
        ),
        SheetKind(
            "lots",
            (
                _moment("weighed_at", "the moment of weighing"),
                Column("lot", Reads.TEXT, "the lot's name"),
                _SECTION,
                Column("cells", Reads.CELLS, "the cells of the lot"),
                _moment("pulled_at", "the moment of pulling"),
                # Left out or blank: hung when the former ones were pulled, and all of the
                # cell's cathodes.
                Column(
                    "started_at",
                    Reads.MOMENT,
                    "the moment the cathodes were hung",
                    required=False,
                    blank_allowed=True,
                ),
                Column(
                    "cathodes_per_cell",
                    Reads.WHOLE,
                    "cathodes of one cell",
                    required=False,
                    blank_allowed=True,
                    low=1,
                    high=10_000,
                ),
                Column("net_kg", Reads.NUMBER, "net weight", "kg"),
                Column("starter_kg", Reads.NUMBER, "weight of the starter sheets", "kg"),
            ),
        ),
        SheetKind(
            "outages",
            (
                _SECTION,
                Column("cells", Reads.CELLS, "the cells, none for all", blank_allowed=True),
                _moment("from", "the moment it began"),
                Column("to", Reads.MOMENT, "the moment it ended", blank_allowed=True),
                Column("state", Reads.CHOICE, "the state", choices=("off", "bypassed")),
            ),
        ),
        SheetKind(
            "electrolyte",
            (
                _AT,
                _SECTION,
                Column("stream", Reads.CHOICE, "the stream", choices=("feed", "spent")),
                _assay("metal_g_l", "metal in solution", "g/L", 1000.0),
                _assay("acid_g_l", "free acid", "g/L", 1000.0),
                _assay("iron_g_l", "iron", "g/L", 1000.0),
                _assay("ferric_g_l", "ferric iron", "g/L", 1000.0),
                _assay("chloride_mg_l", "chloride", "mg/L", 1e6),
                _assay("nickel_g_l", "nickel", "g/L", 1000.0),
                _assay("arsenic_g_l", "arsenic", "g/L", 1000.0),
                _assay("antimony_mg_l", "antimony", "mg/L", 1e6),
                _assay("bismuth_mg_l", "bismuth", "mg/L", 1e6),
                _assay("cobalt_mg_l", "cobalt", "mg/L", 1e6),
                _assay("manganese_g_l", "manganese", "g/L", 1000.0),
                _assay("temperature_c", "temperature", "°C", 1200.0, low=-50.0),
                _assay("flow_m3_h", "flow", "m³/h", 1e5),
            ),
        ),
        SheetKind(
            "finds",
            (
                _AT,
                _SECTION,
                _CELL,
                Column(
                    "cathode",
                    Reads.WHOLE,
                    "the cathode's number",
                    required=False,
                    blank_allowed=True,
                    low=1,
                    high=10_000,
                ),
                Column(
                    "found",
                    Reads.CHOICE,
                    "what was found",
                    choices=("short", "contact", "anode", "insulator", "nothing"),
                ),
                Column("action", Reads.TEXT, "what was done", required=False, blank_allowed=True),
            ),
        ),
    )
}

KNOWN_NAMES: frozenset[str] = frozenset(name for kind in SHEETS.values() for name in kind.names)


def canonical(heading: str) -> str:
    """Give a heading as the contract writes it: case and blanks do not matter.

    >>> canonical(" Current kA ")
    'current_ka'
    """
    return "_".join(heading.replace("-", " ").replace("_", " ").casefold().split())


def recognised(header: Sequence[str], *, file: str, line: int, hint: str = "") -> SheetKind:
    """Tell by its columns which sheet this is.

    A kind fits when all its required columns are there (and, for an electrolyte, at
    least one measured one). Of several that fit, the one that knows most of the columns
    is meant; only when they know equally many does the name of the file or of the
    worksheet (`hint`) decide, since names are given by people in a hurry.

    Raises
    ------
    FileRefused
        When a known column stands twice, when no kind fits, or when several fit
        equally well and the name does not help.
    """
    names = [canonical(heading) for heading in header]
    counted = Counter(name for name in names if name in KNOWN_NAMES)
    for name, times in counted.items():
        if times > 1:
            raise FileRefused("column_twice", file=file, line=line, column=name, found=str(times))
    present = set(counted)
    fitting = [kind for kind in SHEETS.values() if _fits(kind, present)]
    if not fitting:
        raise FileRefused(
            "columns",
            file=file,
            line=line,
            found=", ".join(heading.strip() or "(no name)" for heading in header),
            expected=_expected_columns(present, names, hint),
        )
    most = max(len(present & set(kind.names)) for kind in fitting)
    best = [kind for kind in fitting if len(present & set(kind.names)) == most]
    if len(best) > 1:
        best = [kind for kind in best if kind.name in hint.casefold()] or best
    if len(best) > 1:
        raise FileRefused(
            "several_kinds",
            file=file,
            line=line,
            found=" and ".join(kind.name for kind in best),
            expected="the columns of one sheet only",
        )
    return best[0]


def _fits(kind: SheetKind, present: set[str]) -> bool:
    if not set(kind.required) <= present:
        return False
    measured = {column.name for column in kind.columns if column.is_numeric}
    return not measured or bool(measured & present)


def _expected_columns(present: set[str], names: Sequence[str], hint: str) -> str:
    """Name the columns that are missing from the nearest sheet, or all sheets when none is near."""

    def nearness(kind: SheetKind) -> tuple[bool, float]:
        share = len(present & set(kind.required)) / len(kind.required)
        return kind.name in hint.casefold(), share

    nearest = max(SHEETS.values(), key=nearness)
    missing = [name for name in nearest.required if name not in present]
    if nearness(nearest) < (False, 0.5) or not missing:
        every = "; ".join(f"{kind.name}: {', '.join(kind.required)}" for kind in SHEETS.values())
        measured = ", ".join(
            column.name for column in SHEETS["electrolyte"].columns if column.is_numeric
        )
        return f"the columns of one of these sheets: {every} and any of {measured}"
    told = [f"{name}{_misspelt(name, names)}" for name in missing]
    return (
        f"the columns of {nearest.name} ({', '.join(nearest.required)}); missing: {', '.join(told)}"
    )


def _misspelt(name: str, names: Sequence[str]) -> str:
    strangers = [other for other in names if other and other not in KNOWN_NAMES]
    close = get_close_matches(name, strangers, n=1, cutoff=0.6)
    return f" (is “{close[0]}” meant?)" if close else ""
