"""One writer of records at a time, so that what is checked is still true when it is written."""

from sqlalchemy import text
from sqlalchemy.orm import Session

# Any number will do, so long as no other program on the same database uses it.
_TURN = 0x414D504C


def take_turn(session: Session) -> None:
    """Wait until no other transaction takes in records; the turn ends with the transaction.

    SQLite has one writer at a time by itself. PostgreSQL lets two deliveries look a key up,
    find nothing and both write it; this lock puts them one after the other.
    """
    if session.get_bind().dialect.name == "postgresql":
        session.execute(text("SELECT pg_advisory_xact_lock(:turn)"), {"turn": _TURN})
