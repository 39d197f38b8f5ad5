"""How one file writes its fields and numbers: decided once, from evidence, and stated."""

import csv
import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from server.intake.columns import KNOWN_NAMES, Column, canonical
from server.intake.errors import FileRefused

DELIMITERS = {",": "commas", ";": "semicolons", "\t": "tabs"}
_DELIMITER_NAMES = {",": "comma", ";": "semicolon", "\t": "tab"}
_MARK_NAMES = {".": "point", ",": "comma"}

SLIPS_ALLOWED = 0.05
"""Share of numbers that may carry the other mark before the file is called mixed.

A person who typed a point into one of a few hundred rows has slipped, and that row is
held; a file in which one number in twenty or more differs was put together from two
sources, and no row of it can be trusted to mean what it seems to mean.
"""

_ONE_MARK = re.compile(r"[+-]?(?P<whole>\d*)(?P<mark>[.,])(?P<decimals>\d*)(?:[eE][+-]?\d+)?")
_GROUPS = re.compile(r"[+-]?[1-9]\d{0,2}(?P<mark>[.,])\d{3}")
_MANY_GROUPS = re.compile(r"[+-]?\d{1,3}(?P<mark>[.,])\d{3}(?:(?P=mark)\d{3})+")
_BOTH = re.compile(r"[+-]?\d{1,3}(?:(?P<group>[.,])\d{3})+(?P<mark>[.,])\d*")


@dataclass(frozen=True, slots=True)
class Dialect:
    """What separates the fields and which mark stands before decimals, with the evidence.

    `delimiter` is empty for a worksheet. `evidence` is the number in the file that settled
    the decimal mark and `evidence_line` its line; both are empty where no number had decimals.
    """

    delimiter: str
    decimal: str
    encoding_mark: bool = False
    evidence: str = ""
    evidence_line: int | None = None
    rows_seen: int = 0
    worksheet: str | None = None

    @property
    def sentence(self) -> str:
        """The dialect as a person reads it."""
        if self.worksheet is not None:
            fields = f"Worksheet “{self.worksheet}” of an Excel workbook"
            if not self.evidence:
                return f"{fields}; numbers as Excel holds them."
            return (
                f"{fields}; numbers that are typed as text have a decimal"
                f" {_MARK_NAMES[self.decimal]}, as in {self.evidence} in row {self.evidence_line}."
            )
        mark = " with a byte order mark" if self.encoding_mark else ""
        fields = f"UTF-8 text{mark}, fields separated by {DELIMITERS[self.delimiter]}"
        if not self.rows_seen:
            return f"{fields}."
        if not self.evidence:
            return (
                f"{fields}; no number with decimals in the first {self.rows_seen} rows, so a"
                f" decimal {_MARK_NAMES[self.decimal]} is assumed."
            )
        return (
            f"{fields}, decimal {_MARK_NAMES[self.decimal]}, as in {self.evidence}"
            f" in line {self.evidence_line}."
        )


def delimiter_of(header_line: str, *, file: str, line: int) -> str:
    """Tell what separates the fields, by which separator brings known columns to light.

    The header is the only line that must hold known words, so it decides alone: rows may
    hold any of the marks within numbers, cell lists and remarks.

    Raises
    ------
    FileRefused
        When two separators bring equally many known columns to light.
    """
    found = {
        delimiter: sum(
            canonical(heading) in KNOWN_NAMES for heading in split_line(header_line, delimiter)
        )
        for delimiter in DELIMITERS
    }
    most = max(found.values())
    best = [delimiter for delimiter, known in found.items() if known == most]
    if len(best) == 1:
        return best[0]
    if most > 1:
        raise FileRefused(
            "delimiter",
            file=file,
            line=line,
            found=f"{' or '.join(_DELIMITER_NAMES[delimiter] for delimiter in best)}",
            expected="one separator in the whole header",
        )
    # Nothing is known of this header, which is then refused for its columns; the separator
    # that occurs most often shows them best.
    return max(best, key=header_line.count)


def split_line(line: str, delimiter: str) -> list[str]:
    """Take one line apart, quotation marks as in RFC 4180."""
    return next(csv.reader([line], delimiter=delimiter), [])


