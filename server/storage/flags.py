"""What the watch says of a cell, with the time it was raised and the time it ended."""

from sqlalchemy import ForeignKey, Index
from sqlalchemy.orm import Mapped, mapped_column

from server.storage.base import CLUSTERED, Base, Real, Whole, Words


class Flag(Base):
    """One flag of one cell; derived from the readings and rebuilt from them."""

    __tablename__ = "flag"
    __table_args__ = (
        Index("ix_flag_section_id_raised_ms", "section_id", "raised_ms"),
        Index("ix_flag_section_id_ended_ms", "section_id", "ended_ms"),
        CLUSTERED,
    )

    cell_id: Mapped[int] = mapped_column(Whole, ForeignKey("cell.id"), primary_key=True)
    kind: Mapped[str] = mapped_column(Words, primary_key=True)
    raised_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"))
    tier: Mapped[str] = mapped_column(Words)
    """look or act."""
    ended_ms: Mapped[int | None] = mapped_column(Whole)
    raised_by_ms: Mapped[int] = mapped_column(Whole)
    """Moment of the reading that raised it."""
    volts: Mapped[float | None] = mapped_column(Real)
    expected_volts: Mapped[float | None] = mapped_column(Real)
    deviation_v: Mapped[float | None] = mapped_column(Real)
    short_amps: Mapped[float | None] = mapped_column(Real)
    u_short_amps: Mapped[float | None] = mapped_column(Real)
    lost_kg_per_day: Mapped[float | None] = mapped_column(Real)
    lost_value_per_day: Mapped[float | None] = mapped_column(Real)
    evidence: Mapped[str] = mapped_column(Words)
    probability: Mapped[float | None] = mapped_column(Real)
    """Of a short; None for what is no short."""
