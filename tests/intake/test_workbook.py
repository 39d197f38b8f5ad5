import datetime
import io
from zoneinfo import ZoneInfo

import pytest
import xlsxwriter

from server.intake import workbook as worksheets
from server.intake.convert import Converter
from server.intake.errors import FileRefused
from server.intake.sheets import open_sheets

HEADER = ["at", "section", "cell", "volts"]
AT = datetime.datetime(2026, 3, 1, 2, 0, 20)  # noqa: DTZ001


def workbook(worksheets, **options):
    """A workbook with these worksheets, given as lists of rows."""
    packed = io.BytesIO()
    with xlsxwriter.Workbook(packed, {"in_memory": True, **options}) as book:
        moment = book.add_format({"num_format": "yyyy-mm-dd hh:mm:ss"})
        for name, rows in worksheets.items():
            sheet = book.add_worksheet(name)
            for place, row in enumerate(rows):
                for column, value in enumerate(row):
                    if isinstance(value, datetime.date):
                        sheet.write_datetime(place, column, value, moment)
                    elif value is not None:
                        sheet.write(place, column, value)
            if name.startswith("hidden"):
                sheet.hide()
        if "chart" in options:
            book.add_chartsheet("chart")
    packed.seek(0)
    return packed


def opened(worksheets, **options):
    return open_sheets(workbook(worksheets, **options), "readings.xlsx")


def rows_of(sheet):
    rows, errors = [], []
    for chunk in sheet.chunks():
        rows += zip(chunk.lines.tolist(), zip(*chunk.columns.values(), strict=True), strict=True)
        errors += [(error.line, error.code) for error in chunk.errors]
    return rows, errors


def refusal_of(worksheets, **options):
    with pytest.raises(FileRefused) as caught, opened(worksheets, **options) as file:
        assert file
    return caught.value


def test_a_worksheet_gives_the_same_text_as_a_csv_file():
    with opened({"March": [HEADER, [AT, "EW1", 1, 2.035], [AT, "EW1", 2, 2]]}) as file:
        (sheet,) = file.sheets
        rows, errors = rows_of(sheet)

    assert (sheet.kind, sheet.worksheet) == ("volts", "March")
    assert rows == [
        (2, ("2026-03-01T02:00:20", "EW1", "1", "2.035")),
        (3, ("2026-03-01T02:00:20", "EW1", "2", "2")),
    ]
    assert errors == []


@pytest.mark.parametrize("date_1904", [False, True])
def test_date_cells_are_read_to_the_second_in_both_calendars(date_1904):
    moments = [AT + datetime.timedelta(seconds=20 * i) for i in range(200)]
    rows = [HEADER, *([moment, "EW1", 1, 2.0] for moment in moments)]

    with opened({"volts": rows}, date_1904=date_1904) as file:
        found, _ = rows_of(file.sheets[0])

    assert [fields[0] for _, fields in found] == [moment.isoformat() for moment in moments]


def test_midnight_keeps_its_time_of_day():
    midnight = datetime.datetime(2026, 3, 1)  # noqa: DTZ001

    with opened({"volts": [HEADER, [midnight, "EW1", 1, 2.0]]}) as file:
        ((_, fields),) = rows_of(file.sheets[0])[0]

    assert fields[0] == "2026-03-01T00:00:00"


def test_title_rows_that_are_blank_are_passed_over_and_rows_keep_their_numbers():
    rows = [[], [], HEADER, ["t", "EW1", 1, 2.0], [], [None, None], ["t", "EW1", 2, 2.0]]

    with opened({"volts": rows}) as file:
        (sheet,) = file.sheets
        found, _ = rows_of(sheet)

    assert sheet.header_line == 3
    assert [line for line, _ in found] == [4, 7]


def test_a_sheet_may_begin_in_any_column():
    rows = [[None, *HEADER], [None, "t", "EW1", 1, 2.0]]

    with opened({"volts": rows}) as file:
        found, errors = rows_of(file.sheets[0])

    assert found == [(2, ("t", "EW1", "1", "2"))]
    assert errors == []


def test_numbers_typed_as_text_settle_the_decimal_mark_for_the_worksheet():
    rows = [HEADER, ["t", "EW1", 1, "2,03"], ["t", "EW1", 2, 2.04]]

    with opened({"volts": rows}) as file:
        (sheet,) = file.sheets
        found, _ = rows_of(sheet)

    assert sheet.dialect.decimal == ","
    assert [fields[3] for _, fields in found] == ["2,03", "2,04"]
    assert "decimal comma, as in 2,03 in row 2" in sheet.dialect.sentence


