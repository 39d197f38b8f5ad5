import csv
import io
import tracemalloc
from zoneinfo import ZoneInfo

from hypothesis import given
from hypothesis import strategies as st

from server.intake import delimited
from server.intake.convert import Converter
from server.intake.errors import FileRefused
from server.intake.sheets import open_sheets

HEADER = ["at", "section", "cell", "found", "action"]
words = st.text(st.characters(exclude_categories=["Cs", "Cc"]) | st.just("\n"), max_size=20).filter(
    lambda text: text.count("\n") < 3
)
pieces = st.sampled_from(
    [b"at", b"section", b"cell", b"volts", b",", b";", b"\n", b"\r\n", b'"', b"2.03", b"2,03", b" "]
)


def rows_read(content, name="finds.csv"):
    """How many rows of a file were good, and how many were not."""
    good = bad = 0
    with open_sheets(io.BytesIO(content), name) as file:
        for sheet in file.sheets:
            converter = Converter(
                sheet.kind,
                zone=ZoneInfo("Europe/Warsaw"),
                now_ms=1_800_000_000_000,
                decimal=sheet.dialect.decimal,
            )
            for chunk in sheet.chunks():
                rows = converter.convert(chunk)
                good += len(rows)
                bad += len(rows.errors)
    return good, bad


def told_of(content):
    """How many rows there were, or why there were none."""
    try:
        good, bad = rows_read(content)
    except FileRefused as refusal:
        return refusal.reason
    return f"{good} good, {bad} bad"


@given(st.binary(max_size=200) | st.lists(pieces, max_size=60).map(b"".join))
def test_whatever_is_sent_is_read_or_refused(content):
    for head in (b"", b"at,section,cell,volts\n", b"\xef\xbb\xbfat;section;cell;volts\r\n"):
        assert told_of(head + content)


@given(
    st.text(
        st.characters(exclude_categories=["Cs", "Cc"]) | st.sampled_from('\n\r\t\x85,"'),
        max_size=200,
    )
)
def test_no_row_of_text_is_lost(content):
    """Every line that holds anything comes out as a row or as part of one, word for word."""
    text = "at,section,cell,found,action\nt,EW1,1,short,\n" + content
    with open_sheets(io.BytesIO(text.encode()), "finds.csv") as file:
        kept = [
            raw
            for chunk in file.sheets[0].chunks()
            for raw in [*chunk.raw, *(error.raw for error in chunk.errors)]
        ]

    lines = content.replace("\r\n", "\n").replace("\r", "\n").split("\n")
    told = {line for raw in kept for line in raw.split("\n")}
    assert {line for line in lines if line.strip(' ,"')} <= told | {""} | blank_of(lines)


def blank_of(lines):
    """Lines that hold nothing but what `str.strip` takes for blank."""
    return {line for line in lines if not line.replace(",", "").replace('"', "").strip()}


@given(
    st.lists(st.tuples(words, words), max_size=20),
    st.sampled_from([",", ";", "\t"]),
    st.sampled_from(["\n", "\r\n"]),
    st.sampled_from([csv.QUOTE_MINIMAL, csv.QUOTE_ALL]),
    st.integers(100, 300),
)
def test_what_a_csv_writer_writes_is_read(remarks, delimiter, end, quoting, block_bytes):
    written = io.StringIO(newline="")
    writer = csv.writer(written, delimiter=delimiter, lineterminator=end, quoting=quoting)
    writer.writerow(HEADER)
    for section, remark in remarks:
        writer.writerow(["t", section, "1", "short", remark])
    ordinary, delimited.BLOCK_BYTES = delimited.BLOCK_BYTES, block_bytes
    try:
        with open_sheets(io.BytesIO(written.getvalue().encode()), "finds.csv") as file:
            chunks = list(file.sheets[0].chunks())
    finally:
        delimited.BLOCK_BYTES = ordinary

    found = [
        pair
        for chunk in chunks
        for pair in zip(chunk.columns["section"], chunk.columns["action"], strict=True)
    ]
    assert found == remarks
    assert not any(chunk.errors for chunk in chunks)


def test_a_long_file_is_never_in_memory_as_a_whole(tmp_path, monkeypatch):
    monkeypatch.setattr(delimited, "BLOCK_BYTES", 1 << 16)
    path = tmp_path / "volts.csv"
    with path.open("w") as file:
        file.write("at,section,cell,volts\n")
        for _ in range(100):
            file.write("2026-03-01T02:00:00Z,EW1,1,2.031\n" * 1000)

    tracemalloc.start()
    with open_sheets(path) as file:
        converter = Converter("volts", zone=ZoneInfo("UTC"), now_ms=1_800_000_000_000)
        rows = sum(len(converter.convert(chunk)) for chunk in file.sheets[0].chunks())
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()

    assert rows == 100_000
    assert peak < path.stat().st_size
