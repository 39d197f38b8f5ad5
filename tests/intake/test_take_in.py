import io
import os

import pytest
import xlsxwriter

from server.intake import delimited
from server.intake.errors import FileRefused
from server.intake.take_in import take_in_file
from server.storage.direct import fetch_rows
from tests.factories import HOUR_MS, NOW_MS
from tests.intake.conftest import LEVELS, VOLTS, as_csv, iso, rounds

SHEETS = {
    "current": "at,section,current_ka\n2024-03-04T00:00Z,EW1,35.9\n2024-03-04T01:00Z,ER1,26.8\n",
    "counter": "at,section,counter_kah\n2024-03-04T00:00Z,EW1,1234567.8\n",
    "volts": as_csv(rounds("EW1", LEVELS, 3)),
    "lots": (
        "weighed_at,lot,section,cells,pulled_at,started_at,cathodes_per_cell,net_kg,starter_kg\n"
        "2024-03-04T12:00Z,A1,EW1,1-3,2024-03-04T10:00Z,2024-02-27T10:00Z,60,2857.3,0\n"
        "2024-03-04T13:00Z,A2,EW1,4,2024-03-04T10:30Z,,,952.1,0\n"
    ),
    "outages": (
        "section,cells,from,to,state\n"
        "EW1,,2024-03-01T02:00Z,2024-03-01T04:00Z,off\n"
        "EW1,2;5,2024-03-02T02:00Z,,bypassed\n"
    ),
    "electrolyte": (
        "at,section,stream,metal_g_l,acid_g_l\n2024-03-04T06:00Z,EW1,feed,45.2,\n"
        "2024-03-04T06:00Z,EW1,spent,35.1,182\n"
    ),
    "finds": (
        "at,section,cell,cathode,found,action\n2024-03-04T07:00Z,EW1,3,12,short,nodule off\n"
        "2024-03-04T07:10Z,EW1,4,,nothing,\n"
    ),
}


@pytest.mark.parametrize("kind", SHEETS)
def test_importing_twice_changes_nothing(books, kind):
    first = books.file(SHEETS[kind])
    held = books.contents()

    second = books.file(SHEETS[kind])

    assert first.stored == first.rows > 0
    assert second.stored == second.held == 0
    assert second.duplicates == second.rows == first.rows
    assert books.contents() == held


@pytest.mark.parametrize("kind", SHEETS)
def test_nothing_is_stale_after_what_was_known_comes_again(books, kind):
    books.file(SHEETS[kind])
    books.settle()

    books.file(SHEETS[kind])

    assert books.stale() == []


def test_a_delivery_keeps_who_when_and_how(books):
    (delivery,) = books.file(SHEETS["volts"], "round.csv").deliveries

    (row,) = books.rows(
        "SELECT sheet, source, sender, received_ms, dialect, rows, stored FROM delivery"
        " WHERE id = ?",
        delivery.delivery_id,
    )
    assert row[:4] == ("volts", "round.csv", "mira", NOW_MS)
    assert "decimal point" in row[4]
    assert row[5:] == (30, 30)


def test_good_rows_go_in_and_bad_ones_are_held_word_for_word(books):
    text = VOLTS + (
        "2024-03-05T06:00Z,EW1,1,2.013\n"
        "2024-03-05T06:00Z,EW7,1,2.013\n"
        "2024-03-05T06:00Z,EW1,11,2.013\n"
        '2024-03-05T06:00Z,EW1,2,"2,o41"\n'
        "2024-03-06T06:00Z,EW1,3,1.987\n"
        "2024-03-05T06:00Z,EW1,4,nan\n"
        "2024-03-05T06:00Z,EW1,5,inf\n"
        "2024-03-05T06:00Z,EW1,6\n"
        "2024-03-05T06:00Z,EW1,7,2.050\n"
    )

    result = books.file(text, "round.csv")

    assert (result.rows, result.stored, result.held) == (9, 2, 7)
    held = books.rows("SELECT line, column_name, raw, state FROM held_row ORDER BY id")
    assert [row[:2] for row in held] == [
        (3, "section"),
        (4, "cell"),
        (5, "volts"),
        (6, "at"),
        (7, "volts"),
        (8, "volts"),
        (9, ""),
    ]
    assert [row[2] for row in held] == text.splitlines()[2:9]
    assert {row[3] for row in held} == {"held"}


