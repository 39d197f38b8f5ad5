"""What people type and programs send in forms, made safe to keep: lines of text, row numbers."""

from collections.abc import Iterable

_LONGEST_NUMBER = 15
"""Digits of a row's number; what is longer names no row."""

LONGEST_LINE = 500


def one_line(text: str, most: int = LONGEST_LINE) -> str:
    """The text as one line: no control characters, single blanks, no longer than `most`."""
    kept = "".join(letter if letter.isprintable() else " " for letter in text)
    return " ".join(kept.split())[:most]


def whole_numbers(texts: Iterable[object]) -> list[int]:
    """The whole numbers among these texts; what is none is left out."""
    return [number for text in texts if (number := whole_number(str(text))) is not None]


def whole_number(text: str) -> int | None:
    """The whole number of a text, zero or more; None where it is none."""
    text = text.strip()
    if text.isascii() and text.isdecimal() and len(text) <= _LONGEST_NUMBER:
        return int(text)
    return None
