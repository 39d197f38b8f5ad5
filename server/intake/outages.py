"""Outages and bypassed cells into the books."""

from collections.abc import Mapping, Sequence
from typing import Any

from sqlalchemy.orm import Session

from server.intake.cells import cells_text, parse_cells
from server.intake.records import Found, RecordTaker
from server.intake.rows import MISSING, Rows
from server.intake.verdicts import RowFault
from server.intake.volts import cell_of_another_time
from server.storage.current import effective_outages, keep_bypasses
from server.storage.plant import SectionPlan
from server.storage.records import Outage
from server.storage.revisions import Key, Revision
from server.storage.stale import mark

OPEN_END_MS = 2**53
"""Stands for the end of what still lasts."""

_SHEET_COLUMNS = {"from_ms": "from", "to_ms": "to"}

_Span = tuple[int, int]


class OutageTaker(RecordTaker):
    """Takes in outages. One that still lasts is completed by a later row that says its end."""

    record = Outage
    moment_column = "from"

    def begin(self) -> None:
        """Forget which outages there are: others may have written since."""
        self._known: dict[int, dict[tuple[str, int], int]] = {}
        self._changed: dict[Key, Sequence[Revision]] = {}

    def found(self, rows: Rows, place: int, plan: SectionPlan) -> Found:
        """Give a row as an outage."""
        to_ms = int(rows.array("to")[place])
        values = {
            "to_ms": None if to_ms == MISSING else to_ms,
            "state": rows.items("state")[place],
        }
        cells = cells_text(rows.items("cells")[place])
        return Found((plan.id, cells, int(rows.array("from")[place])), values, plan)

    def completes(self, differing: Sequence[str], stored: Mapping[str, Any]) -> bool:
        """Tell whether all that is new is the end of what still lasted."""
        return list(differing) == ["to_ms"] and stored["to_ms"] is None

    def as_written(self, column: str, values: Mapping[str, Any]) -> tuple[str, str]:
        """Give the sheet's column and its text."""
        value = values[column]
        if value is None:
            return _SHEET_COLUMNS.get(column, column), "nothing"
        if column in _SHEET_COLUMNS:
            return _SHEET_COLUMNS[column], self._given.written(value)
        return column, str(value)

    def prepare(self, session: Session, found: Sequence[Found]) -> None:
        """Look up the outages of the sections."""
        for plan in {row.plan.id: row.plan for row in found}.values():
            if plan.id not in self._known:
                self._known[plan.id] = {
                    (cells, from_ms): OPEN_END_MS if to_ms is None else to_ms
                    for cells, from_ms, to_ms, _ in effective_outages(
                        session, plan.id, 0, OPEN_END_MS
                    )
                }

    def contradiction(self, row: Found) -> RowFault | None:
        """Tell what speaks against an outage: its cells, or another of the same cells."""
        _, cells, from_ms = row.key
        if row.values["state"] == "bypassed" and not cells:
            return RowFault(
                column="cells",
                found="",
                expected="the bypassed cells",
                reason=(
                    "A whole section cannot be bypassed; expected the cells that are, or the"
                    " state off."
                ),
            )
        numbers = parse_cells(cells)
        terms = row.plan.terms_at(from_ms)
        if numbers and numbers[-1] > terms.cells:
            return cell_of_another_time(row.plan, numbers[-1], terms.cells)
        return self._overlap(row, numbers)

    def _overlap(self, row: Found, numbers: tuple[int, ...]) -> RowFault | None:
        _, cells, from_ms = row.key
        end_ms = _end_ms(row.values)
        for (other_cells, other_from_ms), other_end_ms in self._known[row.plan.id].items():
            if (other_cells, other_from_ms) == (cells, from_ms):
                continue
            # A whole section may be off while cells of it are bypassed.
            if bool(other_cells) != bool(cells) or other_from_ms >= end_ms:
                continue
            shared = set(numbers) & set(parse_cells(other_cells))
            if other_end_ms <= from_ms or (cells and not shared):
                continue
            who = f"cell {min(shared)}" if shared else row.plan.name
            until = (
                "still lasts"
                if other_end_ms == OPEN_END_MS
                else f"lasts until {self._given.written(other_end_ms)}"
            )
            other = f"one of {who} from {self._given.written(other_from_ms)} {until}"
            return RowFault(
                column="from",
                found=self._given.written(from_ms),
                expected=f"a time outside of other outages; {other}",
                reason=f"Two outages overlap: {other}.",
            )
        return None

    def accepted(self, row: Found, history: Sequence[Revision]) -> None:
        """Note an outage for those after it."""
        _, cells, from_ms = row.key
        self._known[row.plan.id][(cells, from_ms)] = _end_ms(row.values)
        self._changed[row.key] = history

    def mark_stale(self, session: Session, found: Sequence[Found]) -> None:
        """Mark the time of the outages, and keep when which cell was bypassed."""
        for row in found:
            mark_outages(
                session, row.plan.id, row.key[2], self._changed[row.key], self._given.now_ms
            )
        for plan in {row.plan.id: row.plan for row in found if row.key[1]}.values():
            refresh_bypasses(session, plan)


def mark_outages(
    session: Session, section_id: int, from_ms: int, history: Sequence[Revision], now_ms: int
) -> None:
    """Mark the time in which an outage by any of its revisions made a difference.

    What still lasts makes one up to now. An outage that is only completed makes none before
    its end.
    """
    ends = [_end_ms(revision.values) for revision in history]
    is_completed = len(history) > 1 and not any(revision.is_void for revision in history)
    start_ms = min(ends) if is_completed else from_ms
    end_ms = max(min(max(ends), now_ms), start_ms)
    mark(session, section_id, "charge", start_ms, end_ms + 1)


def refresh_bypasses(session: Session, plan: SectionPlan) -> None:
    """Write anew when each cell of a section was bypassed, from the outages as they count."""
    keep_bypasses(session, plan.cell_ids, bypasses_recorded(session, plan))


def bypasses_recorded(session: Session, plan: SectionPlan) -> list[tuple[int, int, int]]:
    """When each cell was bypassed by the outages as they count: (cell_id, from_ms, to_ms)."""
    spans: dict[int, list[_Span]] = {}
    for cells, from_ms, to_ms, _ in effective_outages(session, plan.id, 0, OPEN_END_MS):
        for number in parse_cells(cells):
            end_ms = OPEN_END_MS if to_ms is None else to_ms
            spans.setdefault(plan.cell_id(number), []).append((from_ms, end_ms))
    return [
        (cell_id, from_ms, to_ms)
        for cell_id in sorted(spans)
        for from_ms, to_ms in _merged(spans[cell_id])
    ]


def _merged(spans: Sequence[_Span]) -> list[_Span]:
    merged: list[_Span] = []
    for from_ms, to_ms in sorted(spans):
        if merged and from_ms <= merged[-1][1]:
            merged[-1] = (merged[-1][0], max(merged[-1][1], to_ms))
        else:
            merged.append((from_ms, to_ms))
    return merged


def _end_ms(values: Mapping[str, Any]) -> int:
    return OPEN_END_MS if values["to_ms"] is None else int(values["to_ms"])
