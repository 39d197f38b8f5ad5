"""Current, counters, lots, outages, assays and finds, as they were recorded.

None of these rows is ever changed or deleted. A correction is a new row with the next revision,
whose delivery says who, when and why; `is_void` withdraws a record altogether. What figures read
is the highest revision.
"""

from sqlalchemy import ForeignKey, Index, UniqueConstraint
from sqlalchemy.orm import Mapped, mapped_column

from server.storage.base import CLUSTERED, STRICT, Base, Real, Small, Whole, Words


class CurrentSample(Base):
    """The section's current at a moment; it holds until the next sample."""

    __tablename__ = "current_sample"
    __table_args__ = (CLUSTERED,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    at_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    revision: Mapped[int] = mapped_column(Small, primary_key=True, autoincrement=False)
    amps: Mapped[float | None] = mapped_column(Real)
    """None where the sample is withdrawn."""
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))


class CounterSample(Base):
    """What the rectifier's ampere-hour counter showed at a moment, in coulombs."""

    __tablename__ = "counter_sample"
    __table_args__ = (CLUSTERED,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    at_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    revision: Mapped[int] = mapped_column(Small, primary_key=True, autoincrement=False)
    counter_c: Mapped[float | None] = mapped_column(Real)
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))


class Lot(Base):
    """What the scale weighed: the crops of one or several cells."""

    __tablename__ = "lot"
    __table_args__ = (
        UniqueConstraint("section_id", "name", "revision"),
        Index("ix_lot_section_id_pulled_ms", "section_id", "pulled_ms"),
        STRICT,
    )

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"))
    name: Mapped[str] = mapped_column(Words)
    revision: Mapped[int] = mapped_column(Small)
    is_void: Mapped[int] = mapped_column(Small, default=0)
    cells: Mapped[str] = mapped_column(Words)
    """Cell numbers in short, '1-12;15'."""
    weighed_ms: Mapped[int] = mapped_column(Whole)
    pulled_ms: Mapped[int] = mapped_column(Whole)
    started_ms: Mapped[int | None] = mapped_column(Whole)
    """None: hung when the former ones were pulled."""
    cathodes_per_cell: Mapped[int | None] = mapped_column(Whole)
    """None: all of the cell's cathodes."""
    net_kg: Mapped[float] = mapped_column(Real)
    starter_kg: Mapped[float] = mapped_column(Real)
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))


class Outage(Base):
    """A section off, or cells bypassed, for a time."""

    __tablename__ = "outage"
    __table_args__ = (
        UniqueConstraint("section_id", "cells", "from_ms", "revision"),
        Index("ix_outage_section_id_from_ms", "section_id", "from_ms"),
        STRICT,
    )

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"))
    cells: Mapped[str] = mapped_column(Words)
    """Cell numbers in short; empty for the whole section."""
    from_ms: Mapped[int] = mapped_column(Whole)
    to_ms: Mapped[int | None] = mapped_column(Whole)
    """None while it lasts."""
    state: Mapped[str] = mapped_column(Words)
    """off or bypassed."""
    revision: Mapped[int] = mapped_column(Small)
    is_void: Mapped[int] = mapped_column(Small, default=0)
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))


class ElectrolyteSample(Base):
    """An assay of the feed or the spent electrolyte, as the sheet gives it."""

    __tablename__ = "electrolyte_sample"
    __table_args__ = (CLUSTERED,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    stream: Mapped[str] = mapped_column(Words, primary_key=True)
    at_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    revision: Mapped[int] = mapped_column(Small, primary_key=True, autoincrement=False)
    is_void: Mapped[int] = mapped_column(Small, default=0)
    metal_g_l: Mapped[float | None] = mapped_column(Real)
    acid_g_l: Mapped[float | None] = mapped_column(Real)
    iron_g_l: Mapped[float | None] = mapped_column(Real)
    ferric_g_l: Mapped[float | None] = mapped_column(Real)
    chloride_mg_l: Mapped[float | None] = mapped_column(Real)
    nickel_g_l: Mapped[float | None] = mapped_column(Real)
    arsenic_g_l: Mapped[float | None] = mapped_column(Real)
    antimony_mg_l: Mapped[float | None] = mapped_column(Real)
    bismuth_mg_l: Mapped[float | None] = mapped_column(Real)
    cobalt_mg_l: Mapped[float | None] = mapped_column(Real)
    manganese_g_l: Mapped[float | None] = mapped_column(Real)
    temperature_degc: Mapped[float | None] = mapped_column(Real)
    flow_m3_h: Mapped[float | None] = mapped_column(Real)
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))


class Find(Base):
    """What somebody found at a cell, on which cathode, and did about it."""

    __tablename__ = "find"
    __table_args__ = (
        UniqueConstraint("cell_id", "at_ms", "cathode", "revision"),
        STRICT,
    )

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"))
    cell_id: Mapped[int] = mapped_column(Whole, ForeignKey("cell.id"))
    at_ms: Mapped[int] = mapped_column(Whole)
    cathode: Mapped[int] = mapped_column(Whole)
    """0 where no cathode is named."""
    found: Mapped[str] = mapped_column(Words)
    """short, contact, anode, insulator or nothing."""
    action: Mapped[str] = mapped_column(Words)
    revision: Mapped[int] = mapped_column(Small)
    is_void: Mapped[int] = mapped_column(Small, default=0)
    delivery_id: Mapped[int] = mapped_column(Whole, ForeignKey("delivery.id"))
