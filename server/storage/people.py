"""Users, their roles, and the tokens of programs (a user is never called an account)."""

from sqlalchemy import UniqueConstraint, select
from sqlalchemy.orm import Mapped, Session, mapped_column

from server.storage.base import STRICT, Base, Small, Whole, Words
from server.storage.errors import Conflict, NotFound

SUPERINTENDENT = "superintendent"
ROLES = ("reader", "operator", "planner", SUPERINTENDENT)
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


class LastSuperintendent(Conflict):
    """Nobody would be left who may change people, set-up and corrections."""

    def __init__(self, name: str) -> None:
        super().__init__(
            f"{name} is the last superintendent who can sign in; give somebody else that role first"
        )


def people(session: Session) -> list[Person]:
    """Everyone: those who can sign in first, by name."""
    return sorted(session.scalars(select(Person)), key=lambda p: (not p.is_active, _order(p.name)))


def person_with_id(session: Session, person_id: int) -> Person:
    """The person with this id."""
    person = session.get(Person, person_id)
    if person is None:
        raise NotFound("person", person_id)
    return person


def add_person(
    session: Session, name: str, role: str, password_hash: str, now_ms: int, who: str
) -> Person:
    """Write down somebody new, who can sign in at once."""
    if person_named(session, name) is not None:
        raise Conflict(f"there is somebody named {name} already")
    person = Person(name=name, role=role, password_hash=password_hash, made_ms=now_ms, made_by=who)
    session.add(person)
    session.flush()
    return person


def change_role(session: Session, person: Person, role: str) -> None:
    """Give a person another role; it holds from their next request."""
    if role != SUPERINTENDENT:
        _leave_a_superintendent(session, person)
    person.role = role


def keep_password(person: Person, password_hash: str) -> None:
    """Keep a new password of a person and end every session they have."""
    person.password_hash = password_hash
    person.session_epoch += 1


def disable(session: Session, person: Person) -> None:
    """Let a person sign in no more and end every session they have; their records keep the name."""
    _leave_a_superintendent(session, person)
    person.is_active = 0
    person.session_epoch += 1


def enable(person: Person) -> None:
    """Let a person sign in again."""
    person.is_active = 1


def tokens(session: Session) -> list[Token]:
    """Every token: those that are good first, by name."""
    return sorted(
        session.scalars(select(Token)), key=lambda t: (t.revoked_ms is not None, _order(t.name))
    )


def add_token(
    session: Session, name: str, role: str, token_hash: str, now_ms: int, who: str
) -> Token:
    """Write down a program's new token, of which the hash is kept."""
    if any(_order(token.name) == _order(name) for token in session.scalars(select(Token))):
        raise Conflict(f"there is a token named {name} already")
    token = Token(name=name, role=role, token_hash=token_hash, made_ms=now_ms, made_by=who)
    session.add(token)
    session.flush()
    return token


def revoke_token(session: Session, token_id: int, now_ms: int) -> Token:
    """Make a token good for nothing, for ever."""
    token = session.get(Token, token_id)
    if token is None:
        raise NotFound("token", token_id)
    if token.revoked_ms is None:
        token.revoked_ms = now_ms
    return token


def _leave_a_superintendent(session: Session, person: Person) -> None:
    """Refuse to take away the last superintendent who can sign in."""
    if person.role != SUPERINTENDENT or not person.is_active:
        return
    others = select(Person.id).where(
        Person.role == SUPERINTENDENT, Person.is_active == 1, Person.id != person.id
    )
    if session.scalar(others.limit(1)) is None:
        raise LastSuperintendent(person.name)


def _order(name: str) -> str:
    return name.casefold()
