"""A chunk of text to arrays of values; rows with a fault come out as row errors instead."""

from collections.abc import Callable, Mapping, Sequence
from difflib import get_close_matches
from typing import Any
from zoneinfo import ZoneInfo

import numpy as np
from numpy.typing import NDArray

from server.intake.cells import CELLS_FORM, parse_cells
from server.intake.chunks import Chunk
from server.intake.columns import SHEETS, Column, Reads, SheetKind
from server.intake.errors import CellsWrong, Fault, RowError, row_reason
from server.intake.numbers import read_numbers, read_whole
from server.intake.rows import MISSING, Rows
from server.intake.times import TimeReader

Faults = dict[int, list[tuple[str, Fault]]]

_CONTROL = {c: None for c in range(32) if chr(c) not in "\n\t"} | {127: None}
_LONGEST_NAME = 200


class Converter:
    """Turns the chunks of one sheet into values.

    `cells_in` gives the number of cells of every section by its name; with it, sections and
    cells that do not exist are row errors. A section's name is found whatever its case, as
    long as that leads to one section only. `section_names` grows from chunk to chunk and
    never changes its order, so a code can be looked up once and for all.
    """

    def __init__(
        self,
        kind: str,
        *,
        zone: ZoneInfo,
        now_ms: int,
        decimal: str = ".",
        cells_in: Mapping[str, int] | None = None,
        file: str = "",
    ) -> None:
        self.kind: SheetKind = SHEETS[kind]
        self.section_names: list[str] = []
        self._times = TimeReader(zone, now_ms)
        self._decimal = decimal
        self._cells_in = cells_in
        self._file = file
        self._codes: dict[str, int] = {}
        self._code_of_name: dict[str, int] = {}
        self._section_faults: dict[str, Fault] = {}
        self._readers: dict[Reads, Callable[[Sequence[str], Column], tuple[Any, dict[int, Fault]]]]
        self._readers = {
            Reads.MOMENT: self._moments,
            Reads.SECTION: self._sections,
            Reads.CELL: lambda texts, column: read_whole(texts, column, self._decimal),
            Reads.WHOLE: lambda texts, column: read_whole(texts, column, self._decimal),
            Reads.NUMBER: lambda texts, column: read_numbers(texts, column, self._decimal),
            Reads.CELLS: _cell_lists,
            Reads.CHOICE: _choices,
            Reads.TEXT: _texts,
        }

    def convert(self, chunk: Chunk) -> Rows:
        """Read every column of a chunk and tell the good rows from the others."""
        values: dict[str, Any] = {}
        faults: Faults = {}
        for column in self.kind.columns:
            texts = chunk.columns.get(column.name)
            if texts is None:
                values[column.name] = _missing(column, len(chunk))
                continue
            values[column.name], found = self._readers[column.reads](texts, column)
            for i, fault in found.items():
                faults.setdefault(i, []).append((column.name, fault))
        self._check_rows(chunk, values, faults)
        errors = [*chunk.errors, *self._errors(chunk, faults)]
        errors.sort(key=lambda error: error.line)
        if not faults:
            index = np.arange(len(chunk), dtype=np.int64)
            return Rows(self.kind.name, index, chunk.lines, values, errors)
        is_good = np.ones(len(chunk), dtype=bool)
        is_good[list(faults)] = False
        index = np.flatnonzero(is_good)
        kept = {
            name: column[index]
            if isinstance(column, np.ndarray)
            else [column[i] for i in index.tolist()]
            for name, column in values.items()
        }
        return Rows(self.kind.name, index, chunk.lines[index], kept, errors)

    def _errors(self, chunk: Chunk, faults: Faults) -> list[RowError]:
        errors = []
        for i in sorted(faults):
            column, first = faults[i][0]
            reason = " ".join(
                row_reason(fault.code, column=name, found=fault.found, expected=fault.expected)
                for name, fault in faults[i]
            )
            errors.append(
                RowError(
                    self._file,
                    int(chunk.lines[i]),
                    column,
                    first.code,
                    first.found,
                    first.expected,
                    reason,
                    chunk.raw[i],
                    chunk.fields(i),
                )
            )
        return errors

    def _moments(
        self, texts: Sequence[str], column: Column
    ) -> tuple[NDArray[np.int64], dict[int, Fault]]:
        moments, faults = self._times.read(texts)
        if column.blank_allowed:
            faults = {i: fault for i, fault in faults.items() if texts[i].strip()}
        return moments, faults

    def _sections(
        self, texts: Sequence[str], column: Column
    ) -> tuple[NDArray[np.int32], dict[int, Fault]]:
        try:
            codes = self._codes_of(texts)
        except KeyError:
            # In the order of the file, so that the same file always gives the same codes.
            for text in dict.fromkeys(texts):
                if text not in self._codes:
                    self._learn_section(text)
            codes = self._codes_of(texts)
        unknown = np.flatnonzero(codes < 0).tolist()
        return codes, {i: self._section_faults[texts[i]] for i in unknown}

    def _codes_of(self, texts: Sequence[str]) -> NDArray[np.int32]:
        return np.fromiter(map(self._codes.__getitem__, texts), dtype=np.int32, count=len(texts))

    def _learn_section(self, text: str) -> None:
        name = " ".join(text.split())
        if not name:
            return self._refuse_section(text, "empty", "the section's name")
        if len(name) > _LONGEST_NAME or name != name.translate(_CONTROL):
            return self._refuse_section(text, "control", "a name")
        if self._cells_in is not None and name not in self._cells_in:
            alike = [known for known in self._cells_in if known.casefold() == name.casefold()]
            if len(alike) != 1:
                return self._refuse_section(text, "section_unknown", self._sections_known(name))
            name = alike[0]
        if name not in self._code_of_name:
            self._code_of_name[name] = len(self.section_names)
            self.section_names.append(name)
        self._codes[text] = self._code_of_name[name]
        return None

    def _refuse_section(self, text: str, code: str, expected: str) -> None:
        self._codes[text] = -1
        self._section_faults[text] = Fault(code, text, expected)

    def _sections_known(self, name: str) -> str:
        known = list(self._cells_in or ())
        close = get_close_matches(name, known, n=1, cutoff=0.6)
        hint = f", perhaps {close[0]}" if close else ""
        return f"one of {', '.join(known) or 'the plant’s sections (it has none)'}{hint}"

    def _check_rows(self, chunk: Chunk, values: dict[str, Any], faults: Faults) -> None:
        """Check what only shows when two columns of a row are seen together."""

        def note(name: str, is_wrong: NDArray[np.bool_], code: str, expected: str) -> None:
            for i in np.flatnonzero(is_wrong).tolist():
                if i not in faults:
                    fault = Fault(code, chunk.columns[name][i], expected)
                    faults.setdefault(i, []).append((name, fault))

        if self._cells_in is not None:
            self._check_cells(values, faults)
        match self.kind.name:
            case "lots":
                weighed, pulled = values["weighed_at"], values["pulled_at"]
                started = values["started_at"]
                note("started_at", started >= pulled, "order", "a time before pulled_at")
                note("pulled_at", pulled > weighed, "order", "a time not after weighed_at")
                is_more = values["starter_kg"] > values["net_kg"]
                note("starter_kg", is_more, "order", "not more than net_kg")
            case "outages":
                begun, ended = values["from"], values["to"]
                note("to", (ended != MISSING) & (ended <= begun), "order", "a time after from")
            case "electrolyte":
                measured = [
                    values[column.name] for column in self.kind.columns if column.is_numeric
                ]
                is_bare = np.all(np.isnan(measured), axis=0)
                for i in np.flatnonzero(is_bare).tolist():
                    if i not in faults:
                        expected = "a value in at least one of the measured columns"
                        faults[i] = [("metal_g_l", Fault("no_values", "", expected))]
            case _:
                pass

    def _check_cells(self, values: dict[str, Any], faults: Faults) -> None:
        assert self._cells_in is not None
        last_cells = np.array([self._cells_in[name] for name in self.section_names] or [0])
        codes = values["section"]
        last = last_cells[np.maximum(codes, 0)]
        if "cell" in values:
            is_beyond = (values["cell"] > last) & (codes >= 0)
            for i in np.flatnonzero(is_beyond).tolist():
                fault = Fault("cell_unknown", str(values["cell"][i]), f"a cell from 1 to {last[i]}")
                faults.setdefault(i, []).append(("cell", fault))
        if "cells" in values:
            for i, numbers in enumerate(values["cells"]):
                if numbers and codes[i] >= 0 and numbers[-1] > last[i]:
                    fault = Fault("cells_beyond", str(numbers[-1]), f"cells from 1 to {last[i]}")
                    faults.setdefault(i, []).append(("cells", fault))


