import io

import pytest

from server.intake import delimited
from server.intake.errors import FileRefused
from server.intake.sheets import Limits, open_sheets

HEADER = "at,section,cell,volts"


def rows_of(content, **limits):
    """All rows of a file as (line, fields), its errors as (line, code), and its sheet."""
    data = content if isinstance(content, bytes) else content.encode()
    with open_sheets(io.BytesIO(data), "volts.csv", limits=Limits(**limits)) as file:
        (sheet,) = file.sheets
        rows, errors = [], []
        for chunk in sheet.chunks():
            columns = zip(*chunk.columns.values(), strict=True)
            rows += zip(chunk.lines.tolist(), columns, strict=True)
            errors += [(error.line, error.code) for error in chunk.errors]
    return rows, errors, sheet


def raw_of(content):
    with open_sheets(io.BytesIO(content.encode()), "finds.csv") as file:
        return [
            line
            for chunk in file.sheets[0].chunks()
            for line in [*chunk.raw, *(error.raw for error in chunk.errors)]
        ]


def row(cell, volts="2.03"):
    return ("t", "EW1", str(cell), volts)


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
@pytest.mark.parametrize("last", [True, False])
def test_any_line_end_and_a_byte_order_mark_are_taken(end, mark, last):
    lines = [HEADER, "t,EW1,1,2.03", "t,EW1,2,2.03"]

    rows, errors, sheet = rows_of(mark + (end.join(lines) + end * last).encode())

    assert rows == [(2, row(1)), (3, row(2))]
    assert errors == []
    assert sheet.dialect.encoding_mark is bool(mark)


@pytest.mark.parametrize("size", [1, 2, 3, 7, 16, 64, 1000])
@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
def test_it_does_not_matter_where_blocks_are_cut(monkeypatch, size, end):
    monkeypatch.setattr(delimited, "BLOCK_BYTES", 100)
    header = f"{HEADER},action{end}"
    lines = [
        "t,EW1,1,2.03,",
        't,EW1,2,2.03,"two\nlines, and a ""mark"""',
        "",
        "t,EW1,3",
        't,"EW1","4",2.03,ü',
        't,EW1,5,"2.03,never closed',
        "t,EW1,6,2.03,",
    ]
    content = (header + end.join(lines)).encode()

    def read():
        return rows_of(content)

    monkeypatch.setattr(delimited, "BLOCK_BYTES", max(size, len(header)))
    rows, errors, _ = read()

    assert rows == [(2, row(1)), (3, row(2)), (7, row(4)), (9, row(6))]
    assert errors == [(6, "fields"), (8, "quotes")]


def test_fields_may_stand_in_any_order_and_unknown_ones_are_reported():
    rows, _, sheet = rows_of("volts,remark,cell,section,At \n2.03,x,1,EW1,t\n")

    assert rows == [(2, ("2.03", "1", "EW1", "t"))]
    assert sheet.unknown_columns == ("remark",)
    assert sheet.columns == ("volts", "cell", "section", "at")


def test_rows_of_the_wrong_length_are_errors_of_the_row():
    rows, errors, _ = rows_of(f"{HEADER}\nt,EW1,1\nt,EW1,2,2.03\nt,EW1,3,2.03,5\n")

    assert rows == [(3, row(2))]
    assert errors == [(2, "fields"), (4, "fields")]


def test_the_error_of_a_row_says_where_what_and_what_was_expected():
    with open_sheets(io.BytesIO(f"{HEADER}\nt,EW1,1\n".encode()), "volts.csv") as file:
        (chunk,) = file.sheets[0].chunks()

    (error,) = chunk.errors
    assert (error.file, error.line, error.raw) == ("volts.csv", 2, "t,EW1,1")
    assert error.reason == "The row has 3 fields; expected 4, as in the header."
    assert error.fields == {"at": "t", "section": "EW1", "cell": "1"}


def test_blank_rows_and_separators_after_the_last_field_do_no_harm():
    rows, errors, _ = rows_of(f"\n{HEADER}\n\nt,EW1,1,2.03,,\n,,,\n  \nt,EW1,2,2.03\n\n")

    assert rows == [(4, row(1)), (7, row(2))]
    assert errors == []


def test_a_quotation_mark_that_is_never_closed_costs_one_row_only():
    good = [f"t,EW1,{cell},2.03" for cell in range(1, 200)]
    lines = [HEADER, *good[:50], 't,"EW1,0,2.03', *good[50:]]

    rows, errors, _ = rows_of("\n".join(lines))

    assert [fields for _, fields in rows] == [row(cell) for cell in range(1, 200)]
    assert errors == [(52, "quotes")]


