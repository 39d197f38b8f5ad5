"""What became of a delivery and of each record in it, and what a file would bring."""

from dataclasses import dataclass
from typing import Literal

Status = Literal["stored", "duplicate", "held", "suspect"]


@dataclass(frozen=True, slots=True)
class RecordResult:
    """What became of one record that was sent."""

    id: str | None
    """The sender's own id, where there is one."""
    status: Status
    reason: str | None


@dataclass(frozen=True, slots=True)
class DeliveryResult:
    """What became of the rows of one sheet."""

    delivery_id: int
    sheet: str
    worksheet: str | None
    dialect: str
    """How the sheet was read, as a sentence."""
    rows: int
    stored: int
    """Rows that went in, the doubted ones among them."""
    duplicates: int
    held: int
    """Rows that are held, those that were held before among them."""
    suspect: int
    unknown_columns: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class FileResult:
    """What became of a file."""

    name: str
    deliveries: tuple[DeliveryResult, ...]
    notes: tuple[str, ...] = ()
    """A sentence for each worksheet that was left unread."""

    @property
    def rows(self) -> int:
        """Rows of all its sheets."""
        return sum(delivery.rows for delivery in self.deliveries)

    @property
    def stored(self) -> int:
        """Rows that went in, the doubted ones among them."""
        return sum(delivery.stored for delivery in self.deliveries)

    @property
    def duplicates(self) -> int:
        """Rows that were in the books already."""
        return sum(delivery.duplicates for delivery in self.deliveries)

    @property
    def held(self) -> int:
        """Rows that are held."""
        return sum(delivery.held for delivery in self.deliveries)

    @property
    def suspect(self) -> int:
        """Readings that went in and are not believed."""
        return sum(delivery.suspect for delivery in self.deliveries)


@dataclass(frozen=True, slots=True)
class HeldPreview:
    """A row that would be held."""

    line: int
    column: str
    found: str
    expected: str
    reason: str
    raw: str


@dataclass(frozen=True, slots=True)
class SuspectPreview:
    """A reading that would be stored and not believed."""

    line: int
    section: str
    cell: int
    at_ms: int
    found: str
    expected: str
    suggested: str | None
    reason: str


@dataclass(frozen=True, slots=True)
class SheetPreview:
    """What one sheet would bring."""

    sheet: str
    worksheet: str | None
    dialect: str
    rows: int
    new: int
    duplicates: int
    held: int
    suspect: int
    first_ms: int | None
    """Earliest moment in the rows that can be read."""
    last_ms: int | None
    first_held: tuple[HeldPreview, ...] = ()
    first_suspect: tuple[SuspectPreview, ...] = ()
    unknown_columns: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class FilePreview:
    """What a file would bring; nothing of it is stored."""

    name: str
    sheets: tuple[SheetPreview, ...]
    notes: tuple[str, ...] = ()

    @property
    def rows(self) -> int:
        """Rows of all its sheets."""
        return sum(sheet.rows for sheet in self.sheets)

    @property
    def new(self) -> int:
        """Rows that would go in, the doubted ones among them."""
        return sum(sheet.new for sheet in self.sheets)

    @property
    def duplicates(self) -> int:
        """Rows that are in the books already."""
        return sum(sheet.duplicates for sheet in self.sheets)

    @property
    def held(self) -> int:
        """Rows that would be held."""
        return sum(sheet.held for sheet in self.sheets)

    @property
    def suspect(self) -> int:
        """Readings that would not be believed."""
        return sum(sheet.suspect for sheet in self.sheets)
