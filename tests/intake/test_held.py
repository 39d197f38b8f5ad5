import pytest

from server.intake.held import drop, held_counts, held_row, held_rows, mend
from server.storage.errors import Conflict, NotFound
from tests.factories import NOW_MS
from tests.intake.conftest import VOLTS

BAD = "2024-03-05T06:00Z,EW1,1,2.o13"


def held_id(books):
    with books.database.read() as session:
        return held_rows(session)[0].id


def mended(books, fields, reason="", who="ines"):
    with books.database.write() as session:
        return mend(
            session,
            books.house,
            held_id(books),
            fields,
            who,
            NOW_MS + 1,
            books.settings,
            reason,
        )


def test_a_held_row_tells_all_that_is_needed_to_mend_it(books):
    books.file(VOLTS + BAD + "\n", "round.csv")

    with books.database.read() as session:
        (row,) = held_rows(session)
        assert held_row(session, row.id) == row

    assert (row.sheet, row.source, row.sender, row.line) == ("volts", "round.csv", "mira", 2)
    assert (row.column, row.found, row.raw, row.state) == ("volts", "2.o13", BAD, "held")
    assert row.expected
    assert row.fields == {
        "at": "2024-03-05T06:00Z",
        "section": "EW1",
        "cell": "1",
        "volts": "2.o13",
    }


def test_held_rows_come_newest_first_and_page_by_page(books):
    books.file(VOLTS + "".join(f"2024-03-05T06:00Z,EW1,{n},bad\n" for n in range(1, 6)))

    with books.database.read() as session:
        first = held_rows(session, limit=3)
        rest = held_rows(session, limit=3, before_id=first[-1].id)

    assert [row.line for row in (*first, *rest)] == [6, 5, 4, 3, 2]


def test_held_rows_are_counted_by_sheet(books):
    books.file(VOLTS + BAD + "\n")
    books.record("current", at="x", section="EW1", current_ka=3)

    with books.database.read() as session:
        assert held_counts(session) == {"current": 1, "volts": 1}
        assert [row.sheet for row in held_rows(session, "current")] == ["current"]


def test_a_mended_row_goes_in_under_the_name_of_who_mended_it(books):
    books.file(VOLTS + BAD + "\n", "round.csv")
    with books.database.read() as session:
        (row,) = held_rows(session)

    answer = mended(books, {**row.fields, "volts": "2.013"})

    assert answer.status == "stored"
    assert books.series().volts.tolist() == [2.013]
    assert books.rows("SELECT source, sender FROM delivery ORDER BY id DESC")[0] == (
        "round.csv, line 2, mended",
        "ines",
    )
    with books.database.read() as session:
        assert held_rows(session) == []
        (done,) = held_rows(session, state="mended")
    assert (done.decided_by, done.decided_ms, done.raw) == ("ines", NOW_MS + 1, BAD)


def test_a_row_that_is_still_wrong_stays_held_once(books):
    books.file(VOLTS + BAD + "\n")

    answer = mended(
        books, {"at": "2024-03-05T06:00Z", "section": "EW9", "cell": "1", "volts": "2.013"}
    )

    assert answer.status == "held"
    assert "EW9" in answer.reason
    assert books.rows("SELECT state FROM held_row") == [("held",)]
    assert len(books.series()) == 0


def test_a_mended_row_may_turn_out_to_be_known(books):
    good = {"at": "2024-03-05T06:00Z", "section": "EW1", "cell": "1", "volts": "2.013"}
    books.record("volts", **good)
    books.file(VOLTS + BAD + "\n")

    answer = mended(books, good)

    assert answer.status == "duplicate"
    assert books.rows("SELECT state FROM held_row") == [("mended",)]


def test_a_row_held_for_its_value_goes_in_with_a_reason(books):
    key = {"at": "2024-03-05T06:00Z", "section": "EW1", "cell": "1"}
    books.record("volts", **key, volts="2.013")
    books.record("volts", **key, volts="2.031")

    without = mended(books, {**key, "volts": "2.031"})
    with_reason = mended(books, {**key, "volts": "2.031"}, "the first was misread")

    assert (without.status, with_reason.status) == ("held", "stored")
    assert books.series().volts.tolist() == [2.031]


def test_a_slip_in_a_mended_row_is_doubted(books):
    books.file(VOLTS + BAD + "\n")

    answer = mended(
        books, {"at": "2024-03-05T06:00Z", "section": "EW1", "cell": "1", "volts": "2013"}
    )

    assert answer.status == "suspect"
    assert books.rows("SELECT state FROM suspicion") == [("open",)]


def test_a_dropped_row_keeps_who_when_and_why(books):
    books.file(VOLTS + BAD + "\n")

    with books.database.write() as session:
        drop(session, held_rows(session)[0].id, "ines", " a blot ", NOW_MS + 1)

    with books.database.read() as session:
        (row,) = held_rows(session, state="dropped")
    assert (row.decided_by, row.decided_why, row.decided_ms) == ("ines", "a blot", NOW_MS + 1)


def test_a_dropped_row_that_comes_again_stays_dropped(books):
    books.file(VOLTS + BAD + "\n")
    with books.database.write() as session:
        drop(session, held_rows(session)[0].id, "ines", "a blot", NOW_MS)

    result = books.file(VOLTS + BAD + "\n")

    assert (result.held, result.duplicates) == (0, 1)
    assert books.rows("SELECT state FROM held_row") == [("dropped",)]


def test_a_decision_is_made_once(books):
    books.file(VOLTS + BAD + "\n")
    number = held_id(books)
    with books.database.write() as session:
        drop(session, number, "ines", "a blot", NOW_MS)

    with books.database.write() as session, pytest.raises(Conflict, match="dropped by ines"):
        drop(session, number, "tomas", "mine", NOW_MS)


def test_a_row_is_not_dropped_without_a_reason(books):
    books.file(VOLTS + BAD + "\n")
    number = held_id(books)

    with books.database.write() as session, pytest.raises(Conflict, match="reason"):
        drop(session, number, "ines", "  ", NOW_MS)


def test_a_row_that_never_was_is_not_found(books):
    with books.database.read() as session, pytest.raises(NotFound):
        held_row(session, 7)
