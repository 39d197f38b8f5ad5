"""Currents and ampere-hour counters into the books."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.intake.repeats import settle_repeats, written
from server.intake.rows import Rows
from server.intake.stretches import mark_moments
from server.intake.verdicts import Given, Outcome, RowFault, Verdicts, stored_otherwise
from server.science.units import amps_from_ka, coulombs_from_kah, ka_from_amps, kah_from_coulombs
from server.storage.plant import SectionPlan
from server.storage.samples import (
    SampleTable,
    add_samples,
    newest_sample_ms,
    sample_revisions,
)

Numbers = NDArray[np.float64]
Whole = NDArray[np.int64]

MOST_TIMES_RATED = 2.0
"""No rectifier gives twice what it is rated for; a current beyond is a slipped decimal point,
and two hours of it would spoil the books for a week."""


@dataclass(frozen=True, slots=True)
class _Sheet:
    """How a sheet's column becomes what is stored, and back."""

    table: SampleTable
    column: str
    to_si: Callable[[Numbers], Numbers]
    from_si: Callable[[float], float]


_SHEETS = {
    "current": _Sheet("current_sample", "current_ka", amps_from_ka, ka_from_amps),
    "counter": _Sheet("counter_sample", "counter_kah", coulombs_from_kah, kah_from_coulombs),
}


class SampleTaker:
    """Takes in samples of current, or readings of the ampere-hour counter."""

    def __init__(self, given: Given, section_names: list[str], sheet: str) -> None:
        self._given = given
        self._names = section_names
        self._sheet = _SHEETS[sheet]
        self._newest: dict[int, int | None] = {}

    def begin(self) -> None:
        """Forget which samples are the newest: others may have written since."""
        self._newest.clear()

    def moments(self, rows: Rows) -> Whole:
        """The moment of each sample."""
        return rows.array("at")

    def judge(self, session: Session, rows: Rows) -> Verdicts:
        """Decide on every sample."""
        verdicts = Verdicts.of(len(rows))
        code, at_ms = rows.array("section"), rows.array("at")
        values = self._sheet.to_si(rows.array(self._sheet.column))
        for place, plan in enumerate(self._given.plans(self._names)):
            mine = np.flatnonzero(code == place)
            if not len(mine):
                continue
            if self._sheet.table == "current_sample":
                self._hold_impossible(plan, mine, at_ms, values, verdicts)
            order = mine[np.argsort(at_ms[mine], kind="stable")]
            is_same = np.diff(at_ms[order]) == 0
            order = settle_repeats(rows, verdicts, order, is_same, self._sheet.column, values)
            order = order[verdicts.outcome[order] == Outcome.NEW]
            self._settle_known(session, plan, order, at_ms, values, verdicts)
        return verdicts

    def write(self, session: Session, rows: Rows, verdicts: Verdicts, delivery_id: int) -> None:
        """Write the new samples, section by section in order of time."""
        new = verdicts.new
        code, at_ms = rows.array("section")[new], rows.array("at")[new]
        values = self._sheet.to_si(rows.array(self._sheet.column)[new])
        for place, plan in enumerate(self._given.plans(self._names)):
            mine = np.flatnonzero(code == place)
            if not len(mine):
                continue
            mine = mine[np.argsort(at_ms[mine], kind="stable")]
            add_samples(
                session,
                self._sheet.table,
                zip(
                    [plan.id] * len(mine),
                    at_ms[mine].tolist(),
                    verdicts.revision[new][mine].tolist(),
                    values[mine].tolist(),
                    strict=True,
                ),
                delivery_id,
            )
            newest = self._newest.get(plan.id)
            last = int(at_ms[mine[-1]])
            self._newest[plan.id] = last if newest is None else max(newest, last)
            mark_moments(session, plan.id, "charge", at_ms[mine])

    def _hold_impossible(
        self, plan: SectionPlan, mine: Whole, at_ms: Whole, amps: Numbers, verdicts: Verdicts
    ) -> None:
        from_ms = np.array([terms.from_ms for terms in plan.terms])
        most = np.array([terms.rated_amps * MOST_TIMES_RATED for terms in plan.terms])
        allowed = most[np.maximum(np.searchsorted(from_ms, at_ms[mine], side="right") - 1, 0)]
        for i in np.flatnonzero(amps[mine] > allowed).tolist():
            found, limit = written(ka_from_amps(amps[mine[i]])), ka_from_amps(allowed[i])
            verdicts.hold(
                int(mine[i]),
                RowFault(
                    column="current_ka",
                    found=found,
                    expected=f"at most {written(limit)}",
                    reason=(
                        f"current_ka {found} is more than twice what {plan.name} is rated for;"
                        f" expected at most {written(limit)} (twice its rated_current_ka)."
                    ),
                ),
            )

    def _settle_known(
        self,
        session: Session,
        plan: SectionPlan,
        order: Whole,
        at_ms: Whole,
        values: Numbers,
        verdicts: Verdicts,
    ) -> None:
        """Compare with what is stored; samples after the section's newest are all new."""
        if plan.id not in self._newest:
            self._newest[plan.id] = newest_sample_ms(session, self._sheet.table, plan.id)
        newest = self._newest[plan.id]
        old = order[at_ms[order] <= newest] if newest is not None else order[:0]
        if not len(old):
            return
        stored = sample_revisions(
            session, self._sheet.table, plan.id, int(at_ms[old[0]]), int(at_ms[old[-1]]) + 1
        )
        column, from_si = self._sheet.column, self._sheet.from_si
        for place in old.tolist():
            revisions = stored.get(int(at_ms[place]))
            if not revisions:
                continue
            last, value = revisions[-1], float(values[place])
            if last.value == value:
                verdicts.know(place)
            elif self._given.is_correction:
                verdicts.revision[place] = last.revision + 1
            elif any(former.value == value for former in revisions):
                verdicts.know(place, "This was stored before and has been corrected since.")
            else:
                stored_text = "withdrawn" if last.value is None else written(from_si(last.value))
                verdicts.hold(
                    place,
                    stored_otherwise(
                        session,
                        self._given,
                        column,
                        written(from_si(value)),
                        stored_text,
                        last.delivery_id,
                    ),
                )
