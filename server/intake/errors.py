"""What can be wrong with a file or with one row of it, each with a sentence to act on."""

from collections.abc import Mapping
from dataclasses import dataclass, field

from server.intake.reasons import FILE_REASONS, ROW_REASONS

SHOWN_CHARS = 60
"""A value longer than this is shortened in a sentence; the row itself is kept word for word."""


def shown(value: str) -> str:
    """Give a value as a sentence may quote it: on one line, and shortened when it is long."""
    flat = " ".join(value.split())
    return flat if len(flat) <= SHOWN_CHARS else f"{flat[: SHOWN_CHARS - 1]}…"


class IntakeError(Exception):
    """Any refusal by the intake, and the base of the others."""


class FileRefused(IntakeError):
    """A file that cannot be read as a sheet at all; nothing of it is to be stored.

    It is mostly raised on opening. A fault deep inside a long file, such as a byte
    that is not UTF-8, is only met while its rows are read, so whoever stores rows as
    they come has to take them back when this is raised.
    """

    def __init__(
        self,
        code: str,
        *,
        file: str,
        found: str = "",
        expected: str = "",
        line: int | None = None,
        column: str | None = None,
    ) -> None:
        """Keep where it happened, what was found there and what was expected instead."""
        super().__init__(code, file, found, expected, line, column)
        self.code = code
        self.file = file
        self.found = found
        self.expected = expected
        self.line = line
        self.column = column

    @property
    def reason(self) -> str:
        """The sentence without the name of the file."""
        return FILE_REASONS[self.code].format(
            found=shown(self.found), expected=self.expected, line=self.line, column=self.column
        )

    def __reduce__(self) -> tuple[object, ...]:
        """Let the error travel between processes."""
        return _refused_again, (
            self.code,
            self.file,
            self.found,
            self.expected,
            self.line,
            self.column,
        )

    def __str__(self) -> str:
        """Say file, line and reason in one line."""
        where = self.file if self.line is None else f"{self.file}, line {self.line}"
        return f"{where}: {self.reason}"


def _refused_again(
    code: str, file: str, found: str, expected: str, line: int | None, column: str | None
) -> FileRefused:
    return FileRefused(code, file=file, found=found, expected=expected, line=line, column=column)


@dataclass(frozen=True, slots=True)
class RowError:
    """One row that cannot be read, with everything needed to hold it and to mend it later.

    A row with several faults gives one of these: `code`, `column`, `found` and `expected`
    are of the first fault in the order of the columns, `reason` tells them all.
    """

    file: str
    line: int
    column: str | None
    code: str
    found: str
    expected: str
    reason: str
    raw: str
    fields: Mapping[str, str] = field(default_factory=dict)
    """Text by column, as far as the row could be taken apart."""


def row_reason(code: str, *, column: str | None, found: str, expected: str) -> str:
    """Give the English sentence of one fault."""
    return ROW_REASONS[code].format(column=column, found=shown(found), expected=expected)


def row_error(
    code: str,
    *,
    file: str,
    line: int,
    raw: str,
    column: str | None = None,
    found: str = "",
    expected: str = "",
    fields: Mapping[str, str] | None = None,
) -> RowError:
    """Make the error of a row that has one fault."""
    return RowError(
        file=file,
        line=line,
        column=column,
        code=code,
        found=found,
        expected=expected,
        reason=row_reason(code, column=column, found=found, expected=expected),
        raw=raw,
        fields=dict(fields or {}),
    )


@dataclass(frozen=True, slots=True)
class Fault:
    """What is wrong with one value, before it is known which row and file it stands in."""

    code: str
    found: str
    expected: str


class CellsWrong(IntakeError):
    """A list of cells such as "1-12;15" that cannot be read."""

    def __init__(self, fault: Fault) -> None:
        """Keep the fault, which names the offending piece of the list."""
        super().__init__(fault)
        self.fault = fault

    def __str__(self) -> str:
        """Say what is wrong in one line."""
        return row_reason(
            self.fault.code,
            column="cells",
            found=self.fault.found,
            expected=self.fault.expected,
        )
