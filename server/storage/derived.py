"""What is worked out of the records and can be rebuilt from them at any time.

Charge as prefix sums, energy and readings summed up by hour, shift and day, what each lot's
cathodes received, and the list of what has yet to be brought up to date.
"""

from sqlalchemy import ForeignKey, Index
from sqlalchemy.orm import Mapped, mapped_column

from server.storage.base import CLUSTERED, STRICT, Base, Bytes, Real, Small, Whole, Words


class ChargeDay(Base):
    """Charge of a UTC day, and before it since the record began."""

    __tablename__ = "charge_day"
    __table_args__ = (CLUSTERED,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    day_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    total_c: Mapped[float] = mapped_column(Real)
    estimated_c: Mapped[float] = mapped_column(Real)
    before_c: Mapped[float] = mapped_column(Real)
    estimated_before_c: Mapped[float] = mapped_column(Real)


class ChargeKnot(Base):
    """From this moment to the next knot the section carried a constant current.

    Every day of the record has a knot at its start. The charge since the day began is kept with
    each knot, so that the charge up to any moment takes one look-up here and one in the days.
    """

    __tablename__ = "charge_knot"
    __table_args__ = (CLUSTERED,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    at_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    amps: Mapped[float] = mapped_column(Real)
    basis: Mapped[int] = mapped_column(Small)
    """0 measured, 1 estimated over a gap, 2 not recorded."""
    since_day_c: Mapped[float] = mapped_column(Real)
    estimated_since_day_c: Mapped[float] = mapped_column(Real)


class BypassedCell(Base):
    """A time during which a cell received nothing while its section may have run."""

    __tablename__ = "bypassed_cell"
    __table_args__ = (CLUSTERED,)

    cell_id: Mapped[int] = mapped_column(Whole, ForeignKey("cell.id"), primary_key=True)
    from_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    to_ms: Mapped[int] = mapped_column(Whole)


class EnergyDay(Base):
    """A section's charge and energy over a UTC day, whole, by hour and by cell.

    Not clustered by its key: SQLite would give each packed row a page of its own.
    """

    __tablename__ = "energy_day"
    __table_args__ = (STRICT,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    day_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    charge_c: Mapped[float] = mapped_column(Real)
    cell_charge_c: Mapped[float] = mapped_column(Real)
    """Summed over the cells in service."""
    measured_charge_c: Mapped[float] = mapped_column(Real)
    """The part of the cells' charge whose voltage was read."""
    energy_j: Mapped[float | None] = mapped_column(Real)
    """Summed over the cells in service; None where no voltage was read."""
    hours: Mapped[bytes] = mapped_column(Bytes)
    """float64, 24 x (charge_c, cell_charge_c, measured_charge_c, energy_j)."""
    cells: Mapped[bytes] = mapped_column(Bytes)
    """float64, cells x (charge_c, energy_j), up to the last cell that received charge."""


class Summary(Base):
    """What the readings of an hour, a shift or a day were, cell by cell."""

    __tablename__ = "summary"
    __table_args__ = (STRICT,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    level: Mapped[str] = mapped_column(Words, primary_key=True)
    """hour, shift or day."""
    start_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    end_ms: Mapped[int] = mapped_column(Whole)
    name: Mapped[str] = mapped_column(Words)
    """The shift's name; empty for hours and days."""
    cells_read: Mapped[int] = mapped_column(Whole)
    readings: Mapped[int] = mapped_column(Whole)
    sum_uv: Mapped[int] = mapped_column(Whole)
    cells: Mapped[bytes] = mapped_column(Bytes)
    """Packed by server/accounts/summaries.py."""


class LatestReading(Base):
    """The newest reading of each cell that counts."""

    __tablename__ = "latest_reading"
    __table_args__ = (CLUSTERED,)

    cell_id: Mapped[int] = mapped_column(Whole, ForeignKey("cell.id"), primary_key=True)
    at_ms: Mapped[int] = mapped_column(Whole)
    microvolts: Mapped[int] = mapped_column(Whole)


class Crop(Base):
    """One cell's share of a lot: when its cathodes grew and what charge they received."""

    __tablename__ = "crop"
    __table_args__ = (
        Index("ix_crop_section_id_pulled_ms", "section_id", "pulled_ms"),
        Index("ix_crop_lot_id", "lot_id"),
        CLUSTERED,
    )

    cell_id: Mapped[int] = mapped_column(Whole, ForeignKey("cell.id"), primary_key=True)
    pulled_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    lot_id: Mapped[int] = mapped_column(Whole, ForeignKey("lot.id"), primary_key=True)
    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"))
    started_ms: Mapped[int] = mapped_column(Whole)
    cathodes: Mapped[int] = mapped_column(Whole)
    share: Mapped[float] = mapped_column(Real)
    """Cathodes of the crop over cathodes of the cell."""
    charge_c: Mapped[float] = mapped_column(Real)
    """What the crop's cathodes received."""
    estimated_c: Mapped[float] = mapped_column(Real)
    metal_kg: Mapped[float] = mapped_column(Real)
    """The cell's part of the lot's metal: by weight for one cell, by charge for several."""
    is_shared: Mapped[int] = mapped_column(Small)
    """1 where the lot held several cells' crops."""


class LotFigure(Base):
    """What a lot made, against what the charge of its own cathodes could have made."""

    __tablename__ = "lot_figure"
    __table_args__ = (CLUSTERED,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    pulled_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    lot_id: Mapped[int] = mapped_column(Whole, ForeignKey("lot.id"), primary_key=True)
    metal_kg: Mapped[float] = mapped_column(Real)
    net_kg: Mapped[float] = mapped_column(Real)
    charge_c: Mapped[float] = mapped_column(Real)
    estimated_c: Mapped[float] = mapped_column(Real)
    cathodes: Mapped[int] = mapped_column(Whole)


class Stale(Base):
    """A stretch of a section's time whose figures have yet to be brought up to date."""

    __tablename__ = "stale"
    __table_args__ = (Index("ix_stale_section_id_from_ms", "section_id", "from_ms"), STRICT)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"))
    kind: Mapped[str] = mapped_column(Words)
    """charge, readings, lots, energy or flags."""
    from_ms: Mapped[int] = mapped_column(Whole)
    to_ms: Mapped[int] = mapped_column(Whole)
