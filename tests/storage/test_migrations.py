"""The tables climb from nothing to the newest and step down again, on both databases."""

import ast

import pytest
from alembic.autogenerate import compare_metadata
from alembic.migration import MigrationContext
from alembic.script import ScriptDirectory
from sqlalchemy import inspect

from server.settings import MIGRATIONS
from server.storage.database import Database
from server.storage.tables import METADATA

REVISIONS = [
    revision.revision
    for revision in reversed(list(ScriptDirectory(str(MIGRATIONS)).walk_revisions()))
]

OLD_PLANT = (
    "INSERT INTO house_terms (from_ms, energy_price_per_kwh, changed_ms, changed_by, why)"
    " VALUES (0, 0.09, 1, 'ana', 'as in the plant file')",
    "INSERT INTO section (id, name, process, metal, electrons)"
    " VALUES (1, 'EW1', 'copper electrowinning', 'Cu', 2)",
    "INSERT INTO section_terms (section_id, from_ms, cells, rows, cathodes_per_cell,"
    " cathode_area_m2, rated_amps, metal_value_per_kg, meter_accuracy_v, current_accuracy,"
    " scale_accuracy, walk_order, target_current_efficiency, target_specific_energy_j_kg,"
    " low_volts, high_volts, changed_ms, changed_by, why) VALUES (1, 0, 48, 2, 60, 2.0, 36000.0,"
    " 9.2, 0.002, 0.005, 0.002, '', 0.92, 7020000.0, 1.8, 2.2, 1, 'ana', '')",
)
"""Rows of a plant as the first release wrote them."""


@pytest.fixture
def empty(empty_database_url):
    """A database without any table."""
    database = Database(empty_database_url)
    yield database
    database.close()


def tables(database):
    """Names of the tables there are, besides the one that notes the revision."""
    return set(inspect(database.engine).get_table_names()) - {"alembic_version"}


def shape(database):
    """Every table with its columns, as the database itself describes them."""
    inspector = inspect(database.engine)
    return {
        table: {
            column["name"]: (str(column["type"]), column["nullable"])
            for column in inspector.get_columns(table)
        }
        for table in tables(database)
    }


def test_the_revisions_are_one_line_numbered_from_the_first():
    assert REVISIONS == [f"{number:04}" for number in range(1, len(REVISIONS) + 1)]


def test_a_migration_is_named_by_its_number():
    for path in (MIGRATIONS / "versions").glob("*.py"):
        assert path.name[:5] in {f"{revision}_" for revision in REVISIONS}


def test_no_migration_leans_on_the_program_of_today():
    for path in (MIGRATIONS / "versions").glob("*.py"):
        imported = {
            name.split(".")[0]
            for node in ast.walk(ast.parse(path.read_text(encoding="utf-8")))
            for name in (
                [alias.name for alias in node.names]
                if isinstance(node, ast.Import)
                else [node.module or ""]
                if isinstance(node, ast.ImportFrom)
                else []
            )
        }
        assert "server" not in imported, path.name


def test_the_newest_tables_are_those_of_the_program(empty):
    empty.upgrade()

    with empty.engine.connect() as connection:
        context = MigrationContext.configure(connection, opts={"compare_type": True})
        assert compare_metadata(context, METADATA) == []


def test_the_newest_tables_lie_as_the_program_wants_them(tmp_path):
    climbed = Database(f"sqlite:///{tmp_path / 'climbed.db'}")
    climbed.upgrade()
    made = Database(f"sqlite:///{tmp_path / 'made.db'}")
    METADATA.create_all(made.engine)

    def lie(database):
        with database.engine.connect() as connection:
            rows = connection.exec_driver_sql("PRAGMA table_list").all()
        return {(row.name, row.wr, row.strict) for row in rows if row.name in METADATA.tables}

    assert lie(climbed) == lie(made)
    climbed.close()
    made.close()


@pytest.mark.parametrize("revision", REVISIONS)
def test_every_step_can_be_taken_back(empty, revision):
    empty.upgrade(revision)
    before = shape(empty)

    empty.downgrade("-1")
    empty.upgrade(revision)

    assert shape(empty) == before


def test_stepping_all_the_way_down_leaves_nothing(empty):
    empty.upgrade()
    assert tables(empty)

    empty.downgrade("base")

    assert tables(empty) == set()


def test_climbing_twice_changes_nothing(empty):
    empty.upgrade()
    before = shape(empty)

    empty.upgrade()

    assert shape(empty) == before


def test_an_old_plant_keeps_its_rows_through_every_later_step(empty):
    empty.upgrade("0001")
    with empty.engine.begin() as connection:
        for statement in OLD_PLANT:
            connection.exec_driver_sql(statement)

    empty.upgrade()

    with empty.engine.connect() as connection:
        terms = connection.exec_driver_sql(
            "SELECT cells, rated_amps, low_volts, electrode_gap_m FROM section_terms"
        ).all()
        prices = connection.exec_driver_sql(
            "SELECT energy_price_per_kwh, standard_potentials FROM house_terms"
        ).all()
    assert [tuple(row) for row in terms] == [(48, 36_000.0, 1.8, None)]
    assert [tuple(row) for row in prices] == [(0.09, None)]