def _missing(column: Column, rows: int) -> NDArray[Any] | list[Any]:
    match column.reads:
        case Reads.NUMBER:
            return np.full(rows, np.nan)
        case Reads.MOMENT | Reads.WHOLE | Reads.CELL:
            return np.full(rows, MISSING, dtype=np.int64)
        case Reads.CELLS:
            return [()] * rows
        case _:
            return [""] * rows


def _cell_lists(
    texts: Sequence[str], column: Column
) -> tuple[list[tuple[int, ...]], dict[int, Fault]]:
    lists: list[tuple[int, ...]] = []
    faults: dict[int, Fault] = {}
    for i, text in enumerate(texts):
        numbers: tuple[int, ...] = ()
        try:
            numbers = parse_cells(text)
        except CellsWrong as wrong:
            faults[i] = wrong.fault
        else:
            if not numbers and not column.blank_allowed:
                faults[i] = Fault("empty", text, CELLS_FORM)
        lists.append(numbers)
    return lists, faults


def _choices(texts: Sequence[str], column: Column) -> tuple[list[str], dict[int, Fault]]:
    chosen = [text.strip().casefold() for text in texts]
    expected = f"one of {', '.join(column.choices)}"
    faults = {
        i: Fault("choice" if choice else "empty", texts[i], expected)
        for i, choice in enumerate(chosen)
        if choice not in column.choices
    }
    return chosen, faults


def _texts(texts: Sequence[str], column: Column) -> tuple[list[str], dict[int, Fault]]:
    stripped = [text.strip() for text in texts]
    faults: dict[int, Fault] = {}
    for i, text in enumerate(stripped):
        if not text and not column.blank_allowed:
            faults[i] = Fault("empty", texts[i], column.quantity)
        elif text != text.translate(_CONTROL):
            faults[i] = Fault("control", text.translate(_CONTROL), "plain text")
    return stripped, faults
