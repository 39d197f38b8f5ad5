"""Tankhouse, sections and cells: what they are, and since when.

Whatever can change without being another section (targets, cathodes, number of cells, prices) is
kept as terms with the moment from which they hold; the past keeps the terms it was run under.
"""

from dataclasses import dataclass

from sqlalchemy import ForeignKey, UniqueConstraint, select
from sqlalchemy.orm import Mapped, Session, mapped_column

from server.storage.base import CLUSTERED, STRICT, Base, Real, Small, Whole, Words
from server.storage.errors import NoPlant, NotFound

FROM_THE_START_MS = 0
"""The moment from which the first terms of anything hold."""


class Tankhouse(Base):
    """The building and its books; a single row."""

    __tablename__ = "tankhouse"
    __table_args__ = (STRICT,)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    name: Mapped[str] = mapped_column(Words)
    time_zone: Mapped[str] = mapped_column(Words)
    currency: Mapped[str] = mapped_column(Words)
    signing_key: Mapped[str] = mapped_column(Words)
    made_ms: Mapped[int] = mapped_column(Whole)


class HouseTerms(Base):
    """What holds for the whole house from a moment on: the price of energy and the shifts.

    `standard_potentials` is the key of the table of standard potentials that the house works
    with; None where it works with the program's own choice.
    """

    __tablename__ = "house_terms"
    __table_args__ = (STRICT,)

    from_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    energy_price_per_kwh: Mapped[float] = mapped_column(Real)
    standard_potentials: Mapped[str | None] = mapped_column(Words)
    changed_ms: Mapped[int] = mapped_column(Whole)
    changed_by: Mapped[str] = mapped_column(Words)
    why: Mapped[str] = mapped_column(Words)


class Shift(Base):
    """A shift's name and when it starts, minutes after local midnight."""

    __tablename__ = "shift"
    __table_args__ = (CLUSTERED,)

    from_ms: Mapped[int] = mapped_column(
        Whole, ForeignKey("house_terms.from_ms"), primary_key=True, autoincrement=False
    )
    starts_minute: Mapped[int] = mapped_column(Small, primary_key=True, autoincrement=False)
    name: Mapped[str] = mapped_column(Words)


class Section(Base):
    """Cells in one electrical series, fed by one rectifier."""

    __tablename__ = "section"
    __table_args__ = (UniqueConstraint("name"), STRICT)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    name: Mapped[str] = mapped_column(Words)
    process: Mapped[str] = mapped_column(Words)
    metal: Mapped[str] = mapped_column(Words)
    electrons: Mapped[int] = mapped_column(Small)


class SectionTerms(Base):
    """What holds for a section from a moment on; SI units, shares from 0 to 1.

    The plant's own conductivity of the electrolyte is a straight line: `conductivity_s_m` at
    `conductivity_at_k` and no metal or acid, with its changes by the kelvin and by the g/L of
    metal and acid. A value that was measured in the plant's usual solution has no such changes.
    """

    __tablename__ = "section_terms"
    __table_args__ = (CLUSTERED,)

    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"), primary_key=True)
    from_ms: Mapped[int] = mapped_column(Whole, primary_key=True, autoincrement=False)
    cells: Mapped[int] = mapped_column(Whole)
    rows: Mapped[int] = mapped_column(Whole)
    cathodes_per_cell: Mapped[int] = mapped_column(Whole)
    cathode_area_m2: Mapped[float] = mapped_column(Real)
    rated_amps: Mapped[float] = mapped_column(Real)
    metal_value_per_kg: Mapped[float] = mapped_column(Real)
    differential_resistance_ohm: Mapped[float | None] = mapped_column(Real)
    rectifier_efficiency: Mapped[float | None] = mapped_column(Real)
    meter_accuracy_v: Mapped[float] = mapped_column(Real)
    current_accuracy: Mapped[float] = mapped_column(Real)
    scale_accuracy: Mapped[float] = mapped_column(Real)
    walk_order: Mapped[str] = mapped_column(Words)
    bus_volts: Mapped[float | None] = mapped_column(Real)
    electrode_gap_m: Mapped[float | None] = mapped_column(Real)
    conductivity_s_m: Mapped[float | None] = mapped_column(Real)
    conductivity_at_k: Mapped[float | None] = mapped_column(Real)
    conductivity_per_k: Mapped[float | None] = mapped_column(Real)
    conductivity_per_metal_g_l: Mapped[float | None] = mapped_column(Real)
    conductivity_per_acid_g_l: Mapped[float | None] = mapped_column(Real)
    conductivity_accuracy: Mapped[float | None] = mapped_column(Real)
    target_current_efficiency: Mapped[float] = mapped_column(Real)
    target_specific_energy_j_kg: Mapped[float] = mapped_column(Real)
    low_volts: Mapped[float] = mapped_column(Real)
    high_volts: Mapped[float] = mapped_column(Real)
    changed_ms: Mapped[int] = mapped_column(Whole)
    changed_by: Mapped[str] = mapped_column(Words)
    why: Mapped[str] = mapped_column(Words)