def test_what_stands_beside_the_table_is_an_error_of_the_row():
    rows = [HEADER, ["t", "EW1", 1, 2.0, None, "see note"], ["t", "EW1", 2, 2.0]]

    with opened({"volts": rows}) as file:
        found, errors = rows_of(file.sheets[0])

    assert [line for line, _ in found] == [3]
    assert errors == [(2, "fields")]


def test_several_worksheets_are_several_sheets():
    current = [["at", "section", "current_ka"], [AT, "EW1", 36.0]]

    with opened(
        {"volts": [HEADER, [AT, "EW1", 1, 2.0]], "current": current, "notes": [["hello"]]}
    ) as file:
        kinds = [(sheet.kind, sheet.worksheet) for sheet in file.sheets]
        rows = [len(rows_of(sheet)[0]) for sheet in file.sheets]

    assert kinds == [("volts", "volts"), ("current", "current")]
    assert rows == [1, 1]
    assert len(file.ignored) == 1
    assert "“notes” was left unread" in file.ignored[0]


def test_hidden_worksheets_are_left_alone_and_said_so():
    rows = [HEADER, [AT, "EW1", 1, 2.0]]

    with opened({"volts": rows, "hidden copy": rows, "empty": []}) as file:
        assert len(file.sheets) == 1
        assert any("“hidden copy” is hidden" in sentence for sentence in file.ignored)
        assert any("“empty” was left unread" in sentence for sentence in file.ignored)


def test_a_workbook_without_a_sheet_is_refused_for_its_columns():
    refusal = refusal_of({"Sheet1": [], "notes": [["at", "section", "cell", "reading"]]})

    assert refusal.code == "columns"
    assert "missing: volts" in str(refusal)


def test_an_empty_workbook_is_refused():
    assert refusal_of({"Sheet1": []}).code == "empty"


def test_a_worksheet_that_mixes_decimal_marks_refuses_the_file():
    rows = [HEADER, ["t", "EW1", 1, "2,03"], ["t", "EW1", 1, "2.03"]]

    assert refusal_of({"volts": rows}).code == "decimals_mixed"


def test_words_of_a_row_are_kept_as_csv():
    with opened({"volts": [HEADER, ["t", "EW1, old", 1, 2.5]]}) as file:
        (chunk,) = file.sheets[0].chunks()

    assert list(chunk.raw) == ['t,"EW1, old",1,2.5']


def test_long_worksheets_come_in_chunks(monkeypatch):
    monkeypatch.setattr(worksheets, "ROWS_IN_A_CHUNK", 20)
    rows = [HEADER, *(["t", "EW1", 1, 2.0] for _ in range(45))]

    with opened({"volts": rows}) as file:
        sizes = [len(chunk) for chunk in file.sheets[0].chunks()]

    assert sizes == [20, 20, 5]


def test_a_bool_and_an_error_in_a_cell_do_not_pass_for_numbers():
    with opened({"volts": [HEADER, ["t", "EW1", True, "=1/0"]]}) as file:
        found, _ = rows_of(file.sheets[0])

    assert found[0][1][2] == "TRUE"


def test_a_duration_beyond_any_calendar_costs_one_row_only():
    packed = io.BytesIO()
    with xlsxwriter.Workbook(packed, {"in_memory": True}) as book:
        sheet = book.add_worksheet("volts")
        sheet.write_row(0, 0, HEADER)
        sheet.write_row(1, 0, ["t", "EW1", 1, 2.0])
        sheet.write_number(2, 3, 1e10, book.add_format({"num_format": "[h]:mm"}))
        sheet.write_row(3, 0, ["t", "EW1", 2, 2.0])
    packed.seek(0)

    with open_sheets(packed, "readings.xlsx") as file:
        found, errors = rows_of(file.sheets[0])

    assert [line for line, _ in found] == [2, 4]
    assert errors == [(3, "cell_unreadable")]


@pytest.mark.parametrize("number", [1e300, -5.0, 2958466.5, 0.5])
def test_a_number_that_is_no_date_is_no_time(number):
    packed = io.BytesIO()
    with xlsxwriter.Workbook(packed, {"in_memory": True}) as book:
        sheet = book.add_worksheet("volts")
        sheet.write_row(0, 0, HEADER)
        sheet.write_row(1, 1, ["EW1", 1, 2.0])
        sheet.write_number(1, 0, number, book.add_format({"num_format": "yyyy-mm-dd hh:mm"}))
    packed.seek(0)

    with open_sheets(packed, "readings.xlsx") as file:
        (chunk,) = file.sheets[0].chunks()
        rows = Converter("volts", zone=ZoneInfo("UTC"), now_ms=1_800_000_000_000).convert(chunk)

    assert [error.column for error in rows.errors] == ["at"]