def test_a_held_row_is_held_once_however_often_it_comes(books):
    text = VOLTS + "2024-03-05T06:00Z,EW7,1,2.013\n" * 2

    results = [books.file(text) for _ in range(2)]

    assert [result.held for result in results] == [2, 2]
    assert books.rows("SELECT COUNT(*) FROM held_row") == [(1,)]


def test_another_value_under_a_stored_key_is_held_and_told(books):
    books.file(VOLTS + "2024-03-05T06:00Z,EW1,1,2.013\n", "round.csv")
    books.sender = "tomas"

    result = books.file(VOLTS + "2024-03-05T06:00Z,EW1,1,2.113\n")

    assert (result.stored, result.held) == (0, 1)
    ((reason,),) = books.rows("SELECT reason FROM held_row")
    assert "2.013" in reason
    assert "mira with round.csv on 2024-03-05 12:00" in reason
    assert "2.113" in reason
    assert books.series().volts.tolist() == [2.013]


@pytest.mark.parametrize(
    ("kind", "changed", "column"),
    [
        ("current", ("35.9", "34.9"), "current_ka"),
        ("counter", ("1234567.8", "1234568.8"), "counter_kah"),
        ("lots", ("2857.3", "2875.3"), "net_kg"),
        ("outages", ("T04:00", "T05:00"), "to"),
        ("electrolyte", ("45.2", "42.5"), "metal_g_l"),
        ("finds", ("nodule off", "straightened"), "action"),
    ],
)
def test_another_value_is_held_on_every_sheet(books, kind, changed, column):
    books.file(SHEETS[kind])

    result = books.file(SHEETS[kind].replace(*changed))

    assert (result.stored, result.held) == (0, 1)
    ((held_column, reason),) = books.rows("SELECT column_name, reason FROM held_row")
    assert held_column == column
    assert "mira with sheet.csv on 2024-03-05 12:00" in reason


@pytest.mark.parametrize(
    ("kind", "changed", "table", "value"),
    [
        ("volts", (",EW1,1,2.0", ",EW1,1,2.1"), "reading", "microvolts"),
        ("current", ("35.9", "34.9"), "current_sample", "amps"),
        ("counter", ("1234567.8", "1234568.8"), "counter_sample", "counter_c"),
        ("lots", ("2857.3", "2875.3"), "lot", "net_kg"),
        ("outages", ("T04:00", "T05:00"), "outage", "to_ms"),
        ("electrolyte", ("45.2", "42.5"), "electrolyte_sample", "metal_g_l"),
        ("finds", ("nodule off", "straightened"), "find", "action"),
    ],
)
def test_a_correction_with_a_reason_keeps_the_former_value(books, kind, changed, table, value):
    books.file(SHEETS[kind])
    former = {row[0] for row in books.rows(f"SELECT {value} FROM {table} WHERE revision = 0")}

    result = books.file(SHEETS[kind].replace(*changed), "mended.csv", reason="read wrongly")

    assert result.held == 0
    assert result.stored + result.duplicates == result.rows
    assert result.stored > 0
    corrected = books.rows(
        f"SELECT {value}, d.sender, d.reason FROM {table} t JOIN delivery d"
        " ON d.id = t.delivery_id WHERE revision = 1"
    )
    assert len(corrected) == result.stored
    assert {row[1:] for row in corrected} == {("mira", "read wrongly")}
    assert former == {r[0] for r in books.rows(f"SELECT {value} FROM {table} WHERE revision = 0")}


