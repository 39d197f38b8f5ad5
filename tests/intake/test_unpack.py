import io
import struct
import tracemalloc
import zipfile

import pytest
import xlsxwriter

from server.intake.errors import FileRefused
from server.intake.sheets import Limits, open_sheets
from server.intake.unpack import safe_workbook

HEADER = ["at", "section", "cell", "volts"]
SHEET = "xl/worksheets/sheet1.xml"
TEXTS = "xl/sharedStrings.xml"


def parts(rows=()):
    """The parts of a good workbook, by name."""
    packed = io.BytesIO()
    with xlsxwriter.Workbook(packed, {"in_memory": True}) as book:
        sheet = book.add_worksheet("volts")
        for place, row in enumerate([HEADER, *rows]):
            sheet.write_row(place, 0, row)
    with zipfile.ZipFile(packed) as archive:
        return {name: archive.read(name) for name in archive.namelist()}


def packed(contents, compression=zipfile.ZIP_DEFLATED):
    archived = io.BytesIO()
    with zipfile.ZipFile(archived, "w", compression) as archive:
        for name, content in contents.items():
            archive.writestr(name, content)
    archived.seek(0)
    return archived


def refusal_of(stream, **limits):
    with (
        pytest.raises(FileRefused) as caught,
        open_sheets(stream, "readings.xlsx", limits=Limits(**limits)) as file,
    ):
        assert file
    return caught.value


def with_cells(cells):
    """A worksheet part holding this XML in place of its rows."""
    return (
        '<worksheet xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main">'
        f"<sheetData>{cells}</sheetData></worksheet>"
    ).encode()


def test_a_good_workbook_goes_through_with_what_is_needed_of_it():
    stream = packed(parts([["t", "EW1", 1, 2.0]]) | {"xl/media/image1.png": b"x", "junk.txt": b"x"})

    with zipfile.ZipFile(safe_workbook(stream, file="a.xlsx", limits=Limits())) as archive:
        names = archive.namelist()

    assert {SHEET, TEXTS, "xl/workbook.xml", "xl/styles.xml", "[Content_Types].xml"} <= set(names)
    assert not {"xl/media/image1.png", "junk.txt", "docProps/core.xml"} & set(names)


def test_a_bomb_is_refused_by_what_its_directory_says():
    bomb = parts() | {SHEET: with_cells(" " * (65 << 20))}

    refusal = refusal_of(packed(bomb))

    assert refusal.code == "workbook_swells"


def test_a_small_bomb_is_refused_by_its_ratio():
    bomb = parts() | {SHEET: with_cells(" " * (8 << 20))}

    refusal = refusal_of(packed(bomb))

    assert refusal.code == "workbook_swells"
    assert "times its size" in str(refusal)


def test_shared_texts_are_weighed_too():
    texts = f'<sst xmlns="x"><si><t>{"x" * 200_000}</t></si></sst>'.encode()

    refusal = refusal_of(packed(parts() | {TEXTS: texts}))

    assert "a text of 200000 characters" in str(refusal)


def test_a_long_text_shown_in_many_cells_is_refused():
    texts = f'<sst xmlns="x"><si><t>{"x" * 30_000}</t></si></sst>'.encode()
    cells = "".join(f'<row r="{i}"><c r="A{i}" t="s"><v>0</v></c></row>' for i in range(1, 5000))

    refusal = refusal_of(packed(parts() | {TEXTS: texts, SHEET: with_cells(cells)}))

    assert refusal.code == "workbook_swells"
    assert "MiB of text" in str(refusal)


@pytest.mark.parametrize(
    "cells",
    [
        '<row r="1"><c r="A1"><v>1</v></c></row><row r="1048576"><c r="XFD1048576"/></row>',
        '<row r="1048576"><c r="XFD1048576"/></row>',
        '<row r="1048576"><c/></row><row r="1"><c r="XFD1"/></row>',
        '<row r="9999999"><c r="Z9999999"/></row>',
    ],
)
def test_two_cells_far_apart_do_not_ask_for_a_table_of_millions(cells):
    refusal = refusal_of(packed(parts() | {SHEET: with_cells(cells)}))

    assert refusal.code == "workbook_swells"
    assert "rows by" in str(refusal)


@pytest.mark.parametrize("reference", ["a1", "$A$1", "AAAA1", "A", "1", "A99999999", "A-1", "Ａ1"])
def test_strange_references_are_refused(reference):
    cells = f'<row r="1"><c r="{reference}"><v>1</v></c></row>'

    assert refusal_of(packed(parts() | {SHEET: with_cells(cells)})).code == "workbook_damaged"


