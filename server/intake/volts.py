"""Voltages into the books: what is new, what is known, what contradicts, what is not believed."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.intake.belief import Belief
from server.intake.explain import SuspicionCode
from server.intake.repeats import settle_repeats, written
from server.intake.rows import Rows
from server.intake.stretches import mark_moments
from server.intake.verdicts import Given, Outcome, RowFault, Verdicts, stored_otherwise
from server.science.units import microvolts_from_volts, volts_from_microvolts
from server.storage import readings
from server.storage.delivery_rows import Doubt
from server.storage.plant import SectionPlan
from server.storage.suspicions import decide_suspicions

Whole = NDArray[np.int64]

_NEVER_MS = -(2**62)


class VoltsTaker:
    """Takes in voltages. Rows may come in any order; by cell and time is the quickest."""

    def __init__(self, given: Given, section_names: list[str]) -> None:
        self._given = given
        self._names = section_names
        self._belief = Belief(given)

    def begin(self) -> None:
        """Nothing is kept that others may have changed since the last transaction."""

    def moments(self, rows: Rows) -> Whole:
        """The moment of each reading."""
        return rows.array("at")

    def judge(self, session: Session, rows: Rows) -> Verdicts:
        """Decide on every reading."""
        verdicts = Verdicts.of(len(rows))
        if not len(rows):
            return verdicts
        plans = self._given.plans(self._names)
        code, number, at_ms = rows.array("section"), rows.array("cell"), rows.array("at")
        cell_id = cells_of(plans, code, number)
        microvolts = microvolts_from_volts(rows.array("volts"))
        self._hold_cells_of_other_times(plans, rows, verdicts)
        order = _by_cell_and_time(cell_id, at_ms)
        is_same = (np.diff(cell_id[order]) == 0) & (np.diff(at_ms[order]) == 0)
        order = settle_repeats(rows, verdicts, order, is_same, "volts", microvolts)
        order = order[verdicts.outcome[order] == Outcome.NEW]
        self._settle_known(session, cell_id, at_ms, microvolts, order, verdicts)
        order = order[verdicts.outcome[order] == Outcome.NEW]
        for place, plan in enumerate(plans):
            mine = order[code[order] == place]
            if len(mine):
                self._doubt(session, plan, rows, mine, verdicts)
        return verdicts

    def write(self, session: Session, rows: Rows, verdicts: Verdicts, delivery_id: int) -> None:
        """Write the new readings, cell by cell in order of time."""
        new = verdicts.new
        if not len(new):
            return
        plans = self._given.plans(self._names)
        code, at_ms = rows.array("section")[new], rows.array("at")[new]
        cell_id = cells_of(plans, code, rows.array("cell")[new])
        suspect = np.zeros(len(rows), np.int64)
        suspect[list(verdicts.doubts)] = [
            int(SuspicionCode[doubt.code.upper()]) for doubt in verdicts.doubts.values()
        ]
        readings.store(
            session,
            cell_id,
            at_ms,
            verdicts.revision[new],
            microvolts_from_volts(rows.array("volts")[new]),
            suspect[new],
            delivery_id,
        )
        is_changed = verdicts.revision[new] > 0
        if is_changed.any():
            decide_suspicions(
                session,
                zip(cell_id[is_changed].tolist(), at_ms[is_changed].tolist(), strict=True),
                "corrected",
                self._given.sender,
                self._given.reason,
                self._given.now_ms,
            )
        for place, plan in enumerate(plans):
            if len(mine := at_ms[code == place]):
                mark_moments(session, plan.id, "readings", mine)

    def _hold_cells_of_other_times(
        self, plans: Sequence[SectionPlan], rows: Rows, verdicts: Verdicts
    ) -> None:
        """Hold readings of cells that the section did not have at that time."""
        for place, plan in enumerate(plans):
            if len({terms.cells for terms in plan.terms}) == 1:
                continue
            mine = np.flatnonzero(rows.array("section") == place)
            number, at_ms = rows.array("cell")[mine], rows.array("at")[mine]
            from_ms = np.array([terms.from_ms for terms in plan.terms])
            cells = np.array([terms.cells for terms in plan.terms])
            held = cells[np.maximum(np.searchsorted(from_ms, at_ms, side="right") - 1, 0)]
            for i in np.flatnonzero(number > held).tolist():
                verdicts.hold(int(mine[i]), cell_of_another_time(plan, number[i], held[i]))

    def _settle_known(
        self,
        session: Session,
        cell_id: Whole,
        at_ms: Whole,
        microvolts: Whole,
        order: Whole,
        verdicts: Verdicts,
    ) -> None:
        """Compare with what is stored; a cell's readings after its newest need no look-up."""
        cells = np.unique(cell_id[order])
        known = readings.last_of_each(session, cells.tolist())
        newest = np.array([known.get(cell, _NEVER_MS) for cell in cells.tolist()], np.int64)
        old = order[at_ms[order] <= newest[np.searchsorted(cells, cell_id[order])]]
        if not len(old):
            return
        stored = readings.stored_with(session, cell_id[old], at_ms[old])
        is_stored = stored[:, 0] >= 0
        for place, (revision, held_uv, _) in zip(
            old[is_stored].tolist(), stored[is_stored].tolist(), strict=True
        ):
            if microvolts[place] == held_uv:
                verdicts.know(place)
            elif self._given.is_correction:
                verdicts.revision[place] = revision + 1
            else:
                self._contradict(
                    session,
                    int(cell_id[place]),
                    int(at_ms[place]),
                    int(microvolts[place]),
                    place,
                    verdicts,
                )

    def _contradict(
        self, session: Session, cell_id: int, at_ms: int, microvolts: int, place: int,
        verdicts: Verdicts,
    ) -> None:  # fmt: skip
        """Hold a reading that differs, unless it is what was stored before a correction."""
        revisions = readings.history(session, cell_id, at_ms)
        if any(former == microvolts for _, former, _, _ in revisions):
            verdicts.know(place, "This was stored before and has been corrected since.")
            return
        _, stored, _, delivery_id = revisions[-1]
        verdicts.hold(
            place,
            stored_otherwise(
                session,
                self._given,
                "volts",
                written(volts_from_microvolts(microvolts)),
                "withdrawn" if stored is None else written(volts_from_microvolts(stored)),
                delivery_id,
            ),
        )

    def _doubt(
        self, session: Session, plan: SectionPlan, rows: Rows, mine: Whole, verdicts: Verdicts
    ) -> None:
        """Note which of a section's readings, given by cell and time, are not to be believed."""
        at_ms, number = rows.array("at")[mine], rows.array("cell")[mine]
        found = self._belief.doubts(session, plan, number, at_ms, rows.array("volts")[mine])
        for i, doubt in found.items():
            place = int(mine[i])
            verdicts.doubts[place] = Doubt(
                line=int(rows.lines[place]),
                section_id=plan.id,
                cell_id=plan.cell_id(int(number[i])),
                at_ms=int(at_ms[i]),
                revision=int(verdicts.revision[place]),
                code=doubt.code.name.lower(),
                reason=doubt.reason,
                found=doubt.found,
                expected=doubt.expected,
                suggested=doubt.suggested,
            )