def test_a_file_with_everything_in_quotes_is_read():
    rows, errors, _ = rows_of('"at","section","cell","volts"\r\n"t","EW1","1","2.03"\r\n')

    assert rows == [(2, row(1))]
    assert errors == []


def test_words_of_a_row_are_kept_as_they_are():
    header = "at,section,cell,found,action\n"
    lines = ['t, EW1 ,1,short,"hook, bent', '""again"""', "t,EW1,2", "t,EW1,3,short,größer"]

    assert raw_of(header + "\n".join(lines)) == ["\n".join(lines[:2]), lines[2], lines[3]]


def test_an_oversize_field_is_an_error_of_the_row():
    long = "x" * 5000

    rows, errors, _ = rows_of(f"{HEADER}\nt,EW1,1,2.03\nt,{long},2,2.03\nt,EW1,3,2.03\n")

    assert rows == [(2, row(1)), (4, row(3))]
    assert errors == [(3, "long_field")]


def test_an_oversize_row_is_an_error_of_the_row():
    long = ",".join(["x"] * 40_000)

    rows, errors, _ = rows_of(f"{HEADER}\nt,EW1,1,2.03\n{long}\n")

    assert rows == [(2, row(1))]
    assert errors == [(3, "long_field")]


def test_a_line_that_does_not_end_is_refused_with_its_number(monkeypatch):
    monkeypatch.setattr(delimited, "BLOCK_BYTES", 1 << 16)

    with pytest.raises(FileRefused) as caught:
        rows_of(f"{HEADER}\nt,EW1,1,2.03\n" + "x" * 300_000)

    assert (caught.value.code, caught.value.line) == ("long_line", 3)


@pytest.mark.parametrize("end", ["\n", "\r\n"])
def test_a_byte_that_is_not_utf_8_is_refused_with_line_and_byte(end):
    content = end.join([HEADER, "t,EW1,1,2.03", "t,Söderberg,2,2.03"]).encode("latin-1")

    with pytest.raises(FileRefused) as caught:
        rows_of(content)

    assert (caught.value.code, caught.value.line) == ("encoding", 3)
    assert f"byte {content.index(0xF6) + 1} of the file (0xF6)" in str(caught.value)


def test_a_bad_byte_deep_in_the_file_is_met_while_reading(monkeypatch):
    monkeypatch.setattr(delimited, "BLOCK_BYTES", 100)
    content = f"{HEADER}\n".encode() + b"t,EW1,1,2.03\n" * 100 + b"t,\xff,1,2.03\n"

    with open_sheets(io.BytesIO(content), "volts.csv") as file:
        chunks = file.sheets[0].chunks()
        assert len(next(chunks)) > 0
        with pytest.raises(FileRefused) as caught:
            list(chunks)

    assert caught.value.line == 102


def test_a_nul_byte_is_refused_with_its_line():
    with pytest.raises(FileRefused) as caught:
        rows_of(f"{HEADER}\nt,EW1,1,2.03\nt,EW1\0,2,2.03\n")

    assert (caught.value.code, caught.value.line) == ("nul", 3)


def test_decimal_commas_without_quotes_among_commas_are_refused():
    with pytest.raises(FileRefused) as caught:
        rows_of(f"{HEADER}\nt,EW1,1,2,03\nt,EW1,2,2,04\n")

    assert (caught.value.code, caught.value.line) == ("decimals_unquoted", 2)


def test_decimal_commas_in_quotes_among_commas_are_taken():
    rows, _, sheet = rows_of(f'{HEADER}\nt,EW1,1,"2,03"\n')

    assert rows == [(2, row(1, "2,03"))]
    assert sheet.dialect.decimal == ","


def test_a_header_alone_is_a_sheet_without_rows():
    rows, errors, sheet = rows_of(HEADER)

    assert (rows, errors, sheet.kind) == ([], [], "volts")


def test_a_sheet_can_be_read_again():
    with open_sheets(io.BytesIO(f"{HEADER}\nt,EW1,1,2.03\n".encode()), "volts.csv") as file:
        (sheet,) = file.sheets
        counts = [sum(len(chunk) for chunk in sheet.chunks()) for _ in range(2)]

    assert counts == [1, 1]


def test_the_way_through_the_file_is_told(monkeypatch):
    monkeypatch.setattr(delimited, "BLOCK_BYTES", 100)
    content = f"{HEADER}\n".encode() + b"t,EW1,1,2.03\n" * 100

    with open_sheets(io.BytesIO(content), "volts.csv") as file:
        (sheet,) = file.sheets
        read = [chunk.bytes_read for chunk in sheet.chunks()]

    assert read == sorted(read)
    assert read[-1] == sheet.size_bytes == len(content)