def test_entities_that_swell_are_refused():
    laughs = b'<?xml version="1.0"?><!DOCTYPE x [<!ENTITY a "aaaa"><!ENTITY b "&a;&a;">]><x>&b;</x>'

    refusal = refusal_of(packed(parts() | {SHEET: laughs}))

    assert refusal.code == "workbook_unsafe"
    assert "a document type declaration" in str(refusal)


def test_xml_that_only_looks_like_another_encoding_is_refused():
    sheet = with_cells("<row/>").decode()

    refusal = refusal_of(
        packed(
            parts() | {SHEET: f'<?xml version="1.0" encoding="UTF-16"?>{sheet}'.encode("utf-16")}
        )
    )

    assert refusal.code == "workbook_damaged"


def test_shared_texts_under_another_name_are_refused():
    texts = b'<sst xmlns="x"><si><t>x</t></si></sst>'

    refusal = refusal_of(packed(parts() | {"xl/texts.xml": texts}))

    assert refusal.code == "workbook_unsafe"


def test_a_size_that_is_a_lie_is_found_while_unpacking():
    """The directory says that the worksheet unpacks to a hundred bytes."""
    content = with_cells(" " * 3_000_000)
    stream = packed(parts() | {SHEET: content})
    true, false = struct.pack("<L", len(content)), struct.pack("<L", 100)
    lying = io.BytesIO(stream.getvalue().replace(true, false))

    refusal = refusal_of(lying)

    assert refusal.code == "workbook_damaged"


def test_too_many_parts_are_refused():
    many = parts() | {f"xl/worksheets/extra{i}.xml": b"<x/>" for i in range(1200)}

    assert "parts" in str(refusal_of(packed(many)))


def test_a_directory_of_a_million_entries_is_refused_unread():
    entry = b"PK\x01\x02" + bytes(42)
    directory = entry * 100_000
    end = b"PK\x05\x06" + struct.pack("<4H2LH", 0, 0, 0xFFFF, 0xFFFF, len(directory), 4, 0)
    stream = io.BytesIO(b"PK\x03\x04" + directory + end)

    tracemalloc.start()
    refusal = refusal_of(stream)
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()

    assert refusal.code == "workbook_swells"
    assert peak < 2 << 20


def test_two_parts_of_one_name_are_refused():
    stream = packed(parts())
    with (
        zipfile.ZipFile(stream, "a") as archive,
        pytest.warns(UserWarning, match="Duplicate name"),
    ):
        archive.writestr(SHEET, with_cells(""))

    assert "two parts of one name" in str(refusal_of(stream))


def test_a_locked_part_is_refused_as_locked():
    content = bytearray(packed(parts()).getvalue())
    place = content.index(b"PK\x01\x02")
    content[place + 8] |= 1

    assert refusal_of(io.BytesIO(bytes(content))).code == "workbook_locked"


@pytest.mark.parametrize("share", [0.3, 0.6, 0.9, 0.99])
def test_a_workbook_cut_short_is_refused(share):
    whole = packed(parts([["t", "EW1", 1, 2.0]] * 100)).getvalue()

    refusal = refusal_of(io.BytesIO(whole[: int(len(whole) * share)]))

    assert refusal.code in {"other_kind", "workbook_damaged"}


@pytest.mark.parametrize(
    "content", [b"", b"not xml", b"<worksheet>", b"<worksheet><sheetData></worksheet>"]
)
def test_faulty_xml_is_refused(content):
    assert refusal_of(packed(parts() | {SHEET: content})).code == "workbook_damaged"


def test_a_workbook_without_its_worksheet_is_refused():
    contents = parts()
    del contents[SHEET]

    assert refusal_of(packed(contents)).code == "workbook_damaged"


@pytest.mark.parametrize(
    "cells",
    [
        '<row r="1"><c r="A1" r="XFD1048576"><v>1</v></c></row>',
        '<row r="1"><c r="A1" x=">" r="XFD1048576"><v>1</v></c></row>',
        '<row r="1"><c r="A1"/><c r=\'XFD1048576\'/></row>',
        '<row r="1"><c r="A1"/><c s="1" r="XFD1048576"/></row>',
        '<row r="1048576"><c r="A1"/></row><row><x:c xmlns:x="y" r="XFD1048576"/></row>',
        '<row r="1"><c r="A1"/></row><!-- --><row r="2"><c r="XFD1048576"/></row>',
        '<row r="1"><c r="&#88;FD1048576"/></row>',
    ],
)
def test_no_way_of_writing_a_far_cell_goes_unseen(cells):
    refusal = refusal_of(packed(parts() | {SHEET: with_cells(cells)}))

    assert refusal.code in {"workbook_swells", "workbook_damaged"}
