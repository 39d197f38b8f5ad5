"""Rows in bulk between the database driver and NumPy, without an object for each row."""

from collections.abc import Iterable, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session


def _cursor(session: Session, sql: str) -> tuple[Any, str]:
    connection = session.connection()
    if connection.dialect.name != "sqlite":
        sql = sql.replace("%", "%%").replace("?", "%s")
    return connection.connection.cursor(), sql


def fetch_rows(session: Session, sql: str, parameters: Sequence[Any] = ()) -> list[tuple[Any, ...]]:
    """Rows of a query whose parameters are written `?`, as plain tuples."""
    cursor, sql = _cursor(session, sql)
    try:
        cursor.execute(sql, parameters)
        return list(cursor.fetchall())
    finally:
        cursor.close()


def fetch_columns(
    session: Session, sql: str, parameters: Sequence[Any], columns: Sequence[tuple[str, str]]
) -> NDArray[np.void]:
    """Rows of a query as one structured array; `columns` gives each one's name and NumPy type."""
    cursor, sql = _cursor(session, sql)
    try:
        cursor.execute(sql, parameters)
        return np.fromiter(cursor, dtype=list(columns))
    finally:
        cursor.close()


def fetch_each(
    session: Session,
    sql: str,
    parameters: Iterable[Sequence[Any]],
    columns: Sequence[tuple[str, str]],
) -> list[NDArray[np.void]]:
    """Rows of one query for each set of parameters; quicker than one long query with a key."""
    cursor, sql = _cursor(session, sql)
    dtype = np.dtype(list(columns))
    try:
        found = []
        for each in parameters:
            cursor.execute(sql, each)
            found.append(np.fromiter(cursor, dtype=dtype))
        return found
    finally:
        cursor.close()


def insert_rows(session: Session, sql: str, rows: Iterable[Sequence[Any]]) -> int:
    """Insert many rows with one statement; answers how many went in."""
    cursor, sql = _cursor(session, sql)
    try:
        cursor.executemany(sql, rows)
        return int(cursor.rowcount)
    finally:
        cursor.close()


def execute(session: Session, sql: str, parameters: Sequence[Any] = ()) -> int:
    """Run one statement whose parameters are written `?`; answers how many rows it touched."""
    cursor, sql = _cursor(session, sql)
    try:
        cursor.execute(sql, parameters)
        return int(cursor.rowcount)
    finally:
        cursor.close()


def marks(count: int) -> str:
    """Question marks for a list of that many values."""
    return ",".join("?" * count)