@pytest.mark.parametrize("kind", SHEETS)
def test_the_first_file_again_does_not_undo_a_correction(books, kind):
    books.file(SHEETS[kind])
    changes = {
        "volts": (",EW1,1,2.0", ",EW1,1,2.1"),
        "current": ("35.9", "34.9"),
        "counter": ("1234567.8", "1234568.8"),
        "lots": ("2857.3", "2875.3"),
        "outages": ("T04:00", "T05:00"),
        "electrolyte": ("45.2", "42.5"),
        "finds": ("nodule off", "straightened"),
    }
    books.file(SHEETS[kind].replace(*changes[kind]), reason="read wrongly")
    held = books.contents()

    result = books.file(SHEETS[kind])

    assert (result.stored, result.held) == (0, 0)
    assert books.contents() == held


def test_two_values_for_one_key_in_one_file_leave_the_first(books):
    result = books.file(
        VOLTS + "2024-03-05T06:00Z,EW1,1,2.013\n2024-03-05T06:00Z,EW1,1,2.113\n"
        "2024-03-05T06:00Z,EW1,1,2.013\n"
    )

    assert (result.stored, result.held, result.duplicates) == (1, 1, 1)
    ((line, reason),) = books.rows("SELECT line, reason FROM held_row")
    assert line == 3
    assert "2.013 in line 2" in reason


def test_the_order_of_the_rows_does_not_matter(books, tmp_path):
    records = rounds("EW1", LEVELS, 20)
    by_cell = sorted(records, key=lambda r: (r["cell"], r["at"]))

    books.file(as_csv(records))
    in_time = books.series()
    again = books.file(as_csv(by_cell[::-1]))

    assert again.duplicates == len(records)
    assert len(in_time) == len(records)
    assert books.series().volts.tolist() == in_time.volts.tolist()


@pytest.fixture
def small_blocks(monkeypatch):
    """Files are read some dozens of rows at a time."""
    monkeypatch.setattr(delimited, "BLOCK_BYTES", 1500)


def test_a_long_file_goes_in_over_several_transactions(books, small_blocks):
    records = rounds("EW1", LEVELS, 40)
    seen = []

    take_in_file(
        books.database,
        books.house,
        io.BytesIO(as_csv(records).encode()),
        "long.csv",
        "mira",
        NOW_MS,
        books.settings,
        progress=lambda done, total: seen.append((done, total)),
    )

    assert len(books.series()) == 400
    assert len(seen) > 5
    assert seen[-1][0] == seen[-1][1]
    assert books.rows("SELECT rows, stored FROM delivery ORDER BY id DESC")[0] == (400, 400)


def test_a_stop_half_way_loses_nothing_and_the_rest_goes_in_later(books, small_blocks, monkeypatch):
    text = as_csv(rounds("EW1", LEVELS, 40))

    class PowerCut(Exception):
        pass

    def cut(done, _total):
        if done > len(text) // 2:
            raise PowerCut

    with pytest.raises(PowerCut):
        take_in_file(
            books.database,
            books.house,
            io.BytesIO(text.encode()),
            "long.csv",
            "mira",
            NOW_MS,
            books.settings,
            progress=cut,
        )
    before = books.series()
    ((_, _, from_ms, to_ms),) = books.stale()
    rest = books.file(text, "long.csv")

    assert 0 < len(before) < 400
    assert (from_ms, to_ms) == (before.at_ms.min(), before.at_ms.max() + 1)
    assert rest.duplicates == len(before)
    assert rest.stored == 400 - len(before)


def test_a_bad_byte_far_down_refuses_the_whole_file(books, small_blocks):
    text = as_csv(rounds("EW1", LEVELS, 40)).encode() + b"2024-03-05T06:00Z,EW1,1,2.0\xff3\n"

    with pytest.raises(FileRefused, match="UTF-8"):
        books.file(text)

    assert len(books.series()) == 0
    assert books.rows("SELECT COUNT(*) FROM delivery WHERE source <> 'form'") == [(0,)]


@pytest.mark.parametrize(
    ("content", "code"),
    [
        (b"", "empty"),
        (b"\n\n", "empty"),
        (b"%PDF-1.7\n", "other_kind"),
        (b"name,age\nana,3\n", "columns"),
        (b"PK\x05\x06" + b"\0" * 18, "other_kind"),
    ],
)
def test_what_is_no_sheet_is_refused_and_leaves_no_trace(books, content, code):
    held = books.rows("SELECT COUNT(*) FROM delivery")

    with pytest.raises(FileRefused) as refused:
        books.file(content)

    assert refused.value.code == code
    assert books.rows("SELECT COUNT(*) FROM delivery") == held


