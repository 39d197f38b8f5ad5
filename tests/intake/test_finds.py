import pytest


def find(**given):
    return {
        "at": "2024-03-05T07:00Z",
        "section": "EW1",
        "cell": 3,
        "cathode": 12,
        "found": "short",
        "action": "nodule off",
    } | given


def test_a_find_is_kept(books):
    books.records("finds", find(), find(cell=4, cathode=None, found="Nothing", action=""))

    assert books.rows(
        "SELECT c.number, f.cathode, f.found, f.action FROM find f JOIN cell c"
        " ON c.id = f.cell_id ORDER BY c.number"
    ) == [(3, 12, "short", "nodule off"), (4, 0, "nothing", "")]


@pytest.mark.parametrize(
    ("given", "column"),
    [
        ({"cathode": 61}, "cathode"),
        ({"cathode": 0}, "cathode"),
        ({"cell": 11}, "cell"),
        ({"found": "gremlin"}, "found"),
        ({"section": "EW9"}, "section"),
    ],
)
def test_a_find_that_cannot_be_is_held(books, given, column):
    (result,) = books.records("finds", find(**given))

    assert result.status == "held"
    assert books.rows("SELECT column_name FROM held_row") == [(column,)]


def test_two_cathodes_of_a_cell_are_two_finds(books):
    results = books.records("finds", find(), find(cathode=13))

    assert [result.status for result in results] == ["stored", "stored"]
