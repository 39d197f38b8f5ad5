import pytest

from tests.intake.test_plant_file import PLANT

SHEETS = {
    "volts.csv": "at,section,cell,volts\n2024-03-04T06:00Z,EW1,1,2.013\n"
    "2024-03-04T06:00Z,EW1,2,2.041\n",
    "current.csv": "at,section,current_ka\n2024-03-04T00:00Z,EW1,35.9\n"
    "2024-03-04T01:00Z,EW1,35.8\n2024-03-05T03:00Z,EW1,35.8\n",
    "outages.csv": "section,cells,from,to,state\n"
    "EW1,3-4,2024-03-04T02:00Z,2024-03-04T03:00Z,bypassed\n",
}


@pytest.fixture
def filled(terminal):
    """Books with two voltages and three currents."""
    terminal.init()
    for name, text in SHEETS.items():
        terminal.write(f"sheets/{name}", text)
    assert terminal.run("import", "sheets") == 0
    return terminal


def test_init_makes_the_books(bare_terminal):
    bare_terminal.init()

    assert "North House with 2 sections and 58 cells" in bare_terminal.said
    assert bare_terminal.rows("SELECT COUNT(*) FROM cell") == [(58,)]


def test_init_refuses_a_wrong_plant_file_and_makes_nothing(bare_terminal):
    terminal = bare_terminal
    plant = terminal.write("plant.toml", PLANT.replace("cells = 48", "cells = 0"))

    assert terminal.run("init", "--plant", plant) == 2
    assert "section EW1: cells: found 0; expected a number of cells" in terminal.complained
    assert terminal.run("check") == 1


def test_init_leaves_books_that_are_there_alone(terminal):
    terminal.init()

    assert terminal.run("init", "--plant", "plant.toml") == 2
    assert "holds a tankhouse already" in terminal.complained


@pytest.mark.parametrize("command", [("check",), ("import", "x.csv"), ("recompute",), ("serve",)])
def test_without_books_a_command_says_how_to_make_them(bare_terminal, command):
    assert bare_terminal.run(*command) == 1
    assert "ampledger init --plant FILE" in bare_terminal.complained


def test_check_finds_sound_books_sound(filled):
    assert filled.run("check") == 0
    assert "sound" in filled.said


@pytest.mark.parametrize(
    ("damage", "words"),
    [
        ("UPDATE charge_day SET before_c = before_c + 5 WHERE before_c > 0", "from day to day"),
        ("DELETE FROM charge_knot WHERE at_ms % 86400000 = 0", "no step at its start"),
        ("UPDATE charge_knot SET amps = amps + 1", "add up to the charge of their day"),
        ("UPDATE latest_reading SET microvolts = microvolts + 1", "newest reading of cell"),
        ("DELETE FROM bypassed_cell", "bypasses are not those of the outages"),
        ("UPDATE summary SET sum_uv = sum_uv + 1 WHERE level = 'day'", "summary of a day"),
    ],
)
def test_check_finds_what_is_wrong_and_recompute_mends_it(filled, damage, words):
    from server.storage.database import Database
    from server.storage.direct import execute

    database = Database(filled.url)
    with database.write() as session:
        execute(session, damage)
    database.close()

    assert filled.run("check") == 1
    assert words in filled.complained
    assert filled.run("recompute") == 0
    assert filled.run("check") == 0


@pytest.mark.parametrize(
    ("damage", "words"),
    [
        (
            "UPDATE reading SET delivery_id = 999",
            "point to a delivery that is not in the books (1 such)",
        ),
        (
            "UPDATE reading SET cell_id = 999 WHERE cell_id = 2",
            "point to a cell that is not in the books (1 such)",
        ),
    ],
)
def test_check_finds_readings_that_belong_to_nothing(filled, damage, words):
    from server.storage.database import Database
    from server.storage.direct import execute

    database = Database(filled.url)
    with database.write() as session:
        execute(session, damage)
    database.close()

    assert filled.run("check") == 1
    assert words in filled.complained


def test_check_tells_of_acts_whose_flag_is_raised_no_more(filled):
    from server.storage.database import Database
    from server.storage.direct import execute

    database = Database(filled.url)
    with database.write() as session:
        execute(
            session,
            "INSERT INTO flag_act (id, cell_id, kind, raised_ms, at_ms, who, act, reason)"
            " VALUES (1, 2, 'short', 1709532000000, 1709535600000, 'ana', 'seen', '')",
        )
    database.close()

    assert filled.run("check") == 0
    said = " ".join(filled.said.split())
    assert "EW1, cell 2: the flag “short” of 2024-03-04" in said
    assert "what people did about it is kept (1)" in said
    assert filled.run("recompute") == 0
    assert filled.rows("SELECT who, act FROM flag_act") == [("ana", "seen")]


def test_recompute_makes_the_same_figures_again(filled):
    tables = {
        "charge_day": "section_id, day_ms",
        "charge_knot": "section_id, at_ms",
        "energy_day": "section_id, day_ms",
        "summary": "section_id, level, start_ms",
        "latest_reading": "cell_id",
        "bypassed_cell": "cell_id, from_ms",
        "short_day": "section_id, day_ms",
    }

    def derived():
        return {
            table: filled.rows(f"SELECT * FROM {table} ORDER BY {order}")
            for table, order in tables.items()
        }

    before = derived()

    assert filled.run("recompute") == 0
    assert derived() == before
    assert before["charge_day"]
    assert before["summary"]


def test_a_wrong_setting_is_named(terminal, monkeypatch):
    monkeypatch.setenv("AMPLEDGER_MAX_HOLD_H", "99")

    assert terminal.run("check") == 2
    assert "AMPLEDGER_MAX_HOLD_H: found '99'" in terminal.complained


def test_a_file_that_is_no_database_is_told(terminal, monkeypatch):
    monkeypatch.setenv("AMPLEDGER_DATABASE_URL", "sqlite:///not.db")
    terminal.write("not.db", "these are no books, and they are longer than a header\n" * 50)

    assert terminal.run("check") == 1
    assert "none of ours" in terminal.complained


def test_the_version_is_told(terminal):
    from server import __version__

    assert terminal.run("--version") == 0
    assert terminal.said.strip() == __version__