def cells_of(plans: Sequence[SectionPlan], code: NDArray[np.integer], number: Whole) -> Whole:
    """Ids of cells given by place of their section and by number."""
    ids = [plan.cell_ids for plan in plans]
    starts = np.cumsum([0, *(len(of_section) for of_section in ids)])
    flat = np.array([cell_id for of_section in ids for cell_id in of_section], np.int64)
    ids_of_rows: Whole = flat[starts[code] + number - 1]
    return ids_of_rows


def cell_of_another_time(plan: SectionPlan, number: int, cells: int) -> RowFault:
    """Say that the section did not have this cell at that time."""
    return RowFault(
        column="cell",
        found=str(number),
        expected=f"1 to {cells}",
        reason=f"{plan.name} had no cell {number} at that time; expected 1 to {cells}.",
    )


def _by_cell_and_time(cell_id: Whole, at_ms: Whole) -> Whole:
    """Order by cell and time; rows with one key keep the order of the file."""
    step, later = np.diff(cell_id), np.diff(at_ms) >= 0
    if np.all((step > 0) | ((step == 0) & later)):
        return np.arange(len(cell_id))
    if later.all() and cell_id.max() < 2**16:
        # Sixteen bits are sorted digit by digit, which leaves the order of time as it is.
        return np.argsort(cell_id.astype(np.uint16), kind="stable")
    return np.lexsort((at_ms, cell_id))
