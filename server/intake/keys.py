"""What tells one record of a sheet from another, read from the fields of a form or a call."""

from collections.abc import Mapping
from zoneinfo import ZoneInfo

from server.intake.cells import cells_text, parse_cells
from server.intake.errors import CellsWrong, row_reason
from server.intake.times import TimeReader
from server.storage.errors import Conflict
from server.storage.plant import House, SectionPlan
from server.storage.revisions import Key

KEY_COLUMNS: dict[str, tuple[str, ...]] = {
    "volts": ("at", "section", "cell"),
    "current": ("at", "section"),
    "counter": ("at", "section"),
    "lots": ("section", "lot"),
    "outages": ("section", "cells", "from"),
    "electrolyte": ("at", "section", "stream"),
    "finds": ("at", "section", "cell", "cathode"),
}


def record_key(
    house: House, sheet: str, fields: Mapping[str, str], now_ms: int
) -> tuple[SectionPlan, Key]:
    """The section of a record, and its key as storage has it.

    Voltages, currents and counters are keyed by (cell_id, at_ms) or (section_id, at_ms).

    Raises
    ------
    Conflict
        When a field of the key is missing or cannot be read.
    NotFound
        When there is no such section or cell.
    """
    missing = [
        name
        for name in KEY_COLUMNS[sheet]
        if name not in ("cells", "cathode") and not fields.get(name, "").strip()
    ]
    if missing:
        raise Conflict(f"{', '.join(missing)} must be given to tell which record is meant")
    plan = house.section(fields["section"].strip())
    match sheet:
        case "volts":
            return plan, (plan.cell_id(_whole(fields, "cell")), _moment(house, fields, now_ms))
        case "current" | "counter":
            return plan, (plan.id, _moment(house, fields, now_ms))
        case "lots":
            return plan, (plan.id, fields["lot"].strip())
        case "outages":
            try:
                cells = cells_text(parse_cells(fields.get("cells", "")))
            except CellsWrong as wrong:
                raise Conflict(str(wrong)) from None
            return plan, (plan.id, cells, _moment(house, fields, now_ms, "from"))
        case "electrolyte":
            stream = fields["stream"].strip().casefold()
            return plan, (plan.id, stream, _moment(house, fields, now_ms))
        case _:
            cathode = _whole(fields, "cathode") if fields.get("cathode", "").strip() else 0
            cell_id = plan.cell_id(_whole(fields, "cell"))
            return plan, (cell_id, _moment(house, fields, now_ms), cathode)


def _moment(house: House, fields: Mapping[str, str], now_ms: int, column: str = "at") -> int:
    moments, faults = TimeReader(ZoneInfo(house.time_zone), now_ms).read([fields[column]])
    if faults:
        fault = faults[0]
        raise Conflict(
            row_reason(fault.code, column=column, found=fault.found, expected=fault.expected)
        )
    return int(moments[0])


def _whole(fields: Mapping[str, str], column: str) -> int:
    text = fields[column].strip()
    if not text.isdecimal():
        raise Conflict(f"{column} “{text}” is not a whole number")
    return int(text)
