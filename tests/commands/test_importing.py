import pytest

VOLTS = "at,section,cell,volts\n"
GOOD = VOLTS + "2024-03-04T06:00Z,EW1,1,2.013\n"
CURRENT = "at,section,current_ka\n2024-03-04T05:00Z,EW1,35.9\n2024-03-04T06:00Z,EW1,35.8\n"


@pytest.fixture
def books(terminal):
    """A terminal with the books of a small plant."""
    terminal.init()
    return terminal


def test_a_folder_of_sheets_goes_in(books):
    books.write("sheets/volts.csv", GOOD)
    books.write("sheets/current.csv", CURRENT)
    books.write("sheets/notes.txt", "not a sheet")
    books.write("sheets/.hidden.csv", "not a sheet")

    assert books.run("import", "sheets") == 0
    assert books.rows("SELECT sheet, stored FROM delivery ORDER BY id") == [
        ("current", 2),
        ("volts", 1),
    ]
    assert "decimal point" in books.said
    assert books.rows("SELECT COUNT(*) FROM stale") == [(0,)]
    assert books.rows("SELECT COUNT(*) FROM latest_reading") == [(1,)]


def test_held_rows_end_with_three_and_are_shown(books):
    path = books.write("volts.csv", GOOD + "2024-03-04T06:00Z,EW9,1,2.013\n")

    assert books.run("import", path) == 3
    assert "volts.csv, line 3: There is no section “EW9”" in books.said
    assert books.rows("SELECT stored, held FROM delivery") == [(1, 1)]


def test_a_refused_file_ends_with_two_and_the_others_go_in(books):
    books.write("sheets/volts.csv", GOOD)
    books.write("sheets/people.csv", "name,age\nana,3\n")

    assert books.run("import", "sheets") == 2
    assert "people.csv" in books.complained
    assert books.rows("SELECT COUNT(*) FROM reading") == [(1,)]


@pytest.mark.parametrize(
    ("content", "words"),
    [("", "empty"), ("%PDF-1.7", "PDF"), (VOLTS.replace("volts", "vlts"), "volts")],
)
def test_a_file_that_is_no_sheet_says_why(books, content, words):
    path = books.write("x.csv", content)

    assert books.run("import", path) == 2
    assert words in books.complained


def test_a_file_that_is_not_there_is_told(books):
    assert books.run("import", "nowhere.csv") == 2
    assert "nowhere.csv: There is no such file." in books.complained


def test_an_empty_folder_is_told(books):
    (books.folder / "sheets").mkdir()

    assert books.run("import", "sheets") == 0
    assert "no sheet" in books.complained


def test_importing_twice_changes_nothing(books):
    path = books.write("volts.csv", GOOD)
    books.run("import", path)

    assert books.run("import", path) == 0
    assert books.rows("SELECT COUNT(*) FROM reading") == [(1,)]
    assert books.rows("SELECT stored, duplicates FROM delivery ORDER BY id DESC")[0] == (0, 1)


def test_a_correction_is_imported_with_a_reason(books):
    books.run("import", books.write("volts.csv", GOOD))
    path = books.write("mended.csv", GOOD.replace("2.013", "2.031"))

    without = books.run("import", path)
    with_reason = books.run("import", path, "--reason", "misread")

    assert (without, with_reason) == (3, 0)
    assert books.rows("SELECT microvolts FROM reading ORDER BY revision") == [
        (2_013_000,),
        (2_031_000,),
    ]
