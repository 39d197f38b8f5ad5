"""Base class of the tables, names of their constraints, and the column types they share.

Moments are whole milliseconds since 1970-01-01T00:00Z, in columns that end in `_ms`: eight bytes
or less in every database, no zone to lose, and the same number in arrays.
"""

from typing import Any

from sqlalchemy import BigInteger, Double, LargeBinary, MetaData, SmallInteger, Text
from sqlalchemy.dialects import sqlite
from sqlalchemy.orm import DeclarativeBase

Whole = BigInteger().with_variant(sqlite.INTEGER(), "sqlite")
"""A whole number or a moment."""

Small = SmallInteger().with_variant(sqlite.INTEGER(), "sqlite")
"""A small whole number: a code, a revision, yes or no."""

Real: Double[float] = Double().with_variant(sqlite.REAL(), "sqlite")
"""A measured quantity in SI units."""

Words = Text()
"""Text of any length."""

Bytes = LargeBinary()
"""Packed numbers."""

STRICT: dict[str, Any] = {"sqlite_strict": True}
"""SQLite refuses a value of the wrong type."""

CLUSTERED: dict[str, Any] = {"sqlite_strict": True, "sqlite_with_rowid": False}
"""Rows lie in the order of their primary key."""


class Base(DeclarativeBase):
    """Every table of the books."""

    metadata = MetaData(
        naming_convention={
            "ix": "ix_%(table_name)s_%(column_0_N_name)s",
            "uq": "uq_%(table_name)s_%(column_0_N_name)s",
            "ck": "ck_%(table_name)s_%(constraint_name)s",
            "fk": "fk_%(table_name)s_%(column_0_N_name)s",
            "pk": "pk_%(table_name)s",
        }
    )
