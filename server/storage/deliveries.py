"""What was taken in, from where, by whom and why; and what is held or doubted."""

from sqlalchemy import ForeignKey, Index
from sqlalchemy.orm import Mapped, mapped_column

from server.storage.base import STRICT, Base, Small, Whole, Words


class Delivery(Base):
    """One file, form or call that brought records: the who, when and why of each of them."""

    __tablename__ = "delivery"
    __table_args__ = (Index("ix_delivery_received_ms", "received_ms"), STRICT)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    sheet: Mapped[str] = mapped_column(Words)
    source: Mapped[str] = mapped_column(Words)
    """Name of the file, or 'form' or 'API'."""
    sender: Mapped[str] = mapped_column(Words)
    received_ms: Mapped[int] = mapped_column(Whole)
    reason: Mapped[str] = mapped_column(Words, default="")
    """Why, where the delivery corrects what was recorded before."""
    sha256: Mapped[str] = mapped_column(Words, default="")
    dialect: Mapped[str] = mapped_column(Words, default="")
    """How the file was read, as a sentence."""
    rows: Mapped[int] = mapped_column(Whole, default=0)
    stored: Mapped[int] = mapped_column(Whole, default=0)
    duplicates: Mapped[int] = mapped_column(Whole, default=0)
    held: Mapped[int] = mapped_column(Whole, default=0)
    suspect: Mapped[int] = mapped_column(Whole, default=0)


class HeldRow(Base):
    """A row that could not be taken, kept word for word until someone mends or drops it."""

    __tablename__ = "held_row"
    __table_args__ = (Index("ix_held_row_state", "state", "id"), STRICT)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))
    sheet: Mapped[str] = mapped_column(Words)
    line: Mapped[int] = mapped_column(Whole)
    column: Mapped[str] = mapped_column("column_name", Words)
    found: Mapped[str] = mapped_column(Words)
    expected: Mapped[str] = mapped_column(Words)
    reason: Mapped[str] = mapped_column(Words)
    fields: Mapped[str] = mapped_column(Words)
    """The row's columns and their text, as JSON."""
    raw: Mapped[str] = mapped_column(Words)
    """The row word for word."""
    state: Mapped[str] = mapped_column(Words, default="held")
    """held, mended or dropped."""
    decided_ms: Mapped[int | None] = mapped_column(Whole)
    decided_by: Mapped[str | None] = mapped_column(Words)
    decided_why: Mapped[str | None] = mapped_column(Words)


class Suspicion(Base):
    """Why a stored reading is not believed, and what came of it."""

    __tablename__ = "suspicion"
    __table_args__ = (
        Index("ix_suspicion_state", "state", "id"),
        Index("ix_suspicion_cell_id_at_ms", "cell_id", "at_ms"),
        STRICT,
    )

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))
    line: Mapped[int] = mapped_column(Whole)
    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"))
    cell_id: Mapped[int] = mapped_column(Whole, ForeignKey("cell.id"))
    at_ms: Mapped[int] = mapped_column(Whole)
    revision: Mapped[int] = mapped_column(Small)
    code: Mapped[str] = mapped_column(Words)
    reason: Mapped[str] = mapped_column(Words)
    found: Mapped[str] = mapped_column(Words)
    expected: Mapped[str] = mapped_column(Words)
    suggested: Mapped[str | None] = mapped_column(Words)
    state: Mapped[str] = mapped_column(Words, default="open")
    """open, confirmed, corrected or withdrawn."""
    decided_ms: Mapped[int | None] = mapped_column(Whole)
    decided_by: Mapped[str | None] = mapped_column(Words)
    decided_why: Mapped[str | None] = mapped_column(Words)


class SentId(Base):
    """The sender's own id of a reading: the same id twice is stored once."""

    __tablename__ = "sent_id"
    __table_args__ = ({"sqlite_strict": True, "sqlite_with_rowid": False},)

    id: Mapped[str] = mapped_column(Words, primary_key=True)
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))
