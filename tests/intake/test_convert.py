from datetime import UTC, datetime
from zoneinfo import ZoneInfo

import numpy as np
import pytest

from server.intake.convert import Converter
from server.intake.rows import MISSING
from server.intake.sheets import records_chunk

NOW_MS = 1_800_000_000_000
CELLS = {"EW1": 48, "ER 1": 40}
AT = "2026-03-01T02:00:00Z"
AT_MS = int(datetime(2026, 3, 1, 2, tzinfo=UTC).timestamp() * 1000)

LOT = {
    "weighed_at": "2026-03-08T13:00Z",
    "lot": "EW1-8-1",
    "section": "EW1",
    "cells": "1-7",
    "pulled_at": "2026-03-08T10:00Z",
    "started_at": "2026-03-01T10:00Z",
    "cathodes_per_cell": "60",
    "net_kg": "2857.3",
    "starter_kg": "0",
}
OUTAGE = {
    "section": "EW1",
    "cells": "",
    "from": "2026-03-07T05:00Z",
    "to": "2026-03-07T11:00Z",
    "state": "off",
}
ASSAY = {"at": AT, "section": "EW1", "stream": "feed", "metal_g_l": "45"}
FIND = {"at": AT, "section": "EW1", "cell": "3", "found": "short"}
READING = {"at": AT, "section": "EW1", "cell": "3", "volts": "2.03"}


def converter(kind, cells_in=CELLS, decimal="."):
    return Converter(
        kind,
        zone=ZoneInfo("America/Santiago"),
        now_ms=NOW_MS,
        cells_in=cells_in,
        decimal=decimal,
        file="sheet.csv",
    )


def rows_of(kind, *records, **options):
    return converter(kind, **options).convert(records_chunk(kind, records))


def faults_of(kind, record):
    """Code and column of the one fault that a record has."""
    rows = rows_of(kind, record)
    assert len(rows) == 0
    (error,) = rows.errors
    return error.code, error.column


def test_readings_come_as_arrays_in_the_units_of_the_sheet():
    rows = rows_of("volts", READING, READING | {"section": "ER 1", "volts": "0.295"}, READING)

    assert rows.array("at").tolist() == [AT_MS] * 3
    assert rows.array("section").tolist() == [0, 1, 0]
    assert rows.array("cell").tolist() == [3, 3, 3]
    assert rows.array("volts").tolist() == [2.03, 0.295, 2.03]
    assert rows.errors == []


def test_codes_of_sections_stay_the_same_from_chunk_to_chunk():
    reader = converter("volts")

    first = reader.convert(records_chunk("volts", [READING]))
    names = list(reader.section_names)
    second = reader.convert(records_chunk("volts", [READING | {"section": "ER 1"}, READING]))

    assert names == ["EW1"]
    assert reader.section_names == ["EW1", "ER 1"]
    assert first.array("section").tolist() == [0]
    assert second.array("section").tolist() == [1, 0]


@pytest.mark.parametrize("text", ["ew1", " EW1 ", "EW1"])
def test_a_section_is_found_whatever_its_case(text):
    reader = converter("volts")

    rows = reader.convert(records_chunk("volts", [READING, READING | {"section": text}]))

    assert rows.array("section").tolist() == [0, 0]
    assert reader.section_names == ["EW1"]


def test_case_decides_between_sections_that_differ_by_nothing_else():
    rows = rows_of(
        "volts",
        *(READING | {"section": name} for name in ("EW1", "ew1", "Ew1")),
        cells_in={"EW1": 48, "ew1": 48},
    )

    assert rows.array("section").tolist() == [0, 1]
    assert [error.code for error in rows.errors] == ["section_unknown"]


def test_an_unknown_section_is_refused_with_the_known_ones():
    rows = rows_of("volts", READING | {"section": "EW11"})

    assert rows.errors[0].reason == (
        "There is no section “EW11”; expected one of EW1, ER 1, perhaps EW1."
    )


def test_sections_and_cells_are_taken_as_they_are_when_the_plant_is_not_known():
    rows = rows_of("volts", READING | {"section": "X9", "cell": "4000"}, cells_in=None)

    assert rows.array("cell").tolist() == [4000]


@pytest.mark.parametrize(
    ("change", "code", "column"),
    [
        ({"volts": "two"}, "not_a_number", "volts"),
        ({"volts": "nan"}, "not_finite", "volts"),
        ({"volts": None}, "empty", "volts"),
        ({"volts": True}, "not_a_number", "volts"),
        ({"volts": [2.0]}, "not_a_number", "volts"),
        ({"cell": "49"}, "cell_unknown", "cell"),
        ({"cell": "0"}, "too_low", "cell"),
        ({"cell": "3b"}, "not_a_number", "cell"),
        ({"section": ""}, "empty", "section"),
        ({"section": "EW\x07"}, "control", "section"),
        ({"at": ""}, "empty", "at"),
        ({"at": "2030-01-01T00:00Z"}, "time_future", "at"),
        ({"at": "2026-09-06T00:30"}, "time_skipped", "at"),
        ({"at": "2026-04-04T23:30"}, "time_twice", "at"),
    ],
)
def test_a_reading_that_cannot_be_read_is_refused(change, code, column):
    assert faults_of("volts", READING | change) == (code, column)


