import io
import zipfile

import pytest

from server.intake.errors import FileRefused
from server.intake.sheets import Limits, open_sheets, records_chunk

GOOD = b"at,section,cell,volts\n2026-03-01T02:00Z,EW1,1,2.03\n"


class Pipe(io.RawIOBase):
    """Bytes that come once, as those of a request do."""

    def __init__(self, content):
        self._content = io.BytesIO(content)

    def readable(self):
        return True

    def seekable(self):
        return False

    def readinto(self, buffer):
        return self._content.readinto(buffer)


class Endless(io.RawIOBase):
    """A stream without an end, that remembers how much of it was taken."""

    taken = 0

    def readable(self):
        return True

    def seekable(self):
        return False

    def readinto(self, buffer):
        buffer[:] = bytes(len(buffer))
        self.taken += len(buffer)
        return len(buffer)


class Gibibyte(io.BytesIO):
    """A stream that says it is 1 GiB long and must not be read for that."""

    def seek(self, offset, whence=0):
        return 1 << 30 if whence == 2 else super().seek(offset, whence)

    def read(self, size=-1):
        raise AssertionError("read before its size was looked at")


def refusal_of(content, name="sheet.csv", **limits):
    source = io.BytesIO(content) if isinstance(content, bytes) else content
    with (
        pytest.raises(FileRefused) as caught,
        open_sheets(source, name, limits=Limits(**limits)) as file,
    ):
        assert file
    return caught.value


def zipped(*names):
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w") as archive:
        for name in names:
            archive.writestr(name, "<x/>")
    return packed.getvalue()


def test_a_path_is_opened_under_its_own_name(tmp_path):
    path = tmp_path / "march.csv"
    path.write_bytes(GOOD)

    with open_sheets(path) as file:
        assert (file.name, file.size_bytes) == ("march.csv", len(GOOD))
        assert file.sheets[0].kind == "volts"


def test_a_stream_that_cannot_be_rewound_is_opened_too():
    with open_sheets(io.BufferedReader(Pipe(GOOD)), "sent.csv") as file:
        (chunk,) = file.sheets[0].chunks()

    assert chunk.columns["volts"] == ["2.03"]


def test_a_missing_file_and_a_folder_are_named_so(tmp_path):
    for path, code in ((tmp_path / "none.csv", "missing"), (tmp_path, "folder")):
        assert refusal_of(path, None).code == code


@pytest.mark.parametrize("content", [b"", b"\n\n", b"\xef\xbb\xbf", b"  \r\n", b",,,\n"])
def test_an_empty_file_is_refused(content):
    assert refusal_of(content).code == "empty"


@pytest.mark.parametrize(
    ("content", "kind"),
    [
        (b"%PDF-1.7 ...", "a PDF document"),
        (b"\x89PNG\r\n\x1a\n....", "a picture (PNG)"),
        (b"\xff\xd8\xff\xe0....", "a picture (JPEG)"),
        (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "an old Excel workbook (.xls)"),
        (b"\x1f\x8b\x08....", "a gzip archive"),
        (b"SQLite format 3\x00....", "an SQLite database"),
        ("at,section".encode("utf-16"), "text in UTF-16"),
        ("at,section".encode("utf-16-le"), "a binary file"),
        (bytes(range(256)), "a binary file"),
        (b"<!DOCTYPE html><html>", "a page or a data file of the web"),
        (b'{"readings": []}', "a page or a data file of the web"),
        (zipped("word/document.xml"), "a Word document"),
        (zipped("content.xml", "mimetype"), "an OpenDocument file"),
        (zipped("xl/workbook.bin"), "a binary Excel workbook (.xlsb)"),
        (zipped("volts.csv"), "a zip archive"),
        (b"PK\x03\x04 and then nothing", "a zip archive"),
    ],
)
def test_a_file_of_another_kind_is_refused_by_its_name(content, kind):
    refusal = refusal_of(content)

    assert refusal.code == "other_kind"
    assert kind in str(refusal)
    assert "a CSV file in UTF-8 or an Excel workbook (.xlsx)" in str(refusal)


def test_text_that_is_no_sheet_is_refused_for_its_columns():
    assert refusal_of(b"Dear all,\nthe readings are late today.\n").code == "columns"


def test_a_file_of_a_gibibyte_is_refused_unread():
    refusal = refusal_of(Gibibyte())

    assert refusal.code == "too_large"
    assert "1,024 MiB" in str(refusal)


def test_a_stream_without_an_end_is_read_no_further_than_the_limit():
    endless = Endless()

    refusal = refusal_of(io.BufferedReader(endless), max_bytes=3 << 20)

    assert refusal.code == "too_large"
    assert endless.taken <= 5 << 20


def test_a_sparse_file_of_a_gibibyte_is_refused(tmp_path):
    path = tmp_path / "volts.csv"
    with path.open("wb") as file:
        file.truncate(1 << 30)

    assert refusal_of(path).code == "too_large"


def test_every_refusal_names_the_file_and_makes_a_sentence():
    refusal = refusal_of(b"at,section,cell,volts\nt,\xff,1,2\n", "shift 2.csv")

    assert str(refusal) == (
        "shift 2.csv, line 2: byte 25 of the file (0xFF) is not UTF-8; expected UTF-8;"
        " in Excel, save as “CSV UTF-8”."
    )


def test_records_meet_the_same_checks_as_rows():
    chunk = records_chunk("volts", [{"at": "t", "cell": 7.0, "volts": 2.03}, {"volts": None}])

    assert chunk.columns == {
        "at": ["t", ""],
        "section": ["", ""],
        "cell": ["7", ""],
        "volts": ["2.03", ""],
    }
    assert chunk.lines.tolist() == [1, 2]
    assert chunk.raw[0] == "at: t, cell: 7, volts: 2.03"
