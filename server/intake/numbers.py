"""Text to finite numbers in the file's dialect, and what is wrong with those that are none."""

import re
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from server.intake.columns import Column
from server.intake.errors import Fault
from server.intake.rows import MISSING

Numbers = NDArray[np.float64]
Whole = NDArray[np.int64]

_PLAIN = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,3})?", re.ASCII)
_THOUSANDS = re.compile(
    r"[+-]?\d{1,3}(?:(?P<mark>[ .,'’_\u00a0\u2009\u202f])\d{3})(?:(?P=mark)\d{3})*"
    r"(?:[.,]\d*)?",
    re.ASCII,
)
_NOT_FINITE = re.compile(r"[+-]?(?:nan|inf|infinity|1\.#\w+|∞)", re.IGNORECASE)
_MARKS = {".": "point", ",": "comma"}
_WHOLE_DIGITS = 15
"""Whole numbers of more digits are not kept exactly by a double."""


def read_numbers(
    texts: Sequence[str], column: Column, decimal: str
) -> tuple[Numbers, dict[int, Fault]]:
    """Read the numbers of one column; gives them, and by position what is wrong with the others.

    A blank that is allowed, and a number that cannot be read, are NaN. As long as all the
    texts are plain, they are read in one go; Python's `float` would also take `1_000`,
    digits of other scripts, `nan` and `inf`, so those send the column to the slow way, as
    does any text that is no number.
    """
    joined = "\n".join(texts)
    if joined.isascii() and "_" not in joined and (decimal == "." or "." not in joined):
        plain = joined.replace(",", ".").split("\n") if decimal == "," else texts
        if len(plain) == len(texts):
            try:
                values = np.fromiter(map(float, plain), dtype=np.float64, count=len(texts))
            except ValueError:
                pass
            else:
                if np.isfinite(values).all():
                    return values, _out_of_limits(values, texts, column, decimal)
    return _one_by_one(texts, column, decimal)


def read_whole(
    texts: Sequence[str], column: Column, decimal: str
) -> tuple[Whole, dict[int, Fault]]:
    """Read whole numbers; what is missing or cannot be read is MISSING."""
    joined = "".join(texts)
    if joined.isascii() and joined.isdigit() and len(joined) <= _WHOLE_DIGITS * len(texts):
        try:
            # Cells are few and come again and again: each text is read once.
            known = {text: int(text) for text in set(texts)}
            whole = np.fromiter(map(known.__getitem__, texts), dtype=np.int64, count=len(texts))
        except (ValueError, OverflowError):
            pass
        else:
            faults = _out_of_limits(whole, texts, column, decimal)
            whole[list(faults)] = MISSING
            return whole, faults
    values, faults = _one_by_one(texts, column, decimal)
    for i in np.flatnonzero(np.isfinite(values) & (values != np.round(values))).tolist():
        faults[i] = Fault("not_whole", texts[i], wanted(column, decimal))
    whole = np.full(len(texts), MISSING, dtype=np.int64)
    is_good = np.isfinite(values)
    is_good[list(faults)] = False
    whole[is_good] = values[is_good].astype(np.int64)
    return whole, faults


def wanted(column: Column, decimal: str) -> str:
    """Say in a phrase what a column takes.

    >>> from server.intake.columns import SHEETS
    >>> wanted(SHEETS["current"].column("current_ka"), ".")
    'current in kA from 0 to 1000, with a decimal point'
    """
    what = f"{column.quantity} in {column.unit}" if column.unit else column.quantity
    kind = "" if column.is_numeric else ", a whole number"
    mark = f", with a decimal {_MARKS[decimal]}" if column.is_numeric else ""
    return f"{what}{kind} from {column.low:.12g} to {column.high:.12g}{mark}"


def _out_of_limits(
    values: Numbers | Whole, texts: Sequence[str], column: Column, decimal: str
) -> dict[int, Fault]:
    faults: dict[int, Fault] = {}
    for code, is_out in (("too_low", values < column.low), ("too_high", values > column.high)):
        for i in np.flatnonzero(is_out).tolist():
            faults[i] = Fault(code, texts[i], wanted(column, decimal))
    if faults and values.dtype == np.float64:
        values[list(faults)] = np.nan
    return faults


def _one_by_one(
    texts: Sequence[str], column: Column, decimal: str
) -> tuple[Numbers, dict[int, Fault]]:
    values = np.full(len(texts), np.nan)
    faults: dict[int, Fault] = {}
    seen: dict[str, float | str] = {}
    for i, text in enumerate(texts):
        found = seen.get(text)
        if found is None:
            found = seen[text] = _number_or_code(text, decimal, column)
        if isinstance(found, str):
            faults[i] = Fault(found, text, wanted(column, decimal))
        else:
            values[i] = found
    faults.update(_out_of_limits(values, texts, column, decimal))
    return values, faults


def _number_or_code(text: str, decimal: str, column: Column) -> float | str:
    """Give the number, or the code of what is wrong with the text."""
    stripped = text.strip()
    if not stripped:
        return float("nan") if column.blank_allowed else "empty"
    other = "." if decimal == "," else ","
    if other not in stripped:
        plain = stripped.replace(decimal, ".") if decimal == "," else stripped
        if _PLAIN.fullmatch(plain):
            value = float(plain)
            return value if np.isfinite(value) else "not_finite"
    if _NOT_FINITE.fullmatch(stripped):
        return "not_finite"
    if _PLAIN.fullmatch(stripped.replace(other, ".")) and decimal not in stripped:
        # 1,234 in a file with decimal points is more likely thousands than a decimal comma.
        return "thousands" if _THOUSANDS.fullmatch(stripped) else "decimal_mark"
    return "thousands" if _THOUSANDS.fullmatch(stripped) else "not_a_number"
