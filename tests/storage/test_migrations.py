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
