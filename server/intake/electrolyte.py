"""Assays of the electrolyte into the books."""

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from server.intake.records import Found, RecordTaker
from server.intake.repeats import written
from server.intake.rows import Rows
from server.storage.plant import SectionPlan
from server.storage.records import ElectrolyteSample
from server.storage.revisions import value_columns

_COLUMNS = value_columns(ElectrolyteSample)


def sheet_column(stored: str) -> str:
    """Give the sheet's name of a stored column."""
    return "temperature_c" if stored == "temperature_degc" else stored


class ElectrolyteTaker(RecordTaker):
    """Takes in assays.

    A laboratory sends what it has: metal and acid in the morning, impurities a week later. A
    row that only adds to a sample completes it; one that states another value contradicts.
    """

    record = ElectrolyteSample
    moment_column = "at"

    def found(self, rows: Rows, place: int, plan: SectionPlan) -> Found:
        """Give a row as a sample, in the units of the sheet."""
        key = (plan.id, rows.items("stream")[place], int(rows.array("at")[place]))
        values = {}
        for name in _COLUMNS:
            value = float(rows.array(sheet_column(name))[place])
            values[name] = None if np.isnan(value) else value
        return Found(key, values, plan)

    def stated(self, values: Mapping[str, Any]) -> Mapping[str, Any]:
        """Leave out the blanks, which say nothing."""
        return {name: value for name, value in values.items() if value is not None}

    def completes(self, differing: Sequence[str], stored: Mapping[str, Any]) -> bool:
        """Tell whether all that differs was not known before."""
        return all(stored[name] is None for name in differing)

    def as_written(self, column: str, values: Mapping[str, Any]) -> tuple[str, str]:
        """Give the sheet's column and its text."""
        value = values[column]
        return sheet_column(column), "nothing" if value is None else written(value)
