"""Lots from the scale into the books."""

from collections.abc import Mapping, Sequence
from typing import Any

from sqlalchemy.orm import Session

from server.intake.cells import cells_text, parse_cells
from server.intake.growth import Growth, Hanging
from server.intake.records import Found, RecordTaker
from server.intake.repeats import written
from server.intake.rows import MISSING, Rows
from server.intake.verdicts import RowFault
from server.intake.volts import cell_of_another_time
from server.storage.lots import effective_lots
from server.storage.plant import SectionPlan
from server.storage.records import Lot
from server.storage.revisions import Key, Revision
from server.storage.stale import mark

LONGEST_GROWTH_MS = 60 * 86_400_000
"""No crop grows for two months, so lots pulled before that have nothing to do with a new one."""

_SHEET_COLUMNS = {
    "weighed_ms": "weighed_at",
    "pulled_ms": "pulled_at",
    "started_ms": "started_at",
}


class LotTaker(RecordTaker):
    """Takes in lots."""

    record = Lot
    moment_column = "pulled_at"

    def begin(self) -> None:
        """Forget which lots there are: others may have written since."""
        self._hanging: dict[int, tuple[int, Hanging]] = {}
        self._changed: dict[Key, Sequence[Revision]] = {}

    def found(self, rows: Rows, place: int, plan: SectionPlan) -> Found:
        """Give a row as a lot."""
        started_ms = int(rows.array("started_at")[place])
        cathodes = int(rows.array("cathodes_per_cell")[place])
        values = {
            "cells": cells_text(rows.items("cells")[place]),
            "weighed_ms": int(rows.array("weighed_at")[place]),
            "pulled_ms": int(rows.array("pulled_at")[place]),
            "started_ms": None if started_ms == MISSING else started_ms,
            "cathodes_per_cell": None if cathodes == MISSING else cathodes,
            "net_kg": float(rows.array("net_kg")[place]),
            "starter_kg": float(rows.array("starter_kg")[place]),
        }
        return Found((plan.id, rows.items("lot")[place]), values, plan)

    def as_written(self, column: str, values: Mapping[str, Any]) -> tuple[str, str]:
        """Give the sheet's column and its text."""
        value = values[column]
        if value is None:
            return _SHEET_COLUMNS.get(column, column), "nothing"
        if column in _SHEET_COLUMNS:
            return _SHEET_COLUMNS[column], self._given.written(value)
        return column, written(value) if isinstance(value, float) else str(value)

    def prepare(self, session: Session, found: Sequence[Found]) -> None:
        """Look up the lots that may have grown at the same time."""
        for plan in {row.plan.id: row.plan for row in found}.values():
            first_ms = min(
                row.values["started_ms"] or row.values["pulled_ms"]
                for row in found
                if row.plan.id == plan.id
            )
            from_ms = first_ms - LONGEST_GROWTH_MS
            if plan.id in self._hanging and self._hanging[plan.id][0] <= from_ms:
                continue
            hanging = Hanging()
            for lot in effective_lots(session, plan.id, from_ms, 2**62):
                numbers = parse_cells(lot.cells)
                most = plan.terms_at(lot.pulled_ms).cathodes_per_cell
                hanging.add(
                    numbers,
                    Growth(lot.pulled_ms, lot.name, lot.started_ms, lot.cathodes_per_cell or most),
                )
            self._hanging[plan.id] = (from_ms, hanging)

    def contradiction(self, row: Found) -> RowFault | None:
        """Tell what speaks against a lot: its cells, cathodes, weight, or other lots."""
        terms = row.plan.terms_at(row.values["pulled_ms"])
        numbers = parse_cells(row.values["cells"])
        cathodes = row.values["cathodes_per_cell"]
        if numbers[-1] > terms.cells:
            return cell_of_another_time(row.plan, numbers[-1], terms.cells)
        if cathodes is not None and cathodes > terms.cathodes_per_cell:
            return RowFault(
                column="cathodes_per_cell",
                found=str(cathodes),
                expected=f"1 to {terms.cathodes_per_cell}",
                reason=(
                    f"cathodes_per_cell {cathodes} is more than hang in a cell of"
                    f" {row.plan.name}; expected 1 to {terms.cathodes_per_cell}."
                ),
            )
        if row.values["net_kg"] <= row.values["starter_kg"]:
            net, starter = written(row.values["net_kg"]), written(row.values["starter_kg"])
            return RowFault(
                column="net_kg",
                found=net,
                expected=f"more than {starter}",
                reason=(
                    f"net_kg {net} leaves no metal beside starter_kg {starter};"
                    f" expected more than {starter}."
                ),
            )
        return self._overlap(row, numbers, terms.cathodes_per_cell)

    def _overlap(self, row: Found, numbers: tuple[int, ...], most: int) -> RowFault | None:
        growth = _growth(row, most)
        found = self._hanging[row.plan.id][1].overlap(numbers, growth, most)
        if found is None:
            return None
        other = (
            f"lot {found.lot} of cell {found.cell} grew until"
            f" {self._given.written(found.pulled_ms)} and took {found.cathodes} of {most} cathodes"
        )
        started_ms = row.values["started_ms"]
        return RowFault(
            column="started_at" if started_ms is not None else "pulled_at",
            found=self._given.written(started_ms or row.values["pulled_ms"]),
            expected=f"cathodes that no other lot has; {other}",
            reason=(
                f"The same cathodes stand in two lots: {other}; this one claims"
                f" {growth.cathodes} in the same time."
            ),
        )

    def accepted(self, row: Found, history: Sequence[Revision]) -> None:
        """Note a lot, for those after it."""
        most = row.plan.terms_at(row.values["pulled_ms"]).cathodes_per_cell
        self._hanging[row.plan.id][1].add(parse_cells(row.values["cells"]), _growth(row, most))
        self._changed[row.key] = history

    def mark_stale(self, session: Session, found: Sequence[Found]) -> None:
        """Mark the time from which crops are worked out anew."""
        for row in found:
            mark_lots(session, row.plan.id, self._changed[row.key])


def mark_lots(session: Session, section_id: int, history: Sequence[Revision]) -> None:
    """Mark the time in which a lot grew, by any of its revisions."""
    from_ms = min(_first_ms(revision.values) for revision in history)
    to_ms = max(int(revision.values["pulled_ms"]) for revision in history)
    mark(session, section_id, "lots", from_ms, to_ms + 1)


def _first_ms(values: Mapping[str, Any]) -> int:
    started_ms = values["started_ms"]
    return int(values["pulled_ms"] if started_ms is None else started_ms)


def _growth(row: Found, most: int) -> Growth:
    return Growth(
        row.values["pulled_ms"],
        row.key[1],
        row.values["started_ms"],
        row.values["cathodes_per_cell"] or most,
    )