def test_a_gibibyte_is_refused_unread(books, tmp_path):
    path = tmp_path / "huge.csv"
    path.write_text(VOLTS)
    os.truncate(path, 1 << 30)

    with pytest.raises(FileRefused) as refused:
        take_in_file(books.database, books.house, path, path.name, "mira", NOW_MS, books.settings)

    assert refused.value.code == "too_large"


def test_a_stream_that_cannot_be_rewound_goes_in(books):
    class Pipe(io.BytesIO):
        def seekable(self):
            return False

    result = take_in_file(
        books.database,
        books.house,
        Pipe(SHEETS["volts"].encode()),
        "pipe.csv",
        "mira",
        NOW_MS,
        books.settings,
    )

    assert result.stored == 30


def test_every_worksheet_is_a_delivery_of_its_own(books):
    content = io.BytesIO()
    workbook = xlsxwriter.Workbook(content)
    for name in ("volts", "current"):
        worksheet = workbook.add_worksheet(name)
        for number, line in enumerate(SHEETS[name].splitlines()):
            for column, text in enumerate(line.split(",")):
                is_number = column >= 2 and number > 0
                worksheet.write(number, column, float(text) if is_number else text)
    workbook.close()

    result = books.file(content.getvalue(), "shift.xlsx")

    # The current first: voltages are judged by it.
    assert [d.sheet for d in result.deliveries] == ["current", "volts"]
    assert [d.worksheet for d in result.deliveries] == ["current", "volts"]
    assert result.stored == 32
    assert ("shift.xlsx, volts",) in books.rows("SELECT source FROM delivery")


def test_a_held_row_of_a_file_with_decimal_commas_is_kept_with_a_point(books):
    books.file("at;section;cell;volts\n2024-03-05T06:00Z;EW7;1;2,013\n")

    ((fields, raw),) = books.rows("SELECT fields, raw FROM held_row")
    assert raw == "2024-03-05T06:00Z;EW7;1;2,013"
    assert '"volts": "2.013"' in fields


def test_a_preview_tells_all_and_stores_nothing(books):
    books.file(as_csv(rounds("EW1", LEVELS, 10)))
    held = books.contents(), books.rows("SELECT COUNT(*) FROM delivery")
    text = VOLTS + (
        "2024-03-05T06:00Z,EW1,1,2014\n"
        "2024-03-05T06:00Z,EW1,2,2.040\n"
        "2024-03-05T06:00Z,EW9,3,2.040\n" + f"{iso(NOW_MS - 80 * HOUR_MS)},EW1,1,2.009\n"
    )

    preview = books.preview(text, "round.csv")

    (sheet,) = preview.sheets
    assert (sheet.sheet, sheet.rows, sheet.new, sheet.held, sheet.duplicates, sheet.suspect) == (
        "volts",
        4,
        2,
        1,
        1,
        1,
    )
    assert "commas" in sheet.dialect
    assert sheet.first_held[0].line == 4
    assert sheet.first_held[0].column == "section"
    assert sheet.first_suspect[0].suggested == "2.014"
    assert (sheet.first_ms, sheet.last_ms) == (NOW_MS - 80 * HOUR_MS, NOW_MS - 6 * HOUR_MS)
    assert (books.contents(), books.rows("SELECT COUNT(*) FROM delivery")) == held


def test_a_file_may_be_asked_for_by_its_path(books, tmp_path):
    path = tmp_path / "volts.csv"
    path.write_text(SHEETS["volts"])

    result = take_in_file(
        books.database, books.house, path, path.name, "mira", NOW_MS, books.settings
    )

    assert result.stored == 30
    with books.database.read() as session:
        ((digest,),) = fetch_rows(
            session, "SELECT sha256 FROM delivery WHERE source = ?", ("volts.csv",)
        )
    assert len(digest) == 64
