"""Users, their roles, and the tokens of programs (a user is never called an account)."""

from sqlalchemy import UniqueConstraint, select
from sqlalchemy.orm import Mapped, Session, mapped_column

from server.storage.base import STRICT, Base, Small, Whole, Words

ROLES = ("reader", "operator", "planner", "superintendent")
"""Every role, the least first. A reader writes nothing; each later one may do more."""


class Person(Base):
    """Someone who signs in."""

    __tablename__ = "person"
    __table_args__ = (UniqueConstraint("name"), STRICT)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    name: Mapped[str] = mapped_column(Words)
    role: Mapped[str] = mapped_column(Words)
    password_hash: Mapped[str] = mapped_column(Words)
    session_epoch: Mapped[int] = mapped_column(Whole, default=0)
    """Raised to end every session that is signed in."""
    is_active: Mapped[int] = mapped_column(Small, default=1)
    made_ms: Mapped[int] = mapped_column(Whole)
    made_by: Mapped[str] = mapped_column(Words)


class Token(Base):
    """A program's key to the API; only its hash is kept."""

    __tablename__ = "token"
    __table_args__ = (UniqueConstraint("name"), UniqueConstraint("token_hash"), STRICT)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    name: Mapped[str] = mapped_column(Words)
    role: Mapped[str] = mapped_column(Words)
    token_hash: Mapped[str] = mapped_column(Words)
    """SHA-256 of the token, which itself is 32 random bytes."""
    made_ms: Mapped[int] = mapped_column(Whole)
    made_by: Mapped[str] = mapped_column(Words)
    revoked_ms: Mapped[int | None] = mapped_column(Whole)


def person_named(session: Session, name: str) -> Person | None:
    """The person of this name, whatever the case of its letters."""
    for person in session.scalars(select(Person)):
        if person.name.casefold() == name.casefold():
            return person
    return None


def token_with_hash(session: Session, token_hash: str) -> Token | None:
    """The token that is still good and has this hash."""
    return session.scalar(
        select(Token).where(Token.token_hash == token_hash, Token.revoked_ms.is_(None))
    )