class Cell(Base):
    """A place in a section, numbered from 1 along the current's path."""

    __tablename__ = "cell"
    __table_args__ = (UniqueConstraint("section_id", "number"), STRICT)

    id: Mapped[int] = mapped_column(Whole, primary_key=True)
    section_id: Mapped[int] = mapped_column(Whole, ForeignKey("section.id"))
    number: Mapped[int] = mapped_column(Whole)


@dataclass(frozen=True)
class SectionPlan:
    """A section with its terms through time and its cells, as the rest of the house reads it."""

    id: int
    name: str
    process: str
    metal: str
    electrons: int
    terms: tuple[SectionTerms, ...]
    cell_ids: tuple[int, ...]
    """Ids of the cells, in the order of their numbers: the first is cell 1."""

    def terms_at(self, at_ms: int) -> SectionTerms:
        """The terms that hold at a moment."""
        holding = self.terms[0]
        for terms in self.terms:
            if terms.from_ms <= at_ms:
                holding = terms
        return holding

    def cell_id(self, number: int) -> int:
        """Id of the cell with this number."""
        if not 1 <= number <= len(self.cell_ids):
            raise NotFound("cell", number, f"{self.name} has cells 1 to {len(self.cell_ids)}")
        return self.cell_ids[number - 1]

    def number_of(self, cell_id: int) -> int:
        """Number of the cell with this id."""
        return self.cell_ids.index(cell_id) + 1


@dataclass(frozen=True)
class House:
    """The tankhouse as it is set up, read once per request."""

    name: str
    time_zone: str
    currency: str
    terms: tuple[HouseTerms, ...]
    shifts: tuple[tuple[int, tuple[tuple[int, str], ...]], ...]
    """From when, and the (starts_minute, name) of each shift, by start."""
    sections: tuple[SectionPlan, ...]

    def section(self, name: str) -> SectionPlan:
        """The section of this name."""
        for section in self.sections:
            if section.name == name:
                return section
        known = ", ".join(s.name for s in self.sections)
        raise NotFound("section", name, f"the sections are {known}")

    def section_of_id(self, section_id: int) -> SectionPlan:
        """The section with this id."""
        for section in self.sections:
            if section.id == section_id:
                return section
        raise NotFound("section", section_id)

    def terms_at(self, at_ms: int) -> HouseTerms:
        """The house's terms that hold at a moment."""
        holding = self.terms[0]
        for terms in self.terms:
            if terms.from_ms <= at_ms:
                holding = terms
        return holding

    def shifts_at(self, at_ms: int) -> tuple[tuple[int, str], ...]:
        """The shifts, (starts_minute, name) by start, that are worked at a moment."""
        holding = self.shifts[0][1]
        for from_ms, shifts in self.shifts:
            if from_ms <= at_ms:
                holding = shifts
        return holding


def has_plant(session: Session) -> bool:
    """Whether the database holds a tankhouse."""
    return session.scalar(select(Tankhouse.id)) is not None


def tankhouse(session: Session) -> Tankhouse:
    """The row of the tankhouse."""
    row: Tankhouse | None = session.scalar(select(Tankhouse))
    if row is None:
        raise NoPlant
    return row


def house(session: Session) -> House:
    """The tankhouse as it is set up, with all its terms."""
    row = tankhouse(session)
    shifts: dict[int, list[tuple[int, str]]] = {}
    for shift in session.scalars(select(Shift).order_by(Shift.from_ms, Shift.starts_minute)):
        shifts.setdefault(shift.from_ms, []).append((shift.starts_minute, shift.name))
    terms: dict[int, list[SectionTerms]] = {}
    by_from = select(SectionTerms).order_by(SectionTerms.section_id, SectionTerms.from_ms)
    for section_terms in session.scalars(by_from):
        terms.setdefault(section_terms.section_id, []).append(section_terms)
    cells: dict[int, list[int]] = {}
    for section_id, cell_id in session.execute(
        select(Cell.section_id, Cell.id).order_by(Cell.section_id, Cell.number)
    ):
        cells.setdefault(section_id, []).append(cell_id)
    house_terms = tuple(session.scalars(select(HouseTerms).order_by(HouseTerms.from_ms)))
    sections = tuple(
        SectionPlan(
            id=section.id,
            name=section.name,
            process=section.process,
            metal=section.metal,
            electrons=section.electrons,
            terms=tuple(terms[section.id]),
            cell_ids=tuple(cells[section.id]),
        )
        for section in session.scalars(select(Section).order_by(Section.id))
    )
    for loaded in (*house_terms, *(t for s in sections for t in s.terms)):
        session.expunge(loaded)
    return House(
        name=row.name,
        time_zone=row.time_zone,
        currency=row.currency,
        terms=house_terms,
        shifts=tuple((from_ms, tuple(held)) for from_ms, held in sorted(shifts.items())),
        sections=sections,
    )
