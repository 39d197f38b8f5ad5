"""Rows that cannot be taken, kept word for word, each once however often it is sent."""

import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.intake.chunks import Chunk
from server.intake.columns import SHEETS
from server.intake.rows import Rows
from server.intake.verdicts import Verdicts
from server.storage.delivery_rows import Held, held_before

_DECIDED = {"dropped": "was dropped", "mended": "was mended"}


@dataclass(frozen=True, slots=True)
class Holding:
    """The rows of a chunk that are held, and those that were dealt with before."""

    new: tuple[Held, ...]
    """Rows to be kept."""
    again: tuple[Held, ...]
    """Rows that are held already."""
    decided: Mapping[int, str]
    """By line: what somebody decided of the same row before."""


def held_of(chunk: Chunk, rows: Rows, verdicts: Verdicts, decimal: str) -> list[Held]:
    """Every row of a chunk that cannot be taken, in the order of the file.

    The fields are put down with a decimal point, however the file writes decimals, so that
    they are read alike when somebody mends them.
    """
    numeric = {column.name for column in SHEETS[rows.kind].columns if column.is_numeric}

    def as_json(fields: Mapping[str, str]) -> str:
        pointed = {
            name: text.replace(decimal, ".") if name in numeric else text
            for name, text in fields.items()
        }
        return json.dumps(pointed, ensure_ascii=False)

    held = [
        Held(
            line=error.line,
            column=error.column or "",
            found=error.found,
            expected=error.expected,
            reason=error.reason,
            fields=as_json(error.fields),
            raw=error.raw,
        )
        for error in rows.errors
    ]
    for place, fault in verdicts.faults.items():
        position = int(rows.index[place])
        held.append(
            Held(
                line=int(rows.lines[place]),
                column=fault.column,
                found=fault.found,
                expected=fault.expected,
                reason=fault.reason,
                fields=as_json(chunk.fields(position)),
                raw=chunk.raw[position],
            )
        )
    return sorted(held, key=lambda row: row.line)


def sorted_out(session: Session, sheet: str, held: Sequence[Held]) -> Holding:
    """Tell the rows that are new from those that were held before in the same words."""
    if not held:
        return Holding((), (), {})
    before = held_before(session, sheet, [row.raw for row in held])
    new: dict[tuple[str, str], Held] = {}
    again: list[Held] = []
    decided: dict[int, str] = {}
    for row in held:
        key = (row.raw, row.fields)
        if key in before and before[key][1] in _DECIDED:
            _, state, by, why = before[key]
            decided[row.line] = f"The same row {_DECIDED[state]} by {by}" + (
                f": {why}" if why else "."
            )
        elif key in before or key in new:
            again.append(row)
        else:
            new[key] = row
    return Holding(tuple(new.values()), tuple(again), decided)