@dataclass(slots=True)
class _Evidence:
    """Numbers that settle the mark, and numbers that could be decimals or thousands."""

    first: dict[str, tuple[str, int]] = field(default_factory=dict)
    clear: dict[str, int] = field(default_factory=lambda: {".": 0, ",": 0})
    unclear: dict[str, tuple[str, int, str]] = field(default_factory=dict)

    def note(self, text: str, line: int, column: Column) -> None:
        """Count one number for what it shows."""
        if "." not in text and "," not in text:
            return
        mark = decimal_mark_shown(text, column)
        if mark:
            self.clear[mark] += 1
            self.first.setdefault(mark, (text, line))
        elif grouped := _GROUPS.fullmatch(text):
            self.unclear.setdefault(grouped["mark"], (text, line, column.name))


def decimal_mark_shown(text: str, column: Column) -> str | None:
    """Tell which decimal mark one number proves, or None where it proves nothing.

    `2,03` and `0,295` can only have a decimal comma. `1.234,5` has one too, and
    `1,234,567` proves a decimal point, since only the thousands' mark is repeated. `2,035`
    could be two thousand and thirty-five, unless so much cannot stand in the column:
    there are no cells of two thousand volts.

    >>> from server.intake.columns import SHEETS
    >>> decimal_mark_shown("2,035", SHEETS["volts"].column("volts"))
    ','
    >>> decimal_mark_shown("2,857", SHEETS["lots"].column("net_kg")) is None
    True
    """
    if many := _MANY_GROUPS.fullmatch(text):
        return "." if many["mark"] == "," else ","
    if both := _BOTH.fullmatch(text):
        return both["mark"] if both["mark"] != both["group"] else None
    one = _ONE_MARK.fullmatch(text)
    if not one or not (one["whole"] or one["decimals"]):
        return None
    if not _GROUPS.fullmatch(text):
        return one["mark"]
    as_thousands = float(one["whole"] + one["decimals"])
    sane_high = column.high if column.sane_high is None else column.sane_high
    return one["mark"] if as_thousands > sane_high else None


def decimals_of(
    sample: Iterable[tuple[int, Sequence[str]]],
    columns: Sequence[Column | None],
    *,
    delimiter: str,
    file: str,
) -> tuple[str, str, int | None, int]:
    """Tell the decimal mark of a file from a sample of its rows (line, fields).

    Gives the mark, the number that shows it, its line and the number of rows seen. Numbers
    that prove their mark decide. Failing those, a number such as `35.959` is taken by the
    habit that goes with the separator: a point among commas, and a comma among semicolons,
    which are used where the comma is taken. Against that habit it is not guessed.

    Raises
    ------
    FileRefused
        When both marks are proven too often for a slip, or when nothing but numbers
        against the habit are to be seen.
    """
    evidence, rows_seen = _Evidence(), 0
    numeric = [(i, column) for i, column in enumerate(columns) if column and column.is_numeric]
    for line, fields in sample:
        rows_seen += 1
        for i, column in numeric:
            if i < len(fields):
                evidence.note(fields[i].strip(), line, column)
    habit = {",": ".", ";": ","}.get(delimiter)
    if not numeric:
        return habit or ".", "", None, 0
    clear = evidence.clear
    if clear["."] or clear[","]:
        major, minor = (".", ",") if clear["."] >= clear[","] else (",", ".")
        if clear[minor] > SLIPS_ALLOWED * (clear[major] + clear[minor]):
            shown = " and ".join(
                f"{text} in line {line}"
                for text, line in (evidence.first[major], evidence.first[minor])
            )
            raise FileRefused(
                "decimals_mixed",
                file=file,
                line=evidence.first[minor][1],
                found=shown,
                expected="the same decimal mark in the whole file",
            )
        return major, *evidence.first[major], rows_seen
    if not evidence.unclear:
        return habit or ".", "", None, rows_seen
    if habit in evidence.unclear and len(evidence.unclear) == 1:
        text, line, _ = evidence.unclear[habit]
        return habit, text, line, rows_seen
    text, line, name = next(iter(evidence.unclear.values()))
    raise FileRefused(
        "decimals_unclear",
        file=file,
        line=line,
        column=name,
        found=text,
        expected=(
            "numbers without thousands separators, at least one of which has other than three"
            " decimals, or fields separated by commas with decimal points"
        ),
    )
