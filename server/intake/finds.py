"""What people found at the cells, into the books."""

from collections.abc import Mapping
from typing import Any

from server.intake.records import Found, RecordTaker
from server.intake.rows import Rows
from server.intake.verdicts import RowFault
from server.intake.volts import cell_of_another_time
from server.storage.plant import SectionPlan
from server.storage.records import Find


class FindTaker(RecordTaker):
    """Takes in finds."""

    record = Find
    moment_column = "at"

    def found(self, rows: Rows, place: int, plan: SectionPlan) -> Found:
        """Give a row as a find; 0 stands for no cathode in particular."""
        cathode = int(rows.array("cathode")[place])
        number = int(rows.array("cell")[place])
        key = (plan.cell_id(number), int(rows.array("at")[place]), max(cathode, 0))
        values = {
            "section_id": plan.id,
            "found": rows.items("found")[place],
            "action": rows.items("action")[place],
        }
        return Found(key, values, plan)

    def contradiction(self, row: Found) -> RowFault | None:
        """Tell whether the section had such a cell, and the cell such a cathode."""
        cell_id, at_ms, cathode = row.key
        terms = row.plan.terms_at(at_ms)
        number = row.plan.number_of(cell_id)
        if number > terms.cells:
            return cell_of_another_time(row.plan, number, terms.cells)
        if cathode > terms.cathodes_per_cell:
            expected = f"1 to {terms.cathodes_per_cell}"
            return RowFault(
                column="cathode",
                found=str(cathode),
                expected=expected,
                reason=(
                    f"There is no cathode {cathode} in a cell of {row.plan.name};"
                    f" expected {expected}."
                ),
            )
        return None

    def as_written(self, column: str, values: Mapping[str, Any]) -> tuple[str, str]:
        """Give the sheet's column and its text."""
        return column, str(values[column]) or "nothing"