@pytest.mark.parametrize(
    ("change", "code", "column"),
    [
        ({"net_kg": "-1"}, "too_low", "net_kg"),
        ({"starter_kg": "3000"}, "order", "starter_kg"),
        ({"started_at": "2026-03-08T10:00Z"}, "order", "started_at"),
        ({"started_at": "2026-03-09T10:00Z"}, "order", "started_at"),
        ({"pulled_at": "2026-03-08T14:00Z"}, "order", "pulled_at"),
        ({"cells": ""}, "empty", "cells"),
        ({"cells": "47-49"}, "cells_beyond", "cells"),
        ({"cells": "12-Jan"}, "cells_date", "cells"),
        ({"cathodes_per_cell": "0"}, "too_low", "cathodes_per_cell"),
        ({"cathodes_per_cell": "60.5"}, "not_whole", "cathodes_per_cell"),
        ({"lot": " "}, "empty", "lot"),
        ({"starter_kg": ""}, "empty", "starter_kg"),
    ],
)
def test_a_lot_that_cannot_be_is_refused(change, code, column):
    assert faults_of("lots", LOT | change) == (code, column)


def test_a_lot_is_read():
    rows = rows_of("lots", LOT, LOT | {"started_at": "", "cathodes_per_cell": None})

    assert rows.items("lot") == ["EW1-8-1"] * 2
    assert rows.items("cells") == [(1, 2, 3, 4, 5, 6, 7)] * 2
    assert rows.array("started_at").tolist()[1] == MISSING
    assert rows.array("cathodes_per_cell").tolist() == [60, MISSING]
    assert rows.array("net_kg").tolist() == [2857.3] * 2


def test_an_outage_may_last_and_may_be_of_the_whole_section():
    rows = rows_of("outages", OUTAGE | {"to": "", "state": " Off "})

    assert rows.items("cells") == [()]
    assert rows.items("state") == ["off"]
    assert rows.array("to").tolist() == [MISSING]


@pytest.mark.parametrize(
    ("change", "code", "column"),
    [
        ({"to": "2026-03-07T05:00Z"}, "order", "to"),
        ({"to": "2026-03-06T05:00Z"}, "order", "to"),
        ({"state": "stopped"}, "choice", "state"),
        ({"state": ""}, "empty", "state"),
        ({"cells": "9-8"}, "cells_reversed", "cells"),
    ],
)
def test_an_outage_that_cannot_be_is_refused(change, code, column):
    assert faults_of("outages", OUTAGE | change) == (code, column)


def test_what_was_not_measured_is_missing():
    rows = rows_of("electrolyte", ASSAY | {"acid_g_l": ""})

    assert rows.array("metal_g_l").tolist() == [45.0]
    assert np.isnan(rows.array("acid_g_l")).all()
    assert np.isnan(rows.array("flow_m3_h")).all()


def test_an_assay_without_a_value_is_refused():
    assert faults_of("electrolyte", ASSAY | {"metal_g_l": ""}) == ("no_values", "metal_g_l")


def test_a_find_needs_neither_cathode_nor_action():
    rows = rows_of("finds", FIND, FIND | {"cathode": "12", "action": " hook bent "})

    assert rows.array("cathode").tolist() == [MISSING, 12]
    assert rows.items("action") == ["", "hook bent"]


def test_good_rows_of_a_chunk_go_in_and_bad_ones_are_told_apart():
    records = [READING | {"volts": volts} for volts in ("2.0", "x", "2.1", "", "2.2")]

    rows = rows_of("volts", *records)

    assert rows.index.tolist() == [0, 2, 4]
    assert rows.lines.tolist() == [1, 3, 5]
    assert rows.array("volts").tolist() == [2.0, 2.1, 2.2]
    assert [(error.line, error.code) for error in rows.errors] == [
        (2, "not_a_number"),
        (4, "empty"),
    ]


def test_a_row_with_several_faults_gives_one_error_that_tells_them_all():
    (error,) = rows_of("volts", {"at": "x", "section": "EW1", "cell": "0", "volts": "y"}).errors

    assert (error.file, error.line, error.column, error.found) == ("sheet.csv", 1, "at", "x")
    assert [word in error.reason for word in ("at “x”", "cell 0", "volts “y”")] == [True] * 3
    assert error.fields == {"at": "x", "section": "EW1", "cell": "0", "volts": "y"}
    assert error.raw == "at: x, section: EW1, cell: 0, volts: y"


def test_the_decimal_mark_of_the_file_is_honoured():
    rows = rows_of("volts", READING | {"volts": "2,03"}, READING, decimal=",")

    assert rows.array("volts").tolist() == [2.03]
    assert [error.code for error in rows.errors] == ["decimal_mark"]


def test_an_empty_chunk_gives_no_rows():
    for kind in ("volts", "lots", "outages", "electrolyte", "finds", "current", "counter"):
        rows = rows_of(kind)
        assert (len(rows), rows.errors) == (0, [])
